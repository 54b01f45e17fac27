#include "core/locate/balance.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace {

constexpr double kLevel_mm = 2e-12;  // both wheels' heights agree to this, about ten roundings of a rolling radius
constexpr double kLongestStep_rad = 2e-3;
constexpr double kMostRoll_rad = 0.06;  // about 90 mm between the wheels of a standard gauge wheelset
constexpr double kMostYaw_rad = 0.2;

InputError no_contact(double lateral_mm, const std::string& what, const std::string& cure) {
  return {ErrorCode::no_contact, "at lateral position " + number_text(lateral_mm, 8) + " mm: " + what, cure};
}

InputError runs_off(double lateral_mm, Side side) {
  return no_contact(lateral_mm, std::string("the ") + side_name(side) + " wheel does not stand over its rail.",
                    "check state.lateral_mm, track.gauge_mm and wheelset.back_to_back_mm.");
}

InputError climbs(double lateral_mm, Side side) {
  return no_contact(lateral_mm, std::string("the ") + side_name(side) + " flange would climb its rail.",
                    "move the wheelset nearer to the centre of the track, or widen the gauge.");
}

std::size_t index_of(Side side) { return side == Side::left ? 0 : 1; }

bool has_climbed(const SideGeometry& geometry, const Touch& touch) {
  // A wheel without a flange has nothing to climb with.
  constexpr double kFlange_rad = 0.5;
  return geometry.flange_angle() > kFlange_rad && touch.t < geometry.climb_t();
}

struct Balanced {
  double roll = 0;
  RigidTrial trial;
};

// From no roll outwards until the difference changes sign, then false position. For positions where Newton's step
// leads astray: steep flanges, where the wheel that should sink rises.
Balanced search_outward(Balance& balance, const LocatorTables& tables, const RigidRequest& request) {
  double a = 0.0;
  RigidTrial at_a = balance.at(a);
  double fa = at_a.difference();
  if (fa == 0.0) return {a, at_a};
  const double direction = fa > 0.0 ? 1.0 : -1.0;
  const Side rising = direction > 0.0 ? Side::left : Side::right;
  double step = 5e-5;
  double b = a, fb = fa;
  while (fb * direction > 0.0) {
    a = b;
    fa = fb;
    b += direction * step;
    step = std::min(1.2 * step, 5e-4);
    if (std::abs(b) > kMostRoll_rad) throw climbs(request.lateral, rising);
    const RigidTrial at_b = balance.at(b);
    fb = at_b.difference();
    // Rolled further, the rising wheel touches still nearer to its tip.
    if (fb * direction > 0.0 && has_climbed(tables.side(rising), at_b.touch[index_of(rising)]))
      throw climbs(request.lateral, rising);
  }
  RigidTrial trial = at_a;
  double roll = b;
  for (int k = 0; k < 120; ++k) {
    roll = k % 6 == 5 ? 0.5 * (a + b) : (a * fb - b * fa) / (fb - fa);
    trial = balance.at(roll);
    const double f = trial.difference();
    if (std::abs(f) < kLevel_mm || std::abs(b - a) < 1e-16) break;
    if (f * direction > 0.0) {
      a = roll;
      fa = f;
      fb *= 0.7;
    } else {
      b = roll;
      fb = f;
      fa *= 0.7;
    }
  }
  return {roll, trial};
}

Balanced solve_roll(Balance& balance, const LocatorTables& tables, const RigidRequest& request, double guess) {
  double roll = guess;
  RigidTrial trial = balance.at(roll);
  double best = std::numeric_limits<double>::infinity();
  double low = -std::numeric_limits<double>::infinity(), high = -low;  // the difference falls with the roll
  for (int k = 0; k < 40; ++k) {
    const double f = trial.difference();
    if (std::abs(f) < kLevel_mm) break;
    if (k > 3 && std::abs(f) >= best && std::abs(f) < 20.0 * kLevel_mm) break;  // rounding
    best = std::min(best, std::abs(f));
    if (!(trial.slope() < -1.0)) return search_outward(balance, tables, request);
    (f > 0.0 ? low : high) = roll;
    if (high - low < 1e-16) break;
    roll += std::clamp(-f / trial.slope(), -kLongestStep_rad, kLongestStep_rad);
    // A touching point that leaps puts a kink in the difference, over which Newton's step may go to and fro.
    if (!(roll > low && roll < high) || k > 8) roll = std::isfinite(high - low) ? 0.5 * (low + high) : roll;
    if (std::abs(roll) > kMostRoll_rad) return search_outward(balance, tables, request);
    trial = balance.at(roll);
  }
  if (!(std::abs(trial.difference()) < 20.0 * kLevel_mm || high - low < 1e-15) || !(trial.slope() < 0.0))
    return search_outward(balance, tables, request);
  return {roll, trial};
}

