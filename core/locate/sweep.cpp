// The wheelset moved across the track: positions as dense as they need to be, and the jumps of its touching points.
#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/locate/balance.h"

namespace runband {

namespace {

constexpr double kStep_mm = 0.2;      // between positions that are always looked at
constexpr double kSlide_mm = 0.02;    // of a touching point, not foretold by its rate: it may have jumped
constexpr double kRadius_mm = 1e-3;   // of a rolling radius, not foretold
constexpr double kSmooth_mm = 1e-3;   // closer positions are not refined for the rolling radius
constexpr double kRates = 4.0;        // between the rates of two neighbours
constexpr double kRival_mm = 1e-3;    // a minimum no higher than this at two neighbours may win in between...
constexpr double kApart_mm = 0.04;    // ...unless they are closer than this
constexpr double kFound_mm = 2.5e-7;  // width of the stretch that a jump is found to
constexpr double kEnd_mm = 0.01;      // to which the end of contact is found

class Sweep {
 public:
  Sweep(const LocatorTables& tables, double yaw, LateralReference reference)
      : tables_(tables), yaw_(yaw), reference_(reference) {}

  RigidSweep over(double from, double to) {
    const double start = std::clamp(0.0, from, to);
    Settled middle = settle(tables_, request(start), 0.0, space_);
    std::vector<Settled> down = outward(middle, from), up = outward(middle, to);
    std::vector<Settled> all(down.rbegin(), down.rend());
    all.push_back(std::move(middle));
    all.insert(all.end(), up.begin(), up.end());
    sweep_.contacts.push_back(all.front().contact);
    for (std::size_t i = 1; i < all.size(); ++i) {
      fill(all[i - 1], all[i], true);
      sweep_.contacts.push_back(all[i].contact);
    }
    return std::move(sweep_);
  }

 private:
  RigidRequest request(double lateral) const { return {lateral, yaw_, reference_}; }
  Settled near(double lateral, const Settled& neighbour) {
    return settle_near(tables_, request(lateral), neighbour, space_);
  }

  // Positions from `start` (left out) to `end`, or as far as there is contact.
  std::vector<Settled> outward(const Settled& start, double end) {
    std::vector<Settled> positions;
    const double from = start.contact.pose.lateral_mm, way = end - from;
    const int steps = static_cast<int>(std::ceil(std::abs(way) / kStep_mm - 1e-9));
    for (int k = 1; k <= steps; ++k) {
      const Settled& last = positions.empty() ? start : positions.back();
      if (auto next = contact_at(from + way * k / steps, last)) {
        positions.push_back(std::move(*next));
        continue;
      }
      double inside = last.contact.pose.lateral_mm, outside = from + way * k / steps;
      while (std::abs(outside - inside) > kEnd_mm) {
        const double half = 0.5 * (inside + outside);
        const Settled& here = positions.empty() ? start : positions.back();
        auto next_half = contact_at(half, here);
        (next_half ? inside : outside) = half;
        if (next_half) positions.push_back(std::move(*next_half));
      }
      break;
    }
    return positions;
  }
  std::optional<Settled> contact_at(double lateral, const Settled& neighbour) {
    try {
      return near(lateral, neighbour);
    } catch (const InputError& error) {
      if (error.code() != ErrorCode::no_contact) throw;
      return std::nullopt;
    }
  }

  static bool moves_as_foretold(const Settled& c0, const Settled& c1, std::size_t k) {
    const double h = c1.contact.pose.lateral_mm - c0.contact.pose.lateral_mm;
    const RigidTouch &from = c0.contact.touch[k], &to = c1.contact.touch[k];
    const double slow = std::min(std::abs(c0.wheel_y_rate[k]), std::abs(c1.wheel_y_rate[k])),
                 fast = std::max(std::abs(c0.wheel_y_rate[k]), std::abs(c1.wheel_y_rate[k]));
    const double moved = to.wheel_y_mm - from.wheel_y_mm;
    const double slid = 0.5 * h * (c0.wheel_y_rate[k] + c1.wheel_y_rate[k]);
    // Written so that a rate that is not a number is not foretelling anything.
    const bool still = std::abs(moved) < kSlide_mm;
    if (!still && !(std::abs(moved - slid) < kSlide_mm && fast <= kRates * slow + kSlide_mm / h)) return false;
    if (h > kSmooth_mm) {
      const double grown = 0.5 * h * (from.rolling_radius_rate + to.rolling_radius_rate);
      const double grew = to.rolling_radius_mm - from.rolling_radius_mm;
      if (!(std::abs(grew) < kRadius_mm || std::abs(grew - grown) < kRadius_mm)) return false;
    }
    return !(h > kApart_mm && c0.margin_mm[k] < kRival_mm && c1.margin_mm[k] < kRival_mm);
  }

