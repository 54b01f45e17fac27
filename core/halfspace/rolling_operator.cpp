#include "core/halfspace/rolling_operator.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/halfspace/influence.h"

namespace runband::halfspace {

/// K on offsets of either sign: cell 1 x ratio, unit shear modulus.
struct RollingOperator::Influence {
  TangentialTable table;
  int count_x;

  Influence(int nx, int ns, double ratio, double nu) : table(cerruti_table(nx, ns, 1.0, ratio, nu)), count_x(nx) {
    for (auto* k : {&table.xx, &table.ss, &table.xs}) {
      for (double& v : *k) v *= std::numbers::inv_pi;
    }
  }
  std::size_t at(int i, int j) const {
    return static_cast<std::size_t>(std::abs(j)) * static_cast<std::size_t>(count_x) +
           static_cast<std::size_t>(std::abs(i));
  }
  double xx(int i, int j) const { return table.xx[at(i, j)]; }
  double ss(int i, int j) const { return table.ss[at(i, j)]; }
  double xs(int i, int j) const { return ((i < 0) != (j < 0) ? -1.0 : 1.0) * table.xs[at(i, j)]; }
};

namespace {

int wrapped(int i, int n) { return i < 0 ? i + n : i; }

}  // namespace

RollingOperator::RollingOperator(const OperatorShape& shape) : shape_(shape) {
  const int cx = pair_transform_length(shape.nx), cs = pair_transform_length(shape.ns);
  const Influence k(std::max(shape.nx + 2, cx / 2 + 1), std::max(shape.ns, cs / 2 + 1), shape.ds_over_dx,
                    shape.poisson_ratio);
  const auto [here, ahead, ahead2] = shape.stencil;
  influence_own_ = 0.5 * (k.xx(0, 0) + k.ss(0, 0));
  own_xx_ = here * k.xx(0, 0) - ahead * k.xx(1, 0) + ahead2 * k.xx(2, 0);
  own_ss_ = here * k.ss(0, 0) - ahead * k.ss(1, 0) + ahead2 * k.ss(2, 0);
  make_convolutions(k);
  make_circulant(k, cx, cs);
}

void RollingOperator::make_convolutions(const Influence& k) {
  const int nx = shape_.nx, ns = shape_.ns;
  const auto [here, ahead, ahead2] = shape_.stencil;
  const int px = pair_transform_length(2 * nx - 1), ps = pair_transform_length(2 * ns - 1);
  const auto full = PairTransform<double>::of_size(px, ps, px, ps);  // the kernel fills all rows
  ComplexBuffer<double> a(full->rectangle_size()), b(full->rectangle_size());
  const double scale = 1.0 / (static_cast<double>(px) * static_cast<double>(ps));
  for (int j = 1 - ns; j < ns; ++j) {
    for (int i = 1 - nx; i < nx; ++i) {
      const double xx = here * k.xx(i, j) - ahead * k.xx(i + 1, j) + ahead2 * k.xx(i + 2, j);
      const double ss = here * k.ss(i, j) - ahead * k.ss(i + 1, j) + ahead2 * k.ss(i + 2, j);
      const double xs = here * k.xs(i, j) - ahead * k.xs(i + 1, j) + ahead2 * k.xs(i + 2, j);
      const std::size_t to =
          static_cast<std::size_t>(wrapped(j, ps)) * full->stride() + static_cast<std::size_t>(wrapped(i, px));
      a.data()[to] = 0.5 * scale * (xx + ss);
      b.data()[to] = scale * std::complex<double>(0.5 * (xx - ss), xs);
    }
  }
  ComplexBuffer<double> alpha(full->spectrum_size(), false), beta(full->spectrum_size(), false);
  full->forward(a.data(), alpha.data());
  full->forward(b.data(), beta.data());
  fine_ = {PairTransform<double>::of_size(nx, ns, px, ps), nx, ns, alpha, beta};
  fast_ = {PairTransform<float>::of_size(nx, ns, px, ps), nx, ns, alpha, beta};
}

void RollingOperator::make_circulant(const Influence& k, int px, int ps) {
  const auto full = PairTransform<double>::of_size(px, ps, px, ps);
  ComplexBuffer<double> a(full->rectangle_size()), b(full->rectangle_size());
  for (int j = -(ps / 2); j <= ps / 2; ++j) {
    for (int i = -(px / 2); i <= px / 2; ++i) {
      const bool edge = 2 * std::abs(i) == px || 2 * std::abs(j) == ps;  // the odd part vanishes there
      const std::size_t to =
          static_cast<std::size_t>(wrapped(j, ps)) * full->stride() + static_cast<std::size_t>(wrapped(i, px));
      a.data()[to] = {k.xx(i, j), k.ss(i, j)};
      b.data()[to] = edge ? 0.0 : k.xs(i, j);
    }
  }
  ComplexBuffer<double> both(full->spectrum_size()),
      cross(full->spectrum_size());  // zero: the loops below run over padding
  full->forward(a.data(), both.data());
  full->forward(b.data(), cross.data());
  // All three symbols are real (even kernels, and one odd in both offsets): invert the 2x2 symbol of each frequency.
  // The floor guards against a frequency that the cut-off kernel leaves without stiffness.
  double floor = 0;
  for (std::size_t i = 0; i < both.size(); ++i) floor = std::max({floor, both.data()[i].real(), both.data()[i].imag()});
  floor *= 1e-6;
  const double scale = 1.0 / (static_cast<double>(px) * static_cast<double>(ps));
  ComplexBuffer<double> alpha(full->spectrum_size()), beta(full->spectrum_size());
  for (std::size_t i = 0; i < both.size(); ++i) {
    const double xx = std::max(both.data()[i].real(), floor), ss = std::max(both.data()[i].imag(), floor);
    const double limit = 0.9 * std::sqrt(xx * ss), xs = std::clamp(cross.data()[i].real(), -limit, limit);
    const double factor = scale / (xx * ss - xs * xs);
    alpha.data()[i] = 0.5 * factor * (xx + ss);
    beta.data()[i] = factor * std::complex<double>(0.5 * (ss - xx), -xs);
  }
  circulant_ = {PairTransform<float>::of_size(shape_.nx, shape_.ns, px, ps), shape_.nx, shape_.ns, alpha, beta};
}

}  // namespace runband::halfspace
