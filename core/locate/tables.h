// What a Locator holds. Internal to core/locate.
#pragma once

#include <array>
#include <memory>

#include "core/locate/locate.h"
#include "core/locate/side.h"

namespace runband {

struct LocatorTables {
  explicit LocatorTables(std::shared_ptr<const Pairing> p);

  std::shared_ptr<const Pairing> pairing;
  std::array<std::shared_ptr<const SideGeometry>, 2> sides;

  const SideGeometry& side(Side s) const { return *sides[s == Side::left ? 0 : 1]; }
  /// Height of the axle centre of a wheelset that stands on its nominal radii.
  double nominal_height_mm() const {
    return 0.5 * (pairing->rolling_radius_mm(Side::left) + pairing->rolling_radius_mm(Side::right));
  }
  /// Lateral position of the axle centre.
  double axle_lateral_mm(const WheelsetPose& pose) const;
  /// A solved pose as one side sees it.
  SidePose seen_from(Side s, const WheelsetPose& pose) const;
};

struct Locator::Tables : LocatorTables {
  using LocatorTables::LocatorTables;
};

}  // namespace runband
