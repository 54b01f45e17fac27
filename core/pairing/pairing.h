// A wheelset on a track: four profiles, mounted. Everything that does not change as the wheelset moves.
#pragma once

#include <array>
#include <memory>

#include "core/base/frames.h"
#include "core/profile/profile.h"

namespace runband {

struct TrackGeometry {
  double gauge_mm = 1435.0;
  double gauge_depth_mm = 14.0;    ///< the gauge is measured from the running surface down to here
  double inclination_rad = 0.025;  ///< rails lean towards the track centre by this; atan(1/40) for "1:40"
  double curve_radius_m = 0.0;     ///< 0 straight; + turns left
  double cant_mm = 0.0;
  bool operator==(const TrackGeometry&) const = default;
};

struct WheelsetGeometry {
  double back_to_back_mm = 1360.0;
  double running_circle_offset_mm = 70.0;
  std::array<double, 2> rolling_radius_mm{460.0, 460.0};  ///< nominal, left and right, at the running circle
  /// Distance of a running circle from the wheelset's centre plane.
  double running_circle_y_mm() const { return back_to_back_mm / 2.0 + running_circle_offset_mm; }
  bool operator==(const WheelsetGeometry&) const = default;
};

/// A rail profile inclined and shifted into the half of the track frame that it stands in.
struct RailMount {
  double inclination_rad = 0;
  Vec2 shift = Vec2::Zero();  ///< (outward from centre line, up), mm, applied after the rotation

  /// Profile frame to (distance from the centre line outward, height). Multiply the first by side_sign for track y.
  Vec2 outward(const Vec2& profile_point) const;
  Vec2 outward_direction(const Vec2& profile_direction) const;
};

/// Immutable once made.
class Pairing {
 public:
  /// @param wheels, rails left and right.
  /// @throws InputError if the rail does not reach the gauge depth, the pairing leaves no room between flange and rail
  ///   (no_contact), or a dimension is out of range.
  Pairing(std::array<std::shared_ptr<const Profile>, 2> wheels, std::array<std::shared_ptr<const Profile>, 2> rails,
          const TrackGeometry& track, const WheelsetGeometry& wheelset);

  const Profile& wheel(Side side) const { return *wheels_[index(side)]; }
  const Profile& rail(Side side) const { return *rails_[index(side)]; }
  const RailMount& mount(Side side) const { return mounts_[index(side)]; }
  const TrackGeometry& track() const { return track_; }
  const WheelsetGeometry& wheelset() const { return wheelset_; }
  double rolling_radius_mm(Side side) const { return wheelset_.rolling_radius_mm[index(side)]; }

 private:
  static std::size_t index(Side side) { return side == Side::left ? 0 : 1; }
  std::array<std::shared_ptr<const Profile>, 2> wheels_, rails_;
  std::array<RailMount, 2> mounts_;
  TrackGeometry track_;
  WheelsetGeometry wheelset_;
};

}  // namespace runband
