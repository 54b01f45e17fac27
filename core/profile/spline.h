// A parametric piecewise polynomial through or near measured points.
#pragma once

#include <array>
#include <vector>

#include "core/profile/curve.h"

namespace runband {

/// Piecewise polynomial of degree up to 5, continuous to the second derivative, with breaks at given knots. Evaluation
/// is a table look-up and three short polynomials (about 20 ns), whatever the number of knots.
class SplineCurve final : public ProfileCurve {
 public:
  /// Coefficients of one interval: position = sum of columns[k] * (t - knot)^k.
  using Coefficients = std::array<Vec2, 6>;

  /// @param knots        ascending, n + 1 values. @param coefficients one entry per interval.
  SplineCurve(std::vector<double> knots, std::vector<Coefficients> coefficients);

  double t_begin() const override { return knots_.front(); }
  double t_end() const override { return knots_.back(); }
  CurvePoint at(double t) const override;
  /// Only the ends: the second derivative has no jump.
  std::vector<double> breaks() const override { return {knots_.front(), knots_.back()}; }

  const std::vector<double>& knots() const { return knots_; }
  /// Arc length from the beginning to t, mm.
  double arc_length(double t) const;

 private:
  std::size_t interval(double t) const;
  std::vector<double> knots_;
  std::vector<Coefficients> coefficients_;
  std::vector<std::uint32_t> guide_;  ///< first interval that reaches into each of equally wide bins
  double bins_per_mm_ = 0;
  std::vector<double> arc_at_knot_;
};

/// Cubic spline through the points (not-a-knot ends), over chord length; C2.
/// @param points n x 2, in order, n >= 4, no two neighbours equal.
SplineCurve interpolating_spline(const std::vector<Vec2>& points);

}  // namespace runband
