// A smooth curve through noisy points, as smooth as their noise demands.
#pragma once

#include <optional>
#include <vector>

#include "core/profile/profile.h"
#include "core/profile/spline.h"

namespace runband {

struct SmoothedCurve {
  SplineCurve curve;
  ProfileFit fit;
  std::vector<double> residuals_mm;  ///< of each point along the curve's normal, positive to the left of travel
};

/// Fits a parametric penalised spline: quintic, uniform knots in arc length, penalty on the third derivative, so that
/// straight lines and (very nearly) arcs cost nothing.
///
/// The weight of the penalty is not chosen but estimated. The change of curvature along the profile is taken as a
/// random signal whose strength may differ from one stretch of the profile to the next; each strength is the one
/// under which points with the stated noise are likeliest (restricted maximum likelihood, by the fixed point of Fellner
/// and Schall). So a flange root keeps its bends while the tread beside it is smoothed over a longer base. If no noise
/// is stated, its variance is estimated along with the rest.
///
/// Points are moved to the foot of their normal between rounds, so that residuals are distances from the curve.
///
/// @param points   in order from gauge to field side, n >= 8, profile frame, mm.
/// @param noise_mm standard deviation along the normal, > 0; empty: estimated.
/// @source  G. Wahba, Ann. Statist. 13 (1985) 1378 (likelihood for smoothing splines); S. N. Wood & M. Fasiolo,
///   Biometrics 73 (2017) 1071 (fixed point); P. H. C. Eilers & B. D. Marx, Statist. Sci. 11 (1996) 89 (penalised
///   B-splines).
SmoothedCurve smooth_points(const std::vector<Vec2>& points, std::optional<double> noise_mm);

}  // namespace runband
