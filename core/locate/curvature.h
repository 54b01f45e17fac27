// Curvatures as the patch sees them: fitted over its own width. Internal to core/locate.
#pragma once

#include "core/base/material.h"
#include "core/locate/locate.h"
#include "core/locate/side.h"

namespace runband {

/// Relative curvature over a window, and what is wrong with it.
struct WindowFit {
  FittedCurvature curvature;      ///< misfit left at 0
  double deviation_mm = 0;        ///< rms of the gap from its parabola over the window
  double smallest_radius_mm = 0;  ///< of either body within the window
  bool cut_off = false;           ///< a profile ends inside the window
  bool conforming = false;        ///< relative curvature across too small (or negative) for an ellipse; a floor is used
};

/// Fits around one touching point.
///
/// The parabola is fitted to the gap over [-half_width, half_width] across, offset and tilt free, every point of the
/// width counting alike. By parts, that is the straight line through the tangent angles over the arc, weighted by
/// 1 - (s / half_width)^2; in this form an arc comes out exactly.
class CurvatureWindow {
 public:
  CurvatureWindow(const SideGeometry& geometry, const SidePose& pose, const Touch& touch);

  WindowFit fit(double half_width_mm) const;
  double rolling_per_mm() const { return rolling_; }

 private:
  const SideGeometry* geometry_;
  Touch touch_;
  double circle_ = 0;   ///< curvature of the wheel around its axle, cos(angle) / R
  double turn2_ = 0;    ///< squared sine of the angle between the track and the wheel's circle, in the tangent plane
  double rolling_ = 0;  ///< of the wheel along the track, with the meridian's part left out
};

}  // namespace runband
