// How fast the wheel's surface passes over the rail's, from the motion of the wheelset as a rigid body.
#pragma once

#include <optional>

#include "core/analysis/analysis.h"

namespace runband {

struct Creepages {
  double longitudinal = 0, lateral = 0, spin_per_mm = 0;
};

/// A wheelset that runs at V along a track of constant curvature and turns about its axle. Everything is over V.
class WheelsetMotion {
 public:
  explicit WheelsetMotion(const PatchContext& context);

  /// Velocity of the wheel's material at a point of the track frame minus the rail's there.
  /// @param turn_per_mm angular speed of the axle over V; 1 / (rolling radius) rolls on that radius.
  Vec3 slip(const Vec3& track_mm, double turn_per_mm) const;
  /// Angular velocity about a normal, in the sense of the contact frame of that side.
  double spin_per_mm(Side side, const Vec3& normal, double turn_per_mm) const;
  Creepages creepages(const ContactZone& zone, double turn_per_mm) const;

  /// Mean rolling radius of the rigid contact of both wheels.
  double mean_radius_mm() const { return mean_radius_; }
  /// Torque that the axle must be given against the creep forces of all loaded zones, by the law of Shen, Hedrick and
  /// Elkins, N m; + drives. Empty where the zones of the wheelset are not known.
  std::optional<double> torque_Nm(double turn_per_mm, bool local_radius) const;
  /// Angular speed at which the axle takes a torque. Empty as above.
  /// @throws InputError (out_of_range) where friction does not hold the torque.
  std::optional<double> turn_for_torque(double torque_Nm, bool local_radius) const;

 private:
  const PatchContext& context_;
  Vec3 axle_, centre_;
  double curvature_ = 0;  ///< of the track, 1/mm
  double mean_radius_ = 0;
};

/// d xi / d s^2 of strips that roll on the common surface midway between wheel and rail, 1/mm^2.
double bow_per_mm2(const ContactZone& zone, double turn_per_mm);

}  // namespace runband