  // Everything strictly between two positions. `look`: whether to guess where the jump is before halving.
  void fill(const Settled& c0, const Settled& c1, bool look) {
    const double y0 = c0.contact.pose.lateral_mm, y1 = c1.contact.pose.lateral_mm;
    if (y1 - y0 < kFound_mm) {
      for (const Side side : {Side::left, Side::right}) {
        const std::size_t k = side == Side::left ? 0 : 1;
        const double from = c0.contact.touch[k].wheel_y_mm, to = c1.contact.touch[k].wheel_y_mm;
        if (std::abs(to - from) >= kSlide_mm) sweep_.jumps.push_back({side, 0.5 * (y0 + y1), from, to});
      }
      return;
    }
    bool smooth = true;
    for (const Side side : {Side::left, Side::right}) {
      const std::size_t k = side == Side::left ? 0 : 1;
      if (moves_as_foretold(c0, c1, k)) continue;
      smooth = false;
      constexpr double kBeside = 0.48 * kFound_mm;
      double at = 0;
      if (!look || !crossing(c0, c1, side, at) || at - kBeside <= y0 || at + kBeside >= y1) continue;
      const Settled before = near(at - kBeside, c0), after = near(at + kBeside, c1);
      const bool there = std::abs(after.contact.touch[k].wheel_y_mm - before.contact.touch[k].wheel_y_mm) > kSlide_mm;
      fill(c0, before, there);
      sweep_.contacts.push_back(before.contact);
      fill(before, after, false);
      sweep_.contacts.push_back(after.contact);
      fill(after, c1, there);
      return;
    }
    if (smooth) return;
    const Settled middle = near(0.5 * (y0 + y1), c0);
    fill(c0, middle, true);
    sweep_.contacts.push_back(middle.contact);
    fill(middle, c1, true);
  }

  // Where the touching point of c0 gives way to that of c1: both are followed to the position at which neither lies
  // lower. False where one of them ends before.
  bool crossing(const Settled& c0, const Settled& c1, Side side, double& at) {
    const std::size_t k = side == Side::left ? 0 : 1;
    double roll = c0.contact.pose.roll_rad;
    std::array<double, 2> t = c0.t;
    std::array<bool, 2> pinned = c0.pinned;
    double rival = c1.t[k];
    if (std::abs(rival - t[k]) < kSlide_mm) return false;
    RigidTrial trial;
    // Height of the old touching point's gap over the new one's.
    const auto lead = [&](double y, double& value) {
      Balance balance(tables_, request(y), space_);
      double gap = 0;
      if (!balance.follow(roll, t, pinned, trial) || !balance.slide(side, roll, c1.pinned[k], rival, gap)) return false;
      if (std::abs(rival - t[k]) < 1e-3) return false;
      value = trial.touch[k].gap - gap;
      return true;
    };
    double low = c0.contact.pose.lateral_mm, high = c1.contact.pose.lateral_mm, f_low = 0, f_high = 0;
    if (!lead(low, f_low) || !lead(high, f_high) || !(f_low <= 0.0) || !(f_high >= 0.0)) return false;
    for (int n = 0; n < 30; ++n) {
      const double span = f_high - f_low;
      at = span > 0.0 ? low - f_low * (high - low) / span : 0.5 * (low + high);
      double f = 0;
      if (!lead(at, f)) return false;
      if (std::abs(f) < 1e-12) return true;
      if (f < 0.0) {
        if (at - low < 1e-9) return true;
        low = at, f_low = f, f_high *= 0.5;
      } else {
        if (high - at < 1e-9) return true;
        high = at, f_high = f, f_low *= 0.5;
      }
    }
    return true;
  }

  const LocatorTables& tables_;
  double yaw_;
  LateralReference reference_;
  SearchSpace space_;
  RigidSweep sweep_;
};

// Where wheel and rail are nearly arcs of one radius, the point runs along the arc within less than any track is laid
// to: that is one jump, put where most of it happens.
void join_jumps(std::vector<ContactJump>& jumps) {
  constexpr double kTogether_mm = 1e-4;
  std::vector<ContactJump> joined;
  std::array<double, 2> last{-INFINITY, -INFINITY}, longest{};
  std::array<std::size_t, 2> place{};
  for (const ContactJump& jump : jumps) {
    const std::size_t k = jump.side == Side::left ? 0 : 1;
    const double length = std::abs(jump.wheel_y_to_mm - jump.wheel_y_from_mm);
    if (jump.lateral_mm - last[k] < kTogether_mm) {
      ContactJump& same = joined[place[k]];
      same.wheel_y_to_mm = jump.wheel_y_to_mm;
      if (length > longest[k]) same.lateral_mm = jump.lateral_mm;
      longest[k] = std::max(longest[k], length);
    } else {
      place[k] = joined.size();
      joined.push_back(jump);
      longest[k] = length;
    }
    last[k] = jump.lateral_mm;
  }
  jumps = std::move(joined);
}

}  // namespace

RigidSweep Locator::sweep(double from_mm, double to_mm, double yaw_rad, LateralReference reference) const {
  if (!(std::isfinite(from_mm) && std::isfinite(to_mm) && from_mm <= to_mm))
    throw out_of_range("traverse", "from_mm", from_mm, "mm", "at most to_mm (" + number_text(to_mm) + ")");
  RigidSweep sweep = Sweep(*tables_, yaw_rad, reference).over(from_mm, to_mm);
  join_jumps(sweep.jumps);
  std::stable_sort(sweep.jumps.begin(), sweep.jumps.end(),
                   [](const ContactJump& a, const ContactJump& b) { return a.lateral_mm < b.lateral_mm; });
  return sweep;
}

std::vector<ContactJump> Locator::jumps(double from_mm, double to_mm, double yaw_rad,
                                        LateralReference reference) const {
  RigidSweep found = sweep(from_mm, to_mm, yaw_rad, reference);
  for (const double end : {from_mm, to_mm}) {
    const double reached = (end == from_mm ? found.contacts.front() : found.contacts.back()).pose.lateral_mm;
    if (std::abs(reached - end) > 1e-9) rigid(end, yaw_rad, reference);
  }
  return std::move(found.jumps);
}

}  // namespace runband
