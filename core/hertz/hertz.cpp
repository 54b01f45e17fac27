#include "core/hertz/hertz.h"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <string>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace {

constexpr double kPi = std::numbers::pi;
constexpr double kSmallestCurvatureRatio = 1e-20;
// A step of this size in ln k leaves an error of its square times 0.03: below rounding.
constexpr double kLastStep = 1e-7;

// The complete elliptic integrals at axis ratio k (modulus squared 1 - k^2), in forms without cancellation, and what
// Newton's method needs. With D = (K - E)/(1 - k^2) and B = K - D:  A/B = k^2 D / B,  E = B + k^2 D.
struct Integrals {
  double complete_k;       // K
  double d_share;          // D / K
  double b_share;          // B / K
  double curvature_ratio;  // k^2 D / B
  double slope;            // d ln(curvature ratio) / d ln k
};

// Arithmetic-geometric mean of 1 and k: K = pi / (2 agm), D/K = 1/2 + sum 2^(n-1) c_n^2 / (1 - k^2), n = 1, 2, ...
// (Abramowitz & Stegun 17.6.3-4). With t_n = c_n / (1 - k^2) the sum is finite and exact also for a circle, k = 1.
Integrals integrals_at(double k) {
  const double k2 = k * k;
  const double modulus2 = (1.0 - k) * (1.0 + k);
  double mean = 0.5 * (1.0 + k);
  double geometric = std::sqrt(k);
  double t = 0.25 / mean;
  double weight = 1.0;
  double sum = t * t;
  double difference = 0.5 * (1.0 - k);
  while (difference > 1e-8 * mean) {
    const double next = 0.5 * (mean + geometric);
    difference = 0.5 * (mean - geometric);
    geometric = std::sqrt(mean * geometric);
    mean = next;
    t = 0.25 * modulus2 * t * t / mean;
    weight *= 2.0;
    sum += weight * t * t;
  }
  mean = 0.5 * (mean + geometric);
  const double half_gap = modulus2 * sum;
  Integrals result{};
  result.complete_k = 0.5 * kPi / mean;
  result.d_share = 0.5 + half_gap;
  result.b_share = 0.5 - half_gap;
  result.curvature_ratio = k2 * result.d_share / result.b_share;
  result.slope = 2.0 - (0.5 - sum * (1.0 + k2)) / result.d_share + 2.0 * k2 * sum / result.b_share;
  return result;
}

// ln(b/a) from ln(A/B), to 9e-5 for b/a > 1e-4: a rational fit with the right limits 2/3 (circle; Greenwood 1985) and
// 1/2 (line). It only starts Newton's method.
double first_guess(double log_ratio) {
  const double x = -log_ratio;
  const double numerator = 2.0 / 3.0 + x * (0.100923 + x * (0.0267348 + x * (0.5 * 0.00185744)));
  const double denominator = 1.0 + x * (0.150694 + x * (0.0455017 + x * 0.00185744));
  return log_ratio * numerator / denominator;
}

HertzCoefficients coefficients_of(double curvature_ratio) {
  double k = std::exp(first_guess(std::log(curvature_ratio)));
  Integrals at{};
  double step = 1.0;
  for (int round = 0; round < 20; ++round) {
    at = integrals_at(k);
    const double excess = curvature_ratio / at.curvature_ratio - 1.0;
    step = (std::abs(excess) < 1e-3 ? excess * (1.0 - excess * (0.5 - excess * (1.0 / 3.0 - 0.25 * excess)))
                                    : std::log1p(excess)) /
           at.slope;
    if (std::abs(step) < kLastStep) break;
    k *= std::abs(step) < 1e-3 ? 1.0 + step * (1.0 + step * (0.5 + step * (1.0 / 6.0 + step / 24.0))) : std::exp(step);
    k = std::min(k, 1.0);
  }
  // The last step is taken in k and, to first order, in the integrals: dK = -B dln k, dE = k^2 D dln k.
  const double k2 = k * k;
  const double e = at.complete_k * (at.b_share + k2 * at.d_share * (1.0 + step));
  const double complete_k = at.complete_k * (1.0 - at.b_share * step);
  k = std::min(k * (1.0 + step), 1.0);
  HertzCoefficients result;
  result.axis_ratio = k;
  result.m = std::cbrt(2.0 * e / (kPi * k * k));
  result.n = result.m * k;
  result.r = 2.0 * complete_k / (kPi * result.m);
  return result;
}

