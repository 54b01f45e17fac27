// Rigid contact: the roll and the height at which both wheels touch.
#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/locate/tables.h"

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

InputError climbs(double lateral_mm, const std::string& side) {
  return no_contact(lateral_mm, "the " + side + " flange would climb its rail.",
                    "move the wheelset nearer to the centre of the track, or widen the gauge.");
}

// Both wheels at a trial roll.
struct Trial {
  std::array<Touch, 2> touch;
  std::array<double, 2> height{};  // of the axle centre, as each wheel wants it
  std::array<double, 2> d_roll{};  // d height / d roll
  double axle_height = 0;          // mean of the two
  double difference() const { return height[0] - height[1]; }
  double slope() const { return d_roll[0] - d_roll[1]; }
};

struct Request {
  double lateral, yaw;
  LateralReference reference;
};

class Balance {
 public:
  Balance(const std::array<std::shared_ptr<const SideGeometry>, 2>& sides, const Request& request, double nominal)
      : sides_(sides), request_(request), height_(nominal) {}

  Trial at(double roll) {
    // At rail level the axle's own position depends on its height, weakly: two rounds settle it to rounding.
    const int rounds = request_.reference == LateralReference::axle ? 1 : 6;
    Trial trial;
    for (int k = 0; k < rounds; ++k) {
      trial = once(roll, height_);
      const double change = std::abs(trial.axle_height - height_);
      height_ = trial.axle_height;
      if (change * std::abs(std::tan(roll)) < 1e-13) break;
    }
    return trial;
  }

 private:
  Trial once(double roll, double axle_height) {
    Trial trial;
    const double lean = std::cos(request_.yaw);
    double lateral = request_.lateral, lateral_by_roll = 0.0;
    if (request_.reference == LateralReference::rail) {
      lateral -= axle_height * std::tan(roll) * lean;
      lateral_by_roll = -axle_height * lean / (std::cos(roll) * std::cos(roll));
    }
    for (const Side side : {Side::left, Side::right}) {
      const std::size_t k = side == Side::left ? 0 : 1;
      const double sign = side_sign(side);
      const SidePose pose = side_pose(side, lateral, request_.yaw, roll, 0.0);
      Touch& touch = trial.touch[k];
      if (!sides_[k]->lowest(pose, space_, touch)) throw runs_off(request_.lateral, side);
      trial.height[k] = -touch.gap;
      const Vec3 r = touch.wheel - pose.centre;
      const double slope = touch.tangent.y() / std::max(touch.tangent.x(), 1e-9);
      const double c = std::cos(pose.yaw), s = std::sin(pose.yaw);
      const double gap_by_roll = sign * (c * r.y() - s * r.x() + slope * c * r.z());
      const double gap_by_lateral = -sign * slope;
      trial.d_roll[k] = -(gap_by_roll + gap_by_lateral * lateral_by_roll);
    }
    trial.axle_height = 0.5 * (trial.height[0] + trial.height[1]);
    return trial;
  }

  const std::array<std::shared_ptr<const SideGeometry>, 2>& sides_;
  Request request_;
  double height_;
  SearchSpace space_;
};

struct Balanced {
  double roll = 0;
  Trial trial;
};