// How the touching points move with the wheelset: the derivatives of both tangency conditions and of the balance.
void add_rates(const LocatorTables& tables, const RigidRequest& request, const RigidTrial& trial, double roll,
               Settled& settled) {
  const double slope_sum = trial.touch[0].tangent.y() / std::max(trial.touch[0].tangent.x(), 1e-9) +
                           trial.touch[1].tangent.y() / std::max(trial.touch[1].tangent.x(), 1e-9);
  settled.roll_rate = -slope_sum / trial.slope();
  double lateral_rate = 1.0;
  if (request.reference == LateralReference::rail)
    lateral_rate -= trial.axle_height * std::cos(request.yaw) / (std::cos(roll) * std::cos(roll)) * settled.roll_rate;
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = index_of(side);
    const Touch& touch = trial.touch[k];
    const CurvePoint wheel = tables.side(side).wheel().at(touch.t), rail = tables.side(side).rail().at(touch.tau);
    const double across = rail.curvature() / std::max(touch.tangent.x(), 1e-9);
    // Turn of the wheel's tangent less that of the rail's where the point has got to, by displacement.
    const double turn =
        side_sign(side) * ((1.0 + across * touch.wheel.z()) * settled.roll_rate - across * lateral_rate);
    const double bend = wheel.d1.norm() * (wheel.curvature() - rail.curvature());
    constexpr double kKink = 1e-10, kFlat = 1e-9;
    settled.pinned[k] = touch.at_edge || std::abs(touch.miss) > kKink || !(bend > kFlat);
    const double rate = settled.pinned[k] ? 0.0 : -turn / bend;
    settled.t[k] = touch.t;
    settled.t_rate[k] = rate;
    settled.wheel_y_rate[k] = rate * wheel.d1.x();
    settled.contact.touch[k].rolling_radius_rate = -rate * wheel.d1.y();
  }
}

Settled settled_at(const LocatorTables& tables, const RigidRequest& request, double roll, const RigidTrial& trial) {
  Settled settled;
  RigidContact& contact = settled.contact;
  contact.pose = {request.lateral, request.reference, request.yaw, roll,
                  trial.axle_height - tables.nominal_height_mm()};
  for (const Side side : {Side::left, Side::right}) {
    contact.touch[index_of(side)] =
        rigid_touch(tables.side(side), side, trial.touch[index_of(side)], trial.axle_height, request.lateral);
  }
  add_rates(tables, request, trial, roll, settled);
  return settled;
}

}  // namespace

double Balance::lateral_by_roll(double roll) const {
  if (request_.reference == LateralReference::axle) return 0.0;
  return -height_ * std::cos(request_.yaw) / (std::cos(roll) * std::cos(roll));
}

SidePose Balance::pose(Side side, double roll) const {
  double lateral = request_.lateral;
  if (request_.reference == LateralReference::rail) lateral -= height_ * std::tan(roll) * std::cos(request_.yaw);
  return side_pose(side, lateral, request_.yaw, roll, 0.0);
}

// What a touching point says of the axle's height.
void Balance::weigh(Side side, double roll, const SidePose& pose, RigidTrial& trial) const {
  const std::size_t k = index_of(side);
  const double sign = side_sign(side);
  const Touch& touch = trial.touch[k];
  trial.height[k] = -touch.gap;
  const Vec3 r = touch.wheel - pose.centre;
  const double slope = touch.tangent.y() / std::max(touch.tangent.x(), 1e-9);
  const double c = std::cos(pose.yaw), s = std::sin(pose.yaw);
  const double gap_by_roll = sign * (c * r.y() - s * r.x() + slope * c * r.z());
  const double gap_by_lateral = -sign * slope;
  trial.d_roll[k] = -(gap_by_roll + gap_by_lateral * lateral_by_roll(roll));
}

