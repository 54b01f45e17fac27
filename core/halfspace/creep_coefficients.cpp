#include "core/halfspace/creep_coefficients.h"

#include <array>
#include <cmath>

#include "core/base/error.h"
#include "core/halfspace/creep_coefficients_table.h"

namespace runband::halfspace {
namespace {

template <std::size_t N>
std::array<double, N> chebyshev(double x) {
  std::array<double, N> t{};
  t[0] = 1;
  t[1] = x;
  for (std::size_t k = 2; k < N; ++k) t[k] = 2 * x * t[k - 1] - t[k - 2];
  return t;
}

// The spectral solution itself is trusted this far; beyond, the coefficients of the limit are scaled.
constexpr double kMostElongated = 200;

}  // namespace

CreepCoefficients creep_coefficients(double a_over_b, double poisson_ratio) {
  require_positive("creep coefficients", "a/b", a_over_b, "");
  if (!(poisson_ratio >= 0 && poisson_ratio <= 0.5)) {
    throw out_of_range("creep coefficients", "Poisson's ratio", poisson_ratio, "", "0 to 0.5");
  }
  const double position = std::log(a_over_b) / kCreepTableLogRatio;
  if (std::abs(position) > 1) {
    if (a_over_b <= kMostElongated && a_over_b >= 1 / kMostElongated)
      return compute_creep_coefficients(a_over_b, poisson_ratio);
    // Powers of the leading asymptotes; the logarithms in them hardly move here.
    CreepCoefficients c = compute_creep_coefficients(a_over_b > 1 ? kMostElongated : 1 / kMostElongated, poisson_ratio);
    if (a_over_b > 1) {
      const double further = a_over_b / kMostElongated;
      c.c11 *= further;
      c.c22 *= further;
      c.c23 *= further * std::sqrt(further);
    } else {
      const double further = a_over_b * kMostElongated;
      c.c23 *= std::sqrt(further);
      c.c33 /= further;
    }
    return c;
  }
  const auto r = chebyshev<kCreepTableRatios>(position);
  const auto n = chebyshev<kCreepTableNus>(4 * poisson_ratio - 1);
  std::array<double, 4> value{};
  for (std::size_t k = 0; k < 4; ++k) {
    double sum = 0;
    for (std::size_t i = 0; i < r.size(); ++i) {
      double row = 0;
      for (std::size_t j = 0; j < n.size(); ++j) row += kCreepTable[k][i][j] * n[j];
      sum += row * r[i];
    }
    value[k] = std::exp(sum);
  }
  return {value[0], value[1], value[2], value[3]};
}

}  // namespace runband::halfspace
