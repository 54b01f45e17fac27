// A plane curve with exact derivatives: the form in which the rest of the program sees any profile.
#pragma once

#include <Eigen/Core>
#include <memory>
#include <vector>

namespace runband {

using Vec2 = Eigen::Vector2d;
using Vec3 = Eigen::Vector3d;

/// A point of a plane curve with its derivatives by the parameter. Profile frame (y, z), mm.
struct CurvePoint {
  double t = 0;
  Vec2 position = Vec2::Zero();
  Vec2 d1 = Vec2::Zero();  ///< d position / dt
  Vec2 d2 = Vec2::Zero();  ///< d2 position / dt2

  double y() const { return position.x(); }
  double z() const { return position.y(); }
  double slope() const { return d1.y() / d1.x(); }  ///< dz/dy; infinite where the curve is upright
  /// Signed curvature d(angle)/d(arc), 1/mm: positive where z bends upward along increasing y (a convex wheel tread
  /// seen from below is positive, a convex rail head is negative).
  double curvature() const {
    const double speed = d1.norm();
    return (d1.x() * d2.y() - d1.y() * d2.x()) / (speed * speed * speed);
  }
};

/// Oriented so that it runs from the gauge side to the field side (on the whole, towards increasing y). Immutable;
/// safe to use from several threads.
class ProfileCurve {
 public:
  virtual ~ProfileCurve() = default;
  virtual double t_begin() const = 0;
  virtual double t_end() const = 0;
  /// Position and derivatives; t is clamped to [t_begin, t_end].
  virtual CurvePoint at(double t) const = 0;
  /// Parameters where the second derivative (or a lower one) jumps, ascending, ends included.
  virtual std::vector<double> breaks() const = 0;
};

/// Samples so dense that straight chords stay within `chord_error_mm` of the curve; breaks are always among them.
std::vector<CurvePoint> sample_curve(const ProfileCurve& curve, double chord_error_mm, double max_step_mm = 1e9);

}  // namespace runband