// What force and approach share: coefficients, A + B and E*.
struct Setting {
  HertzCoefficients coefficients;
  double curvature_sum;  // A + B, half of the sum of the two relative curvatures
  double modulus_MPa;
};

void require_elastic(const Material& material, const char* body) {
  require_positive(body, "youngs_modulus_MPa", material.youngs_modulus_MPa, "MPa");
  if (!(material.poisson_ratio > -1.0 && material.poisson_ratio <= 0.5))
    throw out_of_range(body, "poisson_ratio", material.poisson_ratio, "1", "above -1 and at most 0.5");
}

Setting setting_of(double curvature_rolling, double curvature_across, const MaterialPair& material) {
  require_positive("Hertz contact", "curvature_rolling_per_mm", curvature_rolling, "1/mm");
  require_positive("Hertz contact", "curvature_across_per_mm", curvature_across, "1/mm");
  require_elastic(material.wheel, "wheel");
  require_elastic(material.rail, "rail");
  const double smaller = std::min(curvature_rolling, curvature_across);
  const double larger = std::max(curvature_rolling, curvature_across);
  return {hertz_coefficients(smaller / larger), 0.5 * (smaller + larger), material.contact_modulus_MPa()};
}

}  // namespace

HertzCoefficients hertz_coefficients(double curvature_ratio) {
  if (!(curvature_ratio >= kSmallestCurvatureRatio && curvature_ratio <= 1.0)) {
    throw InputError(ErrorCode::out_of_range,
                     "Hertz contact: the ratio of the relative curvatures is " + number_text(curvature_ratio) +
                         "; it must lie between 1e-20 and 1, smaller over larger.",
                     "a body that is straight in one direction makes a line contact: give it a curvature, or use "
                     "method = \"half_space\".");
  }
  return coefficients_of(curvature_ratio);
}

double HertzEllipse::area_mm2() const { return kPi * semi_axis_rolling_mm * semi_axis_across_mm; }

double HertzEllipse::pressure_MPa(double x_mm, double s_mm) const {
  const double x = x_mm / semi_axis_rolling_mm;
  const double s = s_mm / semi_axis_across_mm;
  const double inside = 1.0 - x * x - s * s;
  return inside > 0.0 ? peak_pressure_MPa * std::sqrt(inside) : 0.0;
}

HertzEllipse hertz_ellipse(double curvature_rolling_per_mm, double curvature_across_per_mm, double normal_force_N,
                           const MaterialPair& material) {
  const Setting s = setting_of(curvature_rolling_per_mm, curvature_across_per_mm, material);
  require_positive("Hertz contact", "normal_force_N", normal_force_N, "N");
  const double length = std::cbrt(0.75 * normal_force_N / (s.modulus_MPa * s.curvature_sum));
  const double longer = s.coefficients.m * length;
  const double shorter = s.coefficients.n * length;
  const bool long_in_rolling = curvature_rolling_per_mm <= curvature_across_per_mm;
  HertzEllipse ellipse;
  ellipse.semi_axis_rolling_mm = long_in_rolling ? longer : shorter;
  ellipse.semi_axis_across_mm = long_in_rolling ? shorter : longer;
  ellipse.peak_pressure_MPa = 1.5 * normal_force_N / (kPi * longer * shorter);
  ellipse.approach_mm = s.coefficients.r * length * length * s.curvature_sum;
  ellipse.stiffness_N_per_mm = 1.5 * normal_force_N / ellipse.approach_mm;
  return ellipse;
}

double hertz_force_N(double curvature_rolling_per_mm, double curvature_across_per_mm, double approach_mm,
                     const MaterialPair& material) {
  const Setting s = setting_of(curvature_rolling_per_mm, curvature_across_per_mm, material);
  require_positive("Hertz contact", "approach_mm", approach_mm, "mm");
  const double length2 = approach_mm / (s.coefficients.r * s.curvature_sum);
  return 4.0 / 3.0 * s.modulus_MPa * s.curvature_sum * length2 * std::sqrt(length2);
}

}  // namespace runband
