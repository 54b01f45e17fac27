#include "core/halfspace/rolling_operator.h"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace runband::halfspace {
namespace {

/// K on the offsets 0 <= i < count_x, 0 <= j < count_s: cell 1 x ratio, unit shear modulus, both bodies together.
struct InfluenceTable {
  int count_x, count_s;
  std::vector<double> xx, ss, xs;

  std::size_t at(int i, int j) const {
    return static_cast<std::size_t>(std::abs(j)) * static_cast<std::size_t>(count_x) +
           static_cast<std::size_t>(std::abs(i));
  }
  // K_xx and K_ss are even in both offsets, K_xs odd in both.
  double cross(int i, int j) const { return ((i < 0) != (j < 0) ? -1.0 : 1.0) * xs[at(i, j)]; }
};

/// The antiderivatives at the corners of the cells, differenced twice. Source: Kalker 1990, ch. 3; METHODS: J2 = [y
/// ln(x
/// + r)] = int x^2/r^3, J3 = [x ln(y + r)] = int y^2/r^3, J1 = J2 + J3 = int 1/r, J4 = [-r] = int x y / r^3.
InfluenceTable influence_table(int count_x, int count_s, double ratio, double nu) {
  const auto nx = static_cast<std::size_t>(count_x), ns = static_cast<std::size_t>(count_s);
  std::vector<double> f2((nx + 1) * (ns + 1)), f3(f2.size()), f4(f2.size());
  for (std::size_t j = 0; j <= ns; ++j) {
    const double y = (static_cast<double>(j) - 0.5) * ratio;
    for (std::size_t i = 0; i <= nx; ++i) {
      const double x = static_cast<double>(i) - 0.5, r = std::sqrt(x * x + y * y);
      const std::size_t k = j * (nx + 1) + i;
      f2[k] = y * std::log(x + r);
      f3[k] = x * std::log(y + r);
      f4[k] = -r;
    }
  }
  InfluenceTable table{count_x, count_s, std::vector<double>(nx * ns), std::vector<double>(nx * ns),
                       std::vector<double>(nx * ns)};
  constexpr double kInvPi = std::numbers::inv_pi;
  for (std::size_t j = 0; j < ns; ++j) {
    for (std::size_t i = 0; i < nx; ++i) {
      const auto cell = [&](const std::vector<double>& f) {
        const std::size_t k = j * (nx + 1) + i;
        return (f[k + nx + 2] - f[k + nx + 1]) - (f[k + 1] - f[k]);
      };
      const double j2 = cell(f2), j3 = cell(f3);
      table.xx[j * nx + i] = kInvPi * (j2 + (1.0 - nu) * j3);
      table.ss[j * nx + i] = kInvPi * (j3 + (1.0 - nu) * j2);
      table.xs[j * nx + i] = kInvPi * nu * cell(f4);
    }
  }
  return table;
}

int wrapped(int i, int n) { return i < 0 ? i + n : i; }

}  // namespace

