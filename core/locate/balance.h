// The roll and the height at which both wheels touch: searched for, or followed from a neighbouring position. Internal
// to core/locate.
#pragma once

#include <array>

#include "core/locate/tables.h"

namespace runband {

struct RigidRequest {
  double lateral = 0, yaw = 0;
  LateralReference reference = LateralReference::axle;
};

/// Both wheels at a trial roll.
struct RigidTrial {
  std::array<Touch, 2> touch;
  std::array<double, 2> height{};  ///< of the axle centre, as each wheel wants it
  std::array<double, 2> d_roll{};  ///< d height / d roll
  double axle_height = 0;          ///< mean of the two
  double difference() const { return height[0] - height[1]; }
  double slope() const { return d_roll[0] - d_roll[1]; }
};

/// A solved position, with what its neighbours are followed from.
struct Settled {
  RigidContact contact;
  std::array<double, 2> t{};       ///< parameters of the touching points of the wheels
  std::array<double, 2> t_rate{};  ///< by lateral displacement
  std::array<double, 2> wheel_y_rate{};
  /// Held by a kink of the wheel, or wheel and rail fit there: t stays where it is.
  std::array<bool, 2> pinned{};
  double roll_rate = 0;
  std::array<double, 2> margin_mm{};  ///< how much higher the next minimum of the gap lies; 0 where not looked for
};

class Balance {
 public:
  Balance(const LocatorTables& tables, const RigidRequest& request, SearchSpace& space)
      : tables_(tables), request_(request), space_(space), height_(tables.nominal_height_mm()) {}

  /// Lowest touching points at a trial roll. @throws InputError (no_contact) where a wheel stands beside its rail.
  RigidTrial at(double roll);
  /// Newton's method on both touching points and the roll at once, from a guess. Stays with the minima it starts from,
  /// lowest or not; pinned ones stay in place. False where that leads nowhere.
  bool follow(double& roll, std::array<double, 2>& t, const std::array<bool, 2>& pinned, RigidTrial& trial);
  /// Moves `t` to the minimum of one side's gap near it, at a roll, unless it is pinned. False as above.
  bool slide(Side side, double roll, bool pinned, double& t, double& gap_mm);
  /// Whether the gap rises to both sides of a pinned point.
  bool holds(Side side, double roll, double t) const;
  /// Puts lower touching points in the place of those of `trial` that are not the lowest. True if there were any.
  bool undercut(double roll, RigidTrial& trial, std::array<double, 2>& margin_mm);

 private:
  SidePose pose(Side side, double roll) const;
  double lateral_by_roll(double roll) const;
  void weigh(Side side, double roll, const SidePose& pose, RigidTrial& trial) const;

  const LocatorTables& tables_;
  RigidRequest request_;
  SearchSpace& space_;
  double height_;
};

/// A touching point as the outside sees it. @throws InputError (no_contact) where it lies on the climbing flange.
RigidTouch rigid_touch(const SideGeometry& geometry, Side side, const Touch& touch, double axle_height_mm,
                       double lateral_mm);

/// Searched for from a guess of the roll. @throws InputError as Locator::rigid().
Settled settle(const LocatorTables& tables, const RigidRequest& request, double roll_guess, SearchSpace& space);
/// Followed from a neighbour and checked against every other place where the wheels could touch; searched for where
/// that fails. The same answer as settle() in a fraction of the time.
Settled settle_near(const LocatorTables& tables, const RigidRequest& request, const Settled& neighbour,
                    SearchSpace& space);

}  // namespace runband
