// Rigid contact at single positions and along a traverse.
#include <cmath>

#include "core/base/error.h"
#include "core/locate/balance.h"

namespace runband {

LocatorTables::LocatorTables(std::shared_ptr<const Pairing> p) : pairing(std::move(p)) {
  sides[0] = std::make_shared<SideGeometry>(*pairing, Side::left, nullptr);
  sides[1] = std::make_shared<SideGeometry>(*pairing, Side::right, sides[0]);
}

double LocatorTables::axle_lateral_mm(const WheelsetPose& pose) const {
  if (pose.reference == LateralReference::axle) return pose.lateral_mm;
  return pose.lateral_mm - (nominal_height_mm() + pose.height_mm) * std::tan(pose.roll_rad) * std::cos(pose.yaw_rad);
}

SidePose LocatorTables::seen_from(Side s, const WheelsetPose& pose) const {
  return side_pose(s, axle_lateral_mm(pose), pose.yaw_rad, pose.roll_rad, nominal_height_mm() + pose.height_mm);
}

Locator::Locator(std::shared_ptr<const Pairing> pairing) : tables_(std::make_unique<Tables>(std::move(pairing))) {}
Locator::~Locator() = default;
Locator::Locator(Locator&&) noexcept = default;
Locator& Locator::operator=(Locator&&) noexcept = default;

const Pairing& Locator::pairing() const { return *tables_->pairing; }

RigidContact Locator::rigid(double lateral_mm, double yaw_rad, LateralReference reference) const {
  SearchSpace space;
  return settle(*tables_, {lateral_mm, yaw_rad, reference}, 0.0, space).contact;
}

std::vector<RigidContact> Locator::rigid(const std::vector<double>& lateral_mm, double yaw_rad,
                                         LateralReference reference) const {
  std::vector<RigidContact> contacts;
  contacts.reserve(lateral_mm.size());
  SearchSpace space;
  Settled last;
  for (const double lateral : lateral_mm) {
    const RigidRequest request{lateral, yaw_rad, reference};
    last = contacts.empty() ? settle(*tables_, request, 0.0, space) : settle_near(*tables_, request, last, space);
    contacts.push_back(last.contact);
  }
  return contacts;
}

RigidContact Locator::rigid_without_roll(double lateral_mm, double yaw_rad) const {
  const RigidRequest request{lateral_mm, yaw_rad, LateralReference::axle};
  SearchSpace space;
  Balance balance(*tables_, request, space);
  const RigidTrial trial = balance.at(0.0);
  RigidContact contact;
  contact.pose = {lateral_mm, LateralReference::axle, yaw_rad, 0.0, trial.axle_height - tables_->nominal_height_mm()};
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = side == Side::left ? 0 : 1;
    contact.touch[k] = rigid_touch(tables_->side(side), side, trial.touch[k], trial.height[k], lateral_mm);
  }
  return contact;
}

}  // namespace runband
