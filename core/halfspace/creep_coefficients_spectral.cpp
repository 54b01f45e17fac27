// The linear creep coefficients from first principles.
//
// On the ellipse, with (X, S) = (x/a, s/b) = rho (cos theta, sin theta), write the traction as f / sqrt(1 - rho^2) and
// f as a sum of hemispherical harmonics f_n. The displacement is a back-projection of Radon transforms: the two bodies'
// symbol is 2 (I - nu e e^T) / (G |k|), e = k/|k|, and the Radon transform of f_n / sqrt(1 - rho^2) across direction d
// is pi P_n(sigma) f_n(d), f_n(d) its value on the rim. So
//   u(X) = (1/G) int_0^pi W(psi) sum_n f_n(psi) P_n(X . d_psi) dpsi,   W = L (I - nu e e^T),
//   L = (cos^2 psi / a^2 + sin^2 psi / b^2)^(-1/2),   e = L (cos psi / a, sin psi / b),
// which is block diagonal in n. Source of the theorem: L. A. Galin, Contact Problems in the Theory of Elasticity
// (1953).
#include <Eigen/Dense>
#include <cmath>
#include <complex>
#include <numbers>
#include <vector>

#include "core/base/error.h"
#include "core/halfspace/creep_coefficients.h"

namespace runband::halfspace {
namespace {

constexpr double kPi = std::numbers::pi;

/// Which component of the traction is even in s: the other one is odd.
enum class Even { along_x, along_s };

/// Fourier coefficients of W over psi: int_0^pi W cos(k psi) or sin(k psi), k even.
struct Weights {
  std::vector<double> xx, ss, xs;

  Weights(double a, double b, double nu, int harmonics) {
    const auto n = static_cast<std::size_t>(harmonics + 1);
    xx.assign(n, 0);
    ss.assign(n, 0);
    xs.assign(n, 0);
    const double sharpness = std::max(a / b, b / a);
    const int points = 4 * harmonics + 64 + static_cast<int>(24 * sharpness);  // trapezoidal rule: exponential
    for (int q = 0; q < points; ++q) {
      const double psi = kPi * q / points, c = std::cos(psi), s = std::sin(psi);
      const double l = 1.0 / std::sqrt(c * c / (a * a) + s * s / (b * b)), ex = l * c / a, es = l * s / b,
                   w = l * kPi / points;
      const std::complex<double> turn(std::cos(2 * psi), std::sin(2 * psi));
      std::complex<double> wave(1, 0);
      for (std::size_t k = 0; k < n; k += 2) {
        xx[k] += w * (1 - nu * ex * ex) * wave.real();
        ss[k] += w * (1 - nu * es * es) * wave.real();
        xs[k] -= w * nu * ex * es * wave.imag();
        wave *= turn;
      }
    }
  }
  static double cosine(const std::vector<double>& v, int k) { return v[static_cast<std::size_t>(std::abs(k))]; }
  static double sine(const std::vector<double>& v, int k) {
    return (k < 0 ? -1.0 : 1.0) * v[static_cast<std::size_t>(std::abs(k))];
  }
};

/// One parity of the problem at one degree: unknowns are the rim's cosines of the even component, then the sines of the
/// odd one; m = n, n - 2, ...
class Block {
 public:
  Block(int n, const Weights& w, Even even) : even_(even) {
    for (int m = n; m >= 0; m -= 2) cosines_.push_back(m);
    for (int m = n; m > 0; m -= 2) sines_.push_back(m);
    const auto nc = static_cast<Eigen::Index>(cosines_.size()), size = nc + static_cast<Eigen::Index>(sines_.size());
    Eigen::MatrixXd matrix(size, size);
    const auto& cc = even == Even::along_x ? w.xx : w.ss;
    const auto& dd = even == Even::along_x ? w.ss : w.xx;
    for (Eigen::Index i = 0; i < size; ++i) {
      for (Eigen::Index j = 0; j < size; ++j) {
        const int p = order(i), q = order(j);
        if (i < nc && j < nc) {
          matrix(i, j) = 0.5 * (Weights::cosine(cc, p - q) + Weights::cosine(cc, p + q));
        } else if (i >= nc && j >= nc) {
          matrix(i, j) = 0.5 * (Weights::cosine(dd, p - q) - Weights::cosine(dd, p + q));
        } else {
          const int cosine = i < nc ? p : q, sine = i < nc ? q : p;
          matrix(i, j) = 0.5 * (Weights::sine(w.xs, sine + cosine) + Weights::sine(w.xs, sine - cosine));
        }
      }
    }
    solver_.compute(matrix);
  }

  Eigen::Index cosines() const { return static_cast<Eigen::Index>(cosines_.size()); }
  Eigen::Index size() const { return cosines() + static_cast<Eigen::Index>(sines_.size()); }
  int order(Eigen::Index i) const {
    return i < cosines() ? cosines_[static_cast<std::size_t>(i)] : sines_[static_cast<std::size_t>(i - cosines())];
  }
  Eigen::VectorXd solve(const Eigen::VectorXd& u) const { return solver_.solve(u); }
  /// Values of both components on the rim: x at 0..points-1, s after.
  void add_rim(const Eigen::VectorXd& f, const std::vector<double>& psi, Eigen::Ref<Eigen::VectorXd> out) const {
    const auto points = static_cast<Eigen::Index>(psi.size());
    for (Eigen::Index q = 0; q < points; ++q) {
      double even = 0, odd = 0;
      for (Eigen::Index i = 0; i < size(); ++i) {
        const double t = order(i) * psi[static_cast<std::size_t>(q)];
        (i < cosines() ? even : odd) += f(i) * (i < cosines() ? std::cos(t) : std::sin(t));
      }
      out(q) += even_ == Even::along_x ? even : odd;
      out(points + q) += even_ == Even::along_x ? odd : even;
    }
  }

