// Distance between the undeformed wheel and rail along the normal of a contact. Internal to core/locate.
#pragma once

#include "core/locate/side.h"

namespace runband {

/// The two surfaces seen from a contact frame: for a point (x, s) of the tangent plane, where the line along the normal
/// meets the rail (a prism) and the wheel (a surface of revolution), exactly. Solutions are followed from a
/// neighbour's.
class NormalGap {
 public:
  /// @param origin of the contact frame, on the rail. Side frame, mm.
  /// @param tangent of the rail there, (u, v), unit, towards the field side.
  NormalGap(const SideGeometry& geometry, const SidePose& pose, const Vec3& origin, const Vec2& tangent);

  struct OnRail {
    double tau = 0, height = 0;  ///< parameter; height above the tangent plane along the normal, mm
  };
  struct OnWheel {
    double t = 0, height = 0;
  };
  /// Starts from `point`, ends there. False where the rail ends or turns under.
  bool find(double s, OnRail& point) const;
  bool find(double x, double s, OnWheel& point) const;

 private:
  const SideGeometry& geometry_;
  SidePose pose_;
  Vec3 origin_, across_, normal_;
  Vec2 tangent_, normal2_;
};

}  // namespace runband