// From no roll outwards until the difference changes sign, then false position. For positions where Newton's step
// leads astray: steep flanges, where the wheel that should sink rises.
Balanced search_outward(Balance& balance, const Request& request) {
  double a = 0.0;
  Trial at_a = balance.at(a);
  double fa = at_a.difference();
  if (fa == 0.0) return {a, at_a};
  const double direction = fa > 0.0 ? 1.0 : -1.0;
  double step = 5e-5;
  double b = a, fb = fa;
  while (fb * direction > 0.0) {
    a = b;
    fa = fb;
    b += direction * step;
    step = std::min(1.2 * step, 5e-4);
    if (std::abs(b) > kMostRoll_rad) throw climbs(request.lateral, direction > 0.0 ? "left" : "right");
    fb = balance.at(b).difference();
  }
  Trial trial = at_a;
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

Balanced solve_roll(Balance& balance, const Request& request, double guess) {
  double roll = guess;
  Trial trial = balance.at(roll);
  double best = std::numeric_limits<double>::infinity();
  for (int k = 0; k < 14; ++k) {
    const double f = trial.difference();
    if (std::abs(f) < kLevel_mm) break;
    if (k > 3 && std::abs(f) >= best && std::abs(f) < 20.0 * kLevel_mm) break;  // rounding
    best = std::min(best, std::abs(f));
    if (!(trial.slope() < -1.0)) return search_outward(balance, request);
    const double step = std::clamp(-f / trial.slope(), -kLongestStep_rad, kLongestStep_rad);
    roll += step;
    if (std::abs(roll) > kMostRoll_rad) return search_outward(balance, request);
    trial = balance.at(roll);
  }
  if (std::abs(trial.difference()) > 20.0 * kLevel_mm || !(trial.slope() < 0.0))
    return search_outward(balance, request);
  return {roll, trial};
}

RigidTouch describe(const SideGeometry& geometry, Side side, const Touch& touch, double axle_height) {
  RigidTouch result;
  const CurvePoint wheel = geometry.wheel().at(touch.t), rail = geometry.rail().at(touch.tau);
  result.wheel_y_mm = wheel.y();
  result.wheel_z_mm = wheel.z();
  result.rail_y_mm = rail.y();
  result.rail_z_mm = rail.z();
  result.contact_angle_rad = std::atan2(touch.tangent.y(), touch.tangent.x());
  result.rolling_radius_mm = geometry.rolling_radius(wheel.z());
  result.track_mm = Vec3(touch.wheel.x(), side_sign(side) * touch.wheel.y(), touch.wheel.z() + axle_height);
  return result;
}

void require_no_climb(const SideGeometry& geometry, Side side, const Touch& touch, double lateral_mm) {
  // A wheel without a flange has nothing to climb with.
  constexpr double kFlange_rad = 0.5;
  if (geometry.flange_angle() > kFlange_rad && touch.t < geometry.climb_t()) throw climbs(lateral_mm, side_name(side));
}

RigidContact settle(const LocatorTables& tables, const Request& request, double guess) {
  if (!std::isfinite(request.lateral)) throw out_of_range("state", "lateral_mm", request.lateral, "mm", "finite");
  if (!(std::abs(request.yaw) <= kMostYaw_rad))
    throw out_of_range("state", "yaw_mrad", 1e3 * request.yaw, "mrad", "-200 to 200");
  Balance balance(tables.sides, request, tables.nominal_height_mm());
  const Balanced balanced = solve_roll(balance, request, guess);
  RigidContact contact;
  contact.pose = {request.lateral, request.reference, request.yaw, balanced.roll,
                  balanced.trial.axle_height - tables.nominal_height_mm()};
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = side == Side::left ? 0 : 1;
    require_no_climb(tables.side(side), side, balanced.trial.touch[k], request.lateral);
    contact.touch[k] = describe(tables.side(side), side, balanced.trial.touch[k], balanced.trial.axle_height);
  }
  return contact;
}

// Jumps between two positions: halves every stretch over which a touching point moves further than it would by sliding.
struct JumpSearch {
  const LocatorTables& tables;
  Request request;
  std::vector<ContactJump>& found;

  RigidContact at(double lateral, double guess) const {
    Request here = request;
    here.lateral = lateral;
    return settle(tables, here, guess);
  }
  void between(Side side, double y0, const RigidContact& c0, double y1, const RigidContact& c1) const {
    constexpr double kSlide_mm = 0.02;    // a point that moved less has not jumped
    constexpr double kFound_mm = 2.5e-7;  // width of the last stretch
    const std::size_t k = side == Side::left ? 0 : 1;
    const double from = c0.touch[k].wheel_y_mm, to = c1.touch[k].wheel_y_mm;
    if (std::abs(to - from) < kSlide_mm) return;
    if (y1 - y0 < kFound_mm) {
      found.push_back({side, 0.5 * (y0 + y1), from, to});
      return;
    }
    const double middle = 0.5 * (y0 + y1);
    const RigidContact c = at(middle, 0.5 * (c0.pose.roll_rad + c1.pose.roll_rad));
    between(side, y0, c0, middle, c);
    between(side, middle, c, y1, c1);
  }
};

