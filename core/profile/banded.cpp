#include "core/profile/banded.h"

#include <algorithm>

namespace runband {

namespace {
constexpr Eigen::Index kWidth = 5;
}

BandFactor::BandFactor(const Band& matrix) : factor_(matrix) {
  const Eigen::Index n = factor_.cols();
  for (Eigen::Index j = 0; j < n; ++j) {
    const double pivot = factor_(0, j);
    if (!(pivot > 1e-15 * matrix(0, j))) {
      ok_ = false;
      return;
    }
    const Eigen::Index reach = std::min(kWidth, n - 1 - j);
    for (Eigen::Index a = 1; a <= reach; ++a) {
      const double l = factor_(a, j) / pivot;
      for (Eigen::Index b = a; b <= reach; ++b) factor_(b - a, j + a) -= l * factor_(b, j);
    }
    for (Eigen::Index a = 1; a <= reach; ++a) factor_(a, j) /= pivot;
  }
}

void BandFactor::solve(Eigen::MatrixXd& b) const {
  const Eigen::Index n = factor_.cols();
  for (Eigen::Index c = 0; c < b.cols(); ++c) {
    double* x = b.col(c).data();
    for (Eigen::Index j = 0; j < n; ++j)
      for (Eigen::Index a = 1; a <= std::min(kWidth, n - 1 - j); ++a) x[j + a] -= factor_(a, j) * x[j];
    for (Eigen::Index j = n - 1; j >= 0; --j) {
      x[j] /= factor_(0, j);
      for (Eigen::Index a = 1; a <= std::min(kWidth, n - 1 - j); ++a) x[j] -= factor_(a, j) * x[j + a];
    }
  }
}

Band BandFactor::inverse_band() const {
  const Eigen::Index n = factor_.cols();
  Band inverse = Band::Zero(6, n);
  const auto entry = [&](Eigen::Index i, Eigen::Index j) { return i >= j ? inverse(i - j, j) : inverse(j - i, i); };
  for (Eigen::Index i = n - 1; i >= 0; --i) {
    const Eigen::Index reach = std::min(kWidth, n - 1 - i);
    for (Eigen::Index d = reach; d >= 0; --d) {
      double value = d == 0 ? 1.0 / factor_(0, i) : 0.0;
      for (Eigen::Index a = 1; a <= reach; ++a) value -= factor_(a, i) * entry(i + a, i + d);
      inverse(d, i) = value;
    }
  }
  return inverse;
}

}  // namespace runband