 private:
  Even even_;
  std::vector<int> cosines_, sines_;
  Eigen::LDLT<Eigen::MatrixXd> solver_;
};

struct Forces {
  double x = 0, s = 0, moment = 0;
};

/// All tractions of one parity without slip, for several rigid slips at once.
class NoSlip {
 public:
  NoSlip(double a, double b, double nu, int degree, Even even) : a_(a), b_(b), even_(even) {
    const Weights weights(a, b, nu, 2 * degree + 2);
    for (int n = 0; n <= degree; ++n) blocks_.emplace_back(n, weights, even);
    for (int q = 0; q < 4 * degree; ++q)
      psi_.push_back(kPi * ((q + 0.5) / (8.0 * degree)));  // half the leading edge: parity
    // One column for each Legendre polynomial of k: even degrees in the even component, odd degrees in the odd one.
    Eigen::MatrixXd rim = Eigen::MatrixXd::Zero(2 * static_cast<Eigen::Index>(psi_.size()), degree + 1);
    for (int n = 0; n <= degree; ++n) {
      const Block& block = blocks_[static_cast<std::size_t>(n)];
      Eigen::VectorXd u = Eigen::VectorXd::Zero(block.size());
      for (Eigen::Index i = 0; i < block.size(); ++i) {
        const double t = block.order(i) * kPi / 2;
        if (n % 2 == 0 && i < block.cosines()) u(i) = std::cos(t);
        if (n % 2 == 1 && i >= block.cosines()) u(i) = std::sin(t);
      }
      columns_.push_back(block.solve(u));
      block.add_rim(columns_.back(), psi_, rim.col(n));
    }
    solver_.compute(rim);
  }

  /// @param degree, u  Displacement of the rigid slip, over the p_nm, in the block of that degree.
  Forces forces(int degree, const Eigen::VectorXd& u) const {
    const Block& own = blocks_[static_cast<std::size_t>(degree)];
    const Eigen::VectorXd particular = own.solve(u);
    Eigen::VectorXd rim = Eigen::VectorXd::Zero(2 * static_cast<Eigen::Index>(psi_.size()));
    own.add_rim(particular, psi_, rim);
    const Eigen::VectorXd k = solver_.solve(-rim);
    const auto total = [&](int n) {
      Eigen::VectorXd f = k(n) * columns_[static_cast<std::size_t>(n)];
      if (n == degree) f += particular;
      return f;
    };
    const Eigen::VectorXd f0 = total(0), f1 = total(1);
    // int 1/sqrt(1 - rho^2) = 2 pi, int X^2/sqrt(1 - rho^2) = 2 pi / 3 over the unit disc; block 1 is (cos, sin).
    Forces result;
    (even_ == Even::along_x ? result.x : result.s) = 2 * kPi * a_ * b_ * f0(0);
    const double moment = 2 * kPi / 3 * a_ * b_;
    if (even_ == Even::along_s) result.moment = moment * (a_ * f1(0) - b_ * f1(1));
    return result;
  }
  const Block& block(int n) const { return blocks_[static_cast<std::size_t>(n)]; }

 private:
  double a_, b_;
  Even even_;
  std::vector<Block> blocks_;
  std::vector<double> psi_;
  std::vector<Eigen::VectorXd> columns_;
  Eigen::ColPivHouseholderQR<Eigen::MatrixXd> solver_;
};

}  // namespace

CreepCoefficients compute_creep_coefficients(double a_over_b, double poisson_ratio, int degree) {
  require_positive("creep coefficients", "a/b", a_over_b, "");
  if (!(poisson_ratio >= 0 && poisson_ratio <= 0.5)) {
    throw out_of_range("creep coefficients", "Poisson's ratio", poisson_ratio, "", "0 to 0.5");
  }
  if (degree < 8 || degree > 128) throw out_of_range("creep coefficients", "degree", degree, "", "8 to 128");
  const double a = std::sqrt(a_over_b), b = 1 / a;  // a b = 1, G = 1
  CreepCoefficients c;
  {
    const NoSlip along(a, b, poisson_ratio, degree, Even::along_x);
    Eigen::VectorXd u = Eigen::VectorXd::Zero(along.block(1).size());
    u(0) = a;  // u_x = x
    c.c11 = -along.forces(1, u).x;
  }
  const NoSlip across(a, b, poisson_ratio, degree, Even::along_s);
  Eigen::VectorXd u = Eigen::VectorXd::Zero(across.block(1).size());
  u(0) = a;  // u_s = x
  const Forces lateral = across.forces(1, u);
  u = Eigen::VectorXd::Zero(across.block(2).size());
  // Spin: u_x = -x s = -a b XS, u_s = x^2 / 2 = a^2 (2 P_2(X) + 1) / 6; the constant joins k. Block 2: cos 2, cos 0,
  // sin 2.
  u(0) = u(1) = a * a / 3;
  u(2) = -2.0 / 3.0 * a * b;
  const Forces spin = across.forces(2, u);
  c.c22 = -lateral.s;
  c.c23 = 0.5 * (lateral.moment - spin.s);
  c.c33 = -spin.moment;
  return c;
}

}  // namespace runband::halfspace