// Where wheel and rail are nearly arcs of one radius, the point runs along the arc within less than any track is laid
// to: that is one jump, put where most of it happens.
void join_jumps(std::vector<ContactJump>& jumps) {
  constexpr double kTogether_mm = 1e-4;
  std::vector<ContactJump> joined;
  double last = 0.0, longest = 0.0;
  for (const ContactJump& jump : jumps) {
    const double length = std::abs(jump.wheel_y_to_mm - jump.wheel_y_from_mm);
    if (!joined.empty() && jump.lateral_mm - last < kTogether_mm) {
      joined.back().wheel_y_to_mm = jump.wheel_y_to_mm;
      if (length > longest) joined.back().lateral_mm = jump.lateral_mm;
      longest = std::max(longest, length);
    } else {
      joined.push_back(jump);
      longest = length;
    }
    last = jump.lateral_mm;
  }
  jumps = std::move(joined);
}

}  // namespace

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
  return settle(*tables_, {lateral_mm, yaw_rad, reference}, 0.0);
}

std::vector<RigidContact> Locator::rigid(const std::vector<double>& lateral_mm, double yaw_rad,
                                         LateralReference reference) const {
  std::vector<RigidContact> contacts;
  contacts.reserve(lateral_mm.size());
  for (const double lateral : lateral_mm) {
    const double guess = contacts.empty() ? 0.0 : contacts.back().pose.roll_rad;
    contacts.push_back(settle(*tables_, {lateral, yaw_rad, reference}, guess));
  }
  return contacts;
}

RigidContact Locator::rigid_without_roll(double lateral_mm, double yaw_rad) const {
  const Request request{lateral_mm, yaw_rad, LateralReference::axle};
  Balance balance(tables_->sides, request, tables_->nominal_height_mm());
  const Trial trial = balance.at(0.0);
  RigidContact contact;
  contact.pose = {lateral_mm, LateralReference::axle, yaw_rad, 0.0, trial.axle_height - tables_->nominal_height_mm()};
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = side == Side::left ? 0 : 1;
    require_no_climb(tables_->side(side), side, trial.touch[k], lateral_mm);
    contact.touch[k] = describe(tables_->side(side), side, trial.touch[k], trial.height[k]);
  }
  return contact;
}

std::vector<ContactJump> Locator::jumps(double from_mm, double to_mm, double yaw_rad,
                                        LateralReference reference) const {
  if (!(std::isfinite(from_mm) && std::isfinite(to_mm) && from_mm <= to_mm))
    throw out_of_range("traverse", "from_mm", from_mm, "mm", "at most to_mm (" + number_text(to_mm) + ")");
  constexpr double kStep_mm = 0.1;
  const int steps = std::max(1, static_cast<int>(std::ceil((to_mm - from_mm) / kStep_mm)));
  std::vector<double> lateral;
  for (int k = 0; k <= steps; ++k) lateral.push_back(from_mm + (to_mm - from_mm) * k / steps);
  const std::vector<RigidContact> contacts = rigid(lateral, yaw_rad, reference);
  std::vector<ContactJump> jumps;
  for (const Side side : {Side::left, Side::right}) {
    std::vector<ContactJump> found;
    const JumpSearch search{*tables_, {0.0, yaw_rad, reference}, found};
    for (std::size_t i = 1; i < contacts.size(); ++i)
      search.between(side, lateral[i - 1], contacts[i - 1], lateral[i], contacts[i]);
    join_jumps(found);
    jumps.insert(jumps.end(), found.begin(), found.end());
  }
  std::stable_sort(jumps.begin(), jumps.end(),
                   [](const ContactJump& a, const ContactJump& b) { return a.lateral_mm < b.lateral_mm; });
  return jumps;
}

}  // namespace runband
