// One wheel over one rail: the contact locus, the gap between locus and rail, and its minima. Internal to core/locate.
//
// Side frame: x in the direction of travel, u outward from the track's centre line, v up. The right side is the mirror
// image of the left; lateral displacement, yaw and roll change sign with it, so one set of formulas serves both.
#pragma once

#include <Eigen/Core>
#include <memory>
#include <vector>

#include "core/pairing/pairing.h"

namespace runband {

/// Axle of the wheelset as one side sees it.
struct SidePose {
  Vec3 axis = Vec3::UnitY();   ///< unit vector along the axle, from the wheelset's centre outward
  Vec3 centre = Vec3::Zero();  ///< axle centre, mm
  double yaw = 0;              ///< rad, in the sense of this side
};
/// @param lateral_axle_mm, yaw_rad, roll_rad in the track frame; the axle centre `axle_height_mm` above the rails.
SidePose side_pose(Side side, double lateral_axle_mm, double yaw_rad, double roll_rad, double axle_height_mm);

/// The point of one wheel circle whose normal has no component along the track. Contact can occur nowhere else.
/// Source: G. Wang 1984 (trace method); A. D. de Pater, contact of a wheelset with a track.
struct LocusPoint {
  bool exists = false;           ///< false where the profile is too steep for the yaw, or faces up
  Vec3 position = Vec3::Zero();  ///< side frame
  Vec2 tangent = Vec2::UnitX();  ///< (u, v), unit, towards the field side
};

struct RailPoint {
  bool exists = false;
  double tau = 0;                ///< parameter of the rail curve
  Vec2 position = Vec2::Zero();  ///< (u, v)
  Vec2 tangent = Vec2::UnitX();  ///< unit, towards the field side
  double curvature = 0;          ///< signed as CurvePoint::curvature(), 1/mm
};

/// A local minimum of the vertical gap.
struct Touch {
  double t = 0;    ///< parameter of the wheel curve
  double tau = 0;  ///< parameter of the rail curve
  Vec3 wheel = Vec3::Zero();
  Vec2 rail = Vec2::Zero();
  Vec2 tangent = Vec2::UnitX();  ///< of the rail, unit, towards the field side
  double gap = 0;                ///< wheel above rail, vertical, mm
  double miss = 0;               ///< sine of the angle between the tangents of locus and rail that is left
  bool at_edge = false;          ///< an end of a profile, or a corner of it, touches
};

/// Scratch memory of a search, kept between calls.
struct SearchSpace {
  Eigen::ArrayXd u, v, gap, root;
  Eigen::Index first = 0, last = 0;  ///< samples over the rail lie within [first, last); the gap of others is infinite
};

class SideGeometry {
 public:
  SideGeometry(const Pairing& pairing, Side side, std::shared_ptr<const SideGeometry> twin);

  LocusPoint locus(const CurvePoint& wheel_point, const SidePose& pose) const;
  /// The rail's upper surface at the distance u from the centre line.
  RailPoint rail_at(double u) const;
  Vec2 rail_outward(const Vec2& p) const;
  Vec2 rail_direction(const Vec2& d) const;

  const ProfileCurve& wheel() const { return *wheel_; }
  const ProfileCurve& rail() const { return *rail_; }
  double running_radius() const { return running_radius_; }
  double running_circle_y() const { return running_circle_y_; }
  double rolling_radius(double wheel_z) const { return running_radius_ - wheel_z; }
  double climb_t() const { return climb_t_; }
  double flange_angle() const { return flange_angle_; }
  double field_end_y() const { return field_end_y_; }
  double wheel_y_at(Eigen::Index sample) const { return axial_[sample] - running_circle_y_; }

  /// The gap over one point of the wheel; infinite where locus or rail has no point.
  struct Sampled {
    double gap = 0, slope_difference = 0;  ///< sine of the angle from the rail's tangent to the locus'
    double bend = 0;                       ///< d slope_difference / dt, the locus taken as bent like the profile
    double speed = 0;                      ///< d arc / dt of the profile
    LocusPoint wheel;
    RailPoint rail;
  };
  Sampled sample(double t, const SidePose& pose) const;
  /// Parameter of the wheel curve's point nearest to a point of the profile frame that lies on it.
  double wheel_parameter(const Vec2& on_wheel) const;

  /// The lowest minimum. `exists` is false where wheel and rail have no common u.
  bool lowest(const SidePose& pose, SearchSpace& space, Touch& touch) const;
  /// What the scan at `pose` says against `touch`, a minimum of the gap: true, and `touch` replaced, where another is
  /// lower. `margin_mm` is how much higher the next one is, to the precision of the scan; infinite where there is none.
  bool undercut(const SidePose& pose, SearchSpace& space, Touch& touch, double& margin_mm) const;
  /// All minima whose vertical gap is at most `within_mm` more than the lowest, in order of t (flange to field side).
  std::vector<Touch> minima(const SidePose& pose, SearchSpace& space, double within_mm) const;

 private:
  struct RailTable {
    double begin = 0, end = 0, step = 0, per_step = 0;
    std::vector<double> v, tau;
  };
  void scan(const SidePose& pose, SearchSpace& space) const;
  struct Bracket {
    double a = 0, b = 0, t = 0;
    Sampled at_a, at_b;
  };
  Bracket bracket(Eigen::Index i, const SidePose& pose, const SearchSpace& space) const;
  /// The minimum near sample i. Where the way there leads past a `known` one, that one, with an infinite gap.
  Touch polish(Eigen::Index i, const SidePose& pose, const SearchSpace& space, const double* known = nullptr) const;
  static std::shared_ptr<const RailTable> tabulate(const ProfileCurve& rail, const RailMount& mount);

  std::shared_ptr<const ProfileCurve> wheel_, rail_;
  RailMount mount_;
  double cos_ = 1, sin_ = 0;  ///< of the inclination
  double running_radius_ = 0, running_circle_y_ = 0;
  double climb_t_ = 0, flange_angle_ = 0, field_end_y_ = 0;
  Eigen::ArrayXd t_, axial_, radius_, slope_, radius_slope_, steepness_;  ///< wheel samples; steepness is 1 + slope^2
  std::shared_ptr<const RailTable> rail_table_;
};

}  // namespace runband