RigidTrial Balance::at(double roll) {
  // At rail level the axle's own position depends on its height, weakly: two rounds settle it to rounding.
  const int rounds = request_.reference == LateralReference::axle ? 1 : 6;
  RigidTrial trial;
  for (int k = 0; k < rounds; ++k) {
    for (const Side side : {Side::left, Side::right}) {
      const SidePose seen = pose(side, roll);
      if (!tables_.side(side).lowest(seen, space_, trial.touch[index_of(side)])) throw runs_off(request_.lateral, side);
      weigh(side, roll, seen, trial);
    }
    trial.axle_height = 0.5 * (trial.height[0] + trial.height[1]);
    const double change = std::abs(trial.axle_height - height_);
    height_ = trial.axle_height;
    if (change * std::abs(std::tan(roll)) < 1e-13) break;
  }
  return trial;
}

namespace {

constexpr double kLongestSlide_mm = 1.0;  // of one step: further off, the curvatures say nothing
constexpr double kTangent = 1e-12;        // angle at which the tangents of wheel and rail are one
constexpr double kEdge = 1e-3;            // angle beyond which a kink is an edge
constexpr double kPlace_mm = 1e-9;        // of a touching point; the height depends on its square

}  // namespace

bool Balance::holds(Side side, double roll, double t) const {
  constexpr double kBeside_mm = 1e-5, kRounding_mm = 1e-12;
  const SidePose seen = pose(side, roll);
  const SideGeometry& geometry = tables_.side(side);
  const double here = geometry.sample(t, seen).gap - kRounding_mm;
  return geometry.sample(t - kBeside_mm, seen).gap > here && geometry.sample(t + kBeside_mm, seen).gap > here;
}

bool Balance::follow(double& roll, std::array<double, 2>& t, const std::array<bool, 2>& pinned, RigidTrial& trial) {
  constexpr int kMost = 12;
  for (int n = 0; n < kMost; ++n) {
    bool in_place = true;
    std::array<double, 2> step{};
    for (const Side side : {Side::left, Side::right}) {
      const std::size_t k = index_of(side);
      const SidePose seen = pose(side, roll);
      const SideGeometry::Sampled s = tables_.side(side).sample(t[k], seen);
      if (!std::isfinite(s.gap)) return false;
      if (!pinned[k]) {
        if (!(s.bend > 0.0)) return false;
        step[k] = -s.slope_difference / s.bend;
        if (!(std::abs(step[k]) < kLongestSlide_mm)) return false;
      }
      in_place = in_place && (pinned[k] || std::abs(step[k]) < kPlace_mm || std::abs(s.slope_difference) < kTangent);
      Touch& touch = trial.touch[k];
      touch.t = t[k];
      touch.tau = s.rail.tau;
      touch.wheel = s.wheel.position;
      touch.rail = s.rail.position;
      touch.tangent = s.rail.tangent;
      // The gap where the step leads, so that the balance is right to the second order already.
      touch.gap = s.gap + 0.5 * step[k] * s.speed * s.slope_difference / std::max(s.rail.tangent.x(), 1e-9);
      touch.miss = s.slope_difference;
      touch.at_edge = pinned[k] && std::abs(touch.miss) > kEdge;
      weigh(side, roll, seen, trial);
    }
    trial.axle_height = 0.5 * (trial.height[0] + trial.height[1]);
    const double change = std::abs(trial.axle_height - height_) * std::abs(std::tan(roll));
    height_ = trial.axle_height;
    const double f = trial.difference();
    if (!(trial.slope() < -1.0)) return false;
    const bool level = std::abs(f) < (n < 5 ? 1.0 : 10.0) * kLevel_mm;
    if (in_place && level && (request_.reference == LateralReference::axle || change < 1e-13)) return true;
    roll += std::clamp(-f / trial.slope(), -kLongestStep_rad, kLongestStep_rad);
    if (std::abs(roll) > kMostRoll_rad) return false;
    for (const std::size_t k : {0u, 1u}) t[k] += step[k];
  }
  return false;
}

