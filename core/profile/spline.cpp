#include "core/profile/spline.h"

#include <algorithm>
#include <cmath>

namespace runband {

namespace {

// Gauss-Legendre on [0, 1], four nodes: exact to degree 7, ample for the speed over one interval.
constexpr std::array<double, 4> kNodes{0.06943184420297371, 0.33000947820757187, 0.6699905217924281,
                                       0.9305681557970262};
constexpr std::array<double, 4> kWeights{0.17392742256872692, 0.3260725774312731, 0.3260725774312731,
                                         0.17392742256872692};

double length_within(const SplineCurve::Coefficients& c, double x) {
  double sum = 0.0;
  for (std::size_t k = 0; k < kNodes.size(); ++k) {
    const double s = kNodes[k] * x;
    const Vec2 d1 = c[1] + s * (2.0 * c[2] + s * (3.0 * c[3] + s * (4.0 * c[4] + s * (5.0 * c[5]))));
    sum += kWeights[k] * d1.norm();
  }
  return sum * x;
}

}  // namespace

SplineCurve::SplineCurve(std::vector<double> knots, std::vector<Coefficients> coefficients)
    : knots_(std::move(knots)), coefficients_(std::move(coefficients)) {
  const std::size_t bins = 2 * coefficients_.size();
  const double span = knots_.back() - knots_.front();
  bins_per_mm_ = static_cast<double>(bins) / span;
  std::size_t i = 0;
  for (std::size_t b = 0; b < bins; ++b) {
    const double t = knots_.front() + static_cast<double>(b) / bins_per_mm_;
    while (i + 1 < coefficients_.size() && knots_[i + 1] <= t) ++i;
    guide_.push_back(static_cast<std::uint32_t>(i));
  }
  arc_at_knot_.push_back(0.0);
  for (std::size_t k = 0; k < coefficients_.size(); ++k)
    arc_at_knot_.push_back(arc_at_knot_.back() + length_within(coefficients_[k], knots_[k + 1] - knots_[k]));
}

std::size_t SplineCurve::interval(double t) const {
  const std::size_t bin = std::min(static_cast<std::size_t>((t - knots_.front()) * bins_per_mm_), guide_.size() - 1);
  std::size_t i = guide_[bin];
  // Rounding at a bin's edge may point one interval too far.
  while (i > 0 && knots_[i] > t) --i;
  while (i + 1 < coefficients_.size() && knots_[i + 1] <= t) ++i;
  return i;
}

CurvePoint SplineCurve::at(double t) const {
  t = t > knots_.front() ? std::min(t, knots_.back()) : knots_.front();
  const std::size_t i = interval(t);
  const Coefficients& c = coefficients_[i];
  const double x = t - knots_[i];
  CurvePoint p;
  p.t = t;
  p.position = c[0] + x * (c[1] + x * (c[2] + x * (c[3] + x * (c[4] + x * c[5]))));
  p.d1 = c[1] + x * (2.0 * c[2] + x * (3.0 * c[3] + x * (4.0 * c[4] + x * (5.0 * c[5]))));
  p.d2 = 2.0 * c[2] + x * (6.0 * c[3] + x * (12.0 * c[4] + x * (20.0 * c[5])));
  return p;
}

double SplineCurve::arc_length(double t) const {
  t = std::clamp(t, knots_.front(), knots_.back());
  const std::size_t i = interval(t);
  return arc_at_knot_[i] + length_within(coefficients_[i], t - knots_[i]);
}

SplineCurve interpolating_spline(const std::vector<Vec2>& points) {
  const std::size_t n = points.size();
  std::vector<double> t(n, 0.0);
  for (std::size_t i = 1; i < n; ++i) t[i] = t[i - 1] + (points[i] - points[i - 1]).norm();
  std::vector<double> h(n - 1);
  std::vector<Vec2> slope(n - 1);
  for (std::size_t i = 0; i + 1 < n; ++i) {
    h[i] = t[i + 1] - t[i];
    slope[i] = (points[i + 1] - points[i]) / h[i];
  }
  // Second derivatives m at the points; not-a-knot eliminates the first and the last:
  // m[0] = m[1] + (m[1] - m[2]) h0/h1, likewise at the end. What is left is tridiagonal (Thomas algorithm).
  std::vector<double> diagonal(n, 0.0), upper(n, 0.0), lower(n, 0.0);
  std::vector<Vec2> m(n, Vec2::Zero());
  for (std::size_t i = 1; i + 1 < n; ++i) {
    lower[i] = h[i - 1];
    diagonal[i] = 2.0 * (h[i - 1] + h[i]);
    upper[i] = h[i];
    m[i] = 6.0 * (slope[i] - slope[i - 1]);
  }
  const double r0 = h[0] / h[1], r1 = h[n - 2] / h[n - 3];
  diagonal[1] += h[0] * (1.0 + r0);
  upper[1] -= h[0] * r0;
  diagonal[n - 2] += h[n - 2] * (1.0 + r1);
  lower[n - 2] -= h[n - 2] * r1;
  for (std::size_t i = 2; i + 1 < n; ++i) {
    const double factor = lower[i] / diagonal[i - 1];
    diagonal[i] -= factor * upper[i - 1];
    m[i] -= factor * m[i - 1];
  }
  for (std::size_t i = n - 2; i >= 1; --i) {
    if (i + 2 < n) m[i] -= upper[i] * m[i + 1];
    m[i] /= diagonal[i];
  }
  m[0] = m[1] + (m[1] - m[2]) * r0;
  m[n - 1] = m[n - 2] + (m[n - 2] - m[n - 3]) * r1;
  std::vector<SplineCurve::Coefficients> coefficients(n - 1);
  for (std::size_t i = 0; i + 1 < n; ++i)
    coefficients[i] = {points[i],    slope[i] - h[i] * (2.0 * m[i] + m[i + 1]) / 6.0,
                       m[i] / 2.0,   (m[i + 1] - m[i]) / (6.0 * h[i]),
                       Vec2::Zero(), Vec2::Zero()};
  return {std::move(t), std::move(coefficients)};
}

}  // namespace runband
