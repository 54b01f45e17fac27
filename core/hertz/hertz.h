// Hertz's ellipse: semi-axes, pressure, approach and stiffness of two smooth bodies pressed together.
#pragma once

#include "core/base/material.h"

namespace runband {

/// Coefficients that depend on the ratio of the two relative curvatures alone (Johnson 1985, section 4.2).
/// a = m L, b = n L with L = (3 N / (4 E* (A + B)))^(1/3), approach = r (9 N^2 (A + B) / (16 E*^2))^(1/3).
struct HertzCoefficients {
  double axis_ratio = 1;  ///< minor over major, b/a <= 1
  double m = 1, n = 1, r = 1;
};
/// @param curvature_ratio A/B, smaller over larger principal relative curvature, in [1e-20, 1]. At 1e-7 the ellipse is
///                        about 1e4 times longer than wide.
/// @throws InputError (out_of_range) outside that range: below it the contact is a line and has no finite ellipse.
/// @accuracy 5e-15 relative for b/a from 1e-4 to 1, measured against Boost.Math in
/// tests/published/hertz_table_test.cpp.
/// @source   Hertz 1881; the complete integrals by the arithmetic-geometric mean (Abramowitz & Stegun 17.6).
HertzCoefficients hertz_coefficients(double curvature_ratio);

struct HertzEllipse {
  double semi_axis_rolling_mm = 0;  ///< a
  double semi_axis_across_mm = 0;   ///< b
  double peak_pressure_MPa = 0;
  double approach_mm = 0;
  double stiffness_N_per_mm = 0;  ///< dN/d(approach) = 1.5 N / approach
  double area_mm2() const;
  /// Pressure at (x, s), zero outside.
  double pressure_MPa(double x_mm, double s_mm) const;
};

/// @param curvature_rolling_per_mm  1/R summed over both bodies in the rolling direction. Unit 1/mm, > 0.
/// @param curvature_across_per_mm   1/R summed over both bodies across. Unit 1/mm, > 0.
/// @param normal_force_N            > 0.
/// @throws InputError (out_of_range) if a curvature or the force is not finite and positive, if one curvature is more
///         than 1e20 times the other, or if the material is not elastic (E > 0, Poisson's ratio in (-1, 0.5]).
HertzEllipse hertz_ellipse(double curvature_rolling_per_mm, double curvature_across_per_mm, double normal_force_N,
                           const MaterialPair& material);

/// Force at a given approach: N = C approach^1.5. Same conditions. The approach must be finite and > 0.
double hertz_force_N(double curvature_rolling_per_mm, double curvature_across_per_mm, double approach_mm,
                     const MaterialPair& material);

}  // namespace runband