bool Balance::slide(Side side, double roll, bool pinned, double& t, double& gap_mm) {
  const SidePose seen = pose(side, roll);
  for (int n = 0; n < 12; ++n) {
    const SideGeometry::Sampled s = tables_.side(side).sample(t, seen);
    gap_mm = s.gap;
    if (!std::isfinite(s.gap)) return false;
    if (pinned) return true;
    if (!(s.bend > 0.0)) return false;
    const double step = -s.slope_difference / s.bend;
    if (!(std::abs(step) < kLongestSlide_mm)) return false;
    gap_mm = s.gap + 0.5 * step * s.speed * s.slope_difference / std::max(s.rail.tangent.x(), 1e-9);
    if (std::abs(step) < 1e-6) return true;
    t += step;
  }
  return false;
}

bool Balance::undercut(double roll, RigidTrial& trial, std::array<double, 2>& margin_mm) {
  bool any = false;
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = index_of(side);
    any = tables_.side(side).undercut(pose(side, roll), space_, trial.touch[k], margin_mm[k]) || any;
  }
  return any;
}

RigidTouch rigid_touch(const SideGeometry& geometry, Side side, const Touch& touch, double axle_height_mm,
                       double lateral_mm) {
  if (has_climbed(geometry, touch)) throw climbs(lateral_mm, side);
  RigidTouch result;
  const CurvePoint wheel = geometry.wheel().at(touch.t), rail = geometry.rail().at(touch.tau);
  result.wheel_y_mm = wheel.y();
  result.wheel_z_mm = wheel.z();
  result.rail_y_mm = rail.y();
  result.rail_z_mm = rail.z();
  result.contact_angle_rad = std::atan2(touch.tangent.y(), touch.tangent.x());
  result.rolling_radius_mm = geometry.rolling_radius(wheel.z());
  result.track_mm = Vec3(touch.wheel.x(), side_sign(side) * touch.wheel.y(), touch.wheel.z() + axle_height_mm);
  return result;
}

Settled settle(const LocatorTables& tables, const RigidRequest& request, double roll_guess, SearchSpace& space) {
  if (!std::isfinite(request.lateral)) throw out_of_range("state", "lateral_mm", request.lateral, "mm", "finite");
  if (!(std::abs(request.yaw) <= kMostYaw_rad))
    throw out_of_range("state", "yaw_mrad", 1e3 * request.yaw, "mrad", "-200 to 200");
  Balance balance(tables, request, space);
  const Balanced balanced = solve_roll(balance, tables, request, roll_guess);
  return settled_at(tables, request, balanced.roll, balanced.trial);
}

Settled settle_near(const LocatorTables& tables, const RigidRequest& request, const Settled& neighbour,
                    SearchSpace& space) {
  const double moved = request.lateral - neighbour.contact.pose.lateral_mm;
  double roll = neighbour.contact.pose.roll_rad + neighbour.roll_rate * moved;
  std::array<double, 2> t = neighbour.t;
  for (const std::size_t k : {0u, 1u})
    if (const double ahead = neighbour.t_rate[k] * moved; std::abs(ahead) < kLongestSlide_mm) t[k] += ahead;
  std::array<bool, 2> pinned = neighbour.pinned;
  RigidTrial trial;
  Balance balance(tables, request, space);
  constexpr int kMostLeaps = 3;
  for (int n = 0; n < kMostLeaps && std::isfinite(request.lateral) && balance.follow(roll, t, pinned, trial); ++n) {
    std::array<double, 2> margin{};
    if ((pinned[0] && !balance.holds(Side::left, roll, t[0])) || (pinned[1] && !balance.holds(Side::right, roll, t[1])))
      break;
    if (!balance.undercut(roll, trial, margin)) {
      Settled settled = settled_at(tables, request, roll, trial);
      settled.margin_mm = margin;
      return settled;
    }
    for (const std::size_t k : {0u, 1u}) {
      if (t[k] == trial.touch[k].t) continue;
      t[k] = trial.touch[k].t;
      pinned[k] = false;
    }
  }
  return settle(tables, request, neighbour.contact.pose.roll_rad, space);
}

}  // namespace runband