RollingOperator::RollingOperator(const OperatorShape& shape) : shape_(shape) {
  const int nx = shape.nx, ns = shape.ns;
  const auto [here, ahead, ahead2] = shape.stencil;
  const int circulant_px = pair_transform_length(nx), circulant_ps = pair_transform_length(ns);
  const InfluenceTable k = influence_table(std::max(nx + 2, circulant_px / 2 + 1), std::max(ns, circulant_ps / 2 + 1),
                                           shape.ds_over_dx, shape.poisson_ratio);
  influence_own_ = 0.5 * (k.xx[0] + k.ss[0]);
  own_xx_ = here * k.xx[k.at(0, 0)] - ahead * k.xx[k.at(1, 0)] + ahead2 * k.xx[k.at(2, 0)];
  own_ss_ = here * k.ss[k.at(0, 0)] - ahead * k.ss[k.at(1, 0)] + ahead2 * k.ss[k.at(2, 0)];

  // The kernel's transform runs over all rows of the padded rectangle.
  {
    const int px = pair_transform_length(2 * nx - 1), ps = pair_transform_length(2 * ns - 1);
    const auto full = PairTransform<double>::of_size(px, ps, px, ps);
    ComplexBuffer<double> a(full->rectangle_size()), b(full->rectangle_size());
    const double scale = 1.0 / (static_cast<double>(px) * static_cast<double>(ps));
    for (int j = -(ns - 1); j < ns; ++j) {
      for (int i = -(nx - 1); i < nx; ++i) {
        const std::size_t c0 = k.at(i, j), c1 = k.at(i + 1, j), c2 = k.at(i + 2, j);
        const double xx = here * k.xx[c0] - ahead * k.xx[c1] + ahead2 * k.xx[c2];
        const double ss = here * k.ss[c0] - ahead * k.ss[c1] + ahead2 * k.ss[c2];
        const double xs = here * k.cross(i, j) - ahead * k.cross(i + 1, j) + ahead2 * k.cross(i + 2, j);
        const std::size_t to =
            static_cast<std::size_t>(wrapped(j, ps)) * full->stride() + static_cast<std::size_t>(wrapped(i, px));
        a.data()[to] = 0.5 * scale * (xx + ss);
        b.data()[to] = scale * std::complex<double>(0.5 * (xx - ss), xs);
      }
    }
    ComplexBuffer<double> alpha(full->spectrum_size()), beta(full->spectrum_size());
    full->forward(a.data(), alpha.data());
    full->forward(b.data(), beta.data());
    fine_ = {PairTransform<double>::of_size(nx, ns, px, ps), nx, ns, alpha, beta};
    fast_ = {PairTransform<float>::of_size(nx, ns, px, ps), nx, ns, alpha, beta};
  }

  {
    const int px = circulant_px, ps = circulant_ps;
    const auto full = PairTransform<double>::of_size(px, ps, px, ps);
    ComplexBuffer<double> a(full->rectangle_size()), b(full->rectangle_size());
    for (int j = -(ps / 2); j <= ps / 2; ++j) {
      for (int i = -(px / 2); i <= px / 2; ++i) {
        const bool edge = 2 * std::abs(i) == px || 2 * std::abs(j) == ps;  // the odd part vanishes there
        const std::size_t to =
            static_cast<std::size_t>(wrapped(j, ps)) * full->stride() + static_cast<std::size_t>(wrapped(i, px));
        a.data()[to] = {k.xx[k.at(i, j)], k.ss[k.at(i, j)]};
        b.data()[to] = edge ? 0.0 : k.cross(i, j);
      }
    }
    ComplexBuffer<double> both(full->spectrum_size()), cross(full->spectrum_size());
    full->forward(a.data(), both.data());
    full->forward(b.data(), cross.data());
    // All three symbols are real: even kernels, and an odd-odd one. Invert the 2x2 symbol per frequency.
    ComplexBuffer<double> alpha(full->spectrum_size()), beta(full->spectrum_size());
    const double scale = 1.0 / (static_cast<double>(px) * static_cast<double>(ps));
    double floor = 0;
    for (int kx = 0; kx < px; ++kx) {
      for (int ks = 0; ks < ps; ++ks) {
        const auto v =
            both.data()[static_cast<std::size_t>(kx) * full->spectrum_stride() + static_cast<std::size_t>(ks)];
        floor = std::max({floor, v.real(), v.imag()});
      }
    }
    floor *= 1e-6;
    for (int kx = 0; kx < px; ++kx) {
      for (int ks = 0; ks < ps; ++ks) {
        const std::size_t at = static_cast<std::size_t>(kx) * full->spectrum_stride() + static_cast<std::size_t>(ks);
        const double xx = std::max(both.data()[at].real(), floor), ss = std::max(both.data()[at].imag(), floor);
        const double limit = 0.9 * std::sqrt(xx * ss);
        const double xs = std::clamp(cross.data()[at].real(), -limit, limit);
        const double det = scale / (xx * ss - xs * xs);
        alpha.data()[at] = 0.5 * det * (xx + ss);
        beta.data()[at] = det * std::complex<double>(0.5 * (ss - xx), -xs);
      }
    }
    circulant_ = {PairTransform<float>::of_size(nx, ns, px, ps), nx, ns, alpha, beta};
  }
}

}  // namespace runband::halfspace
