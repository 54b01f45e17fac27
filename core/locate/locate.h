// Where they touch: the pose that lets both wheels rest on the rails, every zone that touches, and how they share the
// load.
#pragma once

#include <array>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "core/base/material.h"
#include "core/base/progress.h"
#include "core/hertz/hertz.h"
#include "core/pairing/pairing.h"

namespace runband {

/// Where the lateral displacement is taken: at the axle centre, or at the height of the running surface.
enum class LateralReference { axle, rail };

struct WheelsetPose {
  double lateral_mm = 0;  ///< as prescribed, at `reference`
  LateralReference reference = LateralReference::axle;
  double yaw_rad = 0;
  double roll_rad = 0;  ///< solved
  double height_mm =
      0;  ///< solved: height of the axle centre above the running surface, less the mean nominal rolling radius
};

/// Rigid contact of one wheel.
struct RigidTouch {
  double wheel_y_mm = 0, wheel_z_mm = 0;  ///< wheel profile frame
  double rail_y_mm = 0, rail_z_mm = 0;    ///< rail profile frame
  double contact_angle_rad = 0;
  double rolling_radius_mm = 0;
  Vec3 track_mm = Vec3::Zero();
  /// d rolling_radius_mm / d lateral_mm as the wheelset moves and rolls: 0 at a corner of the wheel, not a number where
  /// the curvatures leave it open, and 0 in rigid_without_roll().
  double rolling_radius_rate = 0;
};

struct RigidContact {
  WheelsetPose pose;
  std::array<RigidTouch, 2> touch;  ///< left, right
};

/// Relative curvatures as fitted over the width of the patch.
struct FittedCurvature {
  double rolling_per_mm = 0;       ///< of the wheel; the rail has none
  double wheel_across_per_mm = 0;  ///< positive convex
  double rail_across_per_mm = 0;   ///< positive convex
  double across_per_mm = 0;        ///< relative, fitted to the gap over the patch width
  double misfit = 0;               ///< rms of gap minus its parabola over the patch width, over the approach
};

/// One place where a wheel touches a rail, or nearly does.
struct ContactZone {
  Side side = Side::left;
  std::string zone;  ///< "tread", "flange root", "flange", "field side"
  bool carries_load = false;
  double wheel_y_mm = 0, wheel_z_mm = 0, rail_y_mm = 0, rail_z_mm = 0;
  Vec3 track_mm = Vec3::Zero();
  Eigen::Matrix3d frame = Eigen::Matrix3d::Identity();  ///< columns x (rolling), s (across), n in the track frame
  double contact_angle_rad = 0;
  double rolling_radius_mm = 0;
  double gap_mm = 0;  ///< rigid gap along the normal at the solved rigid pose; 0 where they touch
  double normal_force_N = 0;
  FittedCurvature curvature;
  std::optional<HertzEllipse> ellipse;  ///< where it carries load
  std::vector<Caution> cautions;
};

struct WheelLoads {
  std::array<double, 2> vertical_N{100000.0, 100000.0};  ///< left, right
};

struct Located {
  WheelsetPose pose;
  std::vector<ContactZone> zones;  ///< left before right, each from field side to flange
  std::vector<Caution> cautions;
};

/// A place of the traverse where the touching point of a wheel leaps.
struct ContactJump {
  Side side = Side::left;
  double lateral_mm = 0;
  double wheel_y_from_mm = 0, wheel_y_to_mm = 0;
};

/// The wheelset moved across the track.
struct RigidSweep {
  /// Ascending; denser where the touching points hurry; both sides of every jump, less than 3e-7 mm apart.
  std::vector<RigidContact> contacts;
  std::vector<ContactJump> jumps;  ///< ascending
};

/// Tables made once for a pairing; then every position is cheap. Immutable, usable from several threads.
class Locator {
 public:
  explicit Locator(std::shared_ptr<const Pairing> pairing);
  ~Locator();
  Locator(Locator&&) noexcept;
  Locator& operator=(Locator&&) noexcept;

  const Pairing& pairing() const;

  /// Rigid contact of both wheels. @throws InputError (no_contact) where a wheel runs off its rail or the flange would
  /// climb.
  RigidContact rigid(double lateral_mm, double yaw_rad, LateralReference reference = LateralReference::axle) const;
  /// rigid() at every position, in order, each starting from its neighbour's roll: the traverse. Positions that have no
  /// rigid contact throw as in rigid(). @param lateral_mm in any order, ascending is fastest.
  std::vector<RigidContact> rigid(const std::vector<double>& lateral_mm, double yaw_rad,
                                  LateralReference reference = LateralReference::axle) const;
  /// The same with roll held at zero (for comparison with methods that neglect it).
  RigidContact rigid_without_roll(double lateral_mm, double yaw_rad) const;

  /// Every zone on both sides within the elastic approach, loads shared, curvatures fitted.
  Located loaded(double lateral_mm, double yaw_rad, LateralReference reference, const WheelLoads& loads,
                 const MaterialPair& material) const;

  /// Distance between the undeformed surfaces along the zone's normal over its contact frame point (x, s), mm; zero at
  /// the touching point of a touching zone, gap_mm at the others; infinite where one of the surfaces ends.
  double gap_mm(const ContactZone& zone, const WheelsetPose& pose, double x_mm, double s_mm) const;
  /// The same over a whole grid, fast. values[j * nx + i].
  std::vector<double> gap_field_mm(const ContactZone& zone, const WheelsetPose& pose, const Grid& grid) const;

  /// As far as there is contact between two lateral positions (to 0.01 mm), outward from the one nearest to the middle
  /// of the track. Between neighbours the touching points move as the rates at both say, to 0.02 mm, and rolling radii
  /// to 0.001 mm. @throws InputError as rigid(), at the position it starts from; out_of_range unless from <= to.
  RigidSweep sweep(double from_mm, double to_mm, double yaw_rad, LateralReference reference) const;
  /// Jumps of the touching points between two lateral positions, each found to 1e-6 mm.
  /// @throws InputError as rigid() at either end.
  std::vector<ContactJump> jumps(double from_mm, double to_mm, double yaw_rad, LateralReference reference) const;

 private:
  struct Tables;
  std::unique_ptr<const Tables> tables_;
};

}  // namespace runband
