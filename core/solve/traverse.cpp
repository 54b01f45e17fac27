// The wheelset moved across the track, position by position.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/solve/solution.h"
#include "core/solve/wheelset_analyses.h"

namespace runband {

Traverse traverse(const Case& c, double from_mm, double to_mm, double step_mm, const Progress& progress,
                  const AnalysisChoice& choice) {
  if (!std::isfinite(from_mm) || !std::isfinite(to_mm) || !std::isfinite(step_mm) || !(step_mm > 0) ||
      !(to_mm >= from_mm)) {
    throw InputError(ErrorCode::out_of_range,
                     "traverse: from " + number_text(from_mm) + " to " + number_text(to_mm) + " mm by " +
                         number_text(step_mm) + " mm is not a traverse: the step must be above 0 and lead upward.",
                     "write for example --from -6 --to 6 --step 0.1.");
  }
  const double count = std::floor((to_mm - from_mm) / step_mm + 1e-9);
  if (count > 100000)
    throw InputError(ErrorCode::out_of_range,
                     "traverse: " + number_text(count + 1, 7) + " positions; at most 100000 are made.",
                     "use a larger --step.");
  std::vector<double> positions;
  for (int i = 0; i <= static_cast<int>(count); ++i) positions.push_back(from_mm + i * step_mm);
  return traverse(c, positions, progress, choice);
}

Traverse traverse(const Case& c, const std::vector<double>& positions, const Progress& progress,
                  const AnalysisChoice& choice) {
  progress.at(0.0, "reading profiles");
  return traverse(c, c.bench ? nullptr : prepare(c), positions, progress, choice);
}

Traverse traverse(const Case& c, std::shared_ptr<const Locator> locator, const std::vector<double>& positions,
                  const Progress& progress, const AnalysisChoice& choice) {
  if (c.bench)
    throw InputError(ErrorCode::conflicting_keys, "traverse: a bench case has no wheelset to move.",
                     "name a case with [wheel] and [rail].");
  if (positions.empty()) throw InputError(ErrorCode::out_of_range, "traverse: no positions.", "");
  refuse_missing_analyses(c, *choice.registry);
  Traverse t;
  t.asked = c;
  t.locator = std::move(locator);
  const double yaw_rad = c.state.yaw_mrad * 1e-3;
  // Some positions at a time: each is followed from the one before it, and the user can stop in between.
  constexpr std::size_t kAtATime = 64;
  std::vector<RigidContact> contacts;
  for (std::size_t i = 0; i < positions.size(); ++i) {
    if (i % kAtATime == 0) {
      progress.at(0.1 + 0.7 * static_cast<double>(i) / static_cast<double>(positions.size()),
                  "moving across the track");
      const auto from = positions.begin() + static_cast<std::ptrdiff_t>(i);
      const auto count = static_cast<std::ptrdiff_t>(std::min(kAtATime, positions.size() - i));
      contacts = t.locator->rigid(std::vector<double>(from, from + count), yaw_rad, c.state.reference);
    }
    const RigidContact& contact = contacts[i % kAtATime];
    t.lateral_mm.push_back(positions[i]);
    t.rolling_radius_difference_mm.push_back(contact.touch[0].rolling_radius_mm - contact.touch[1].rolling_radius_mm);
    t.roll_mrad.push_back(contact.pose.roll_rad * 1e3);
    t.height_mm.push_back(contact.pose.height_mm);
    for (const Side side : {Side::left, Side::right}) {
      SideTraverse& out = side == Side::left ? t.left : t.right;
      const RigidTouch& touch = contact.touch[side == Side::left ? 0 : 1];
      out.contact_angle_deg.push_back(touch.contact_angle_rad * 180.0 / std::numbers::pi);
      out.rolling_radius_mm.push_back(touch.rolling_radius_mm);
      out.wheel_y_mm.push_back(touch.wheel_y_mm);
      out.rail_y_mm.push_back(touch.rail_y_mm);
    }
  }
  progress.at(0.85, "finding contact jumps");
  if (positions.back() > positions.front())
    t.jumps = t.locator->jumps(positions.front(), positions.back(), yaw_rad, c.state.reference);
  const WheelsetPose middle{0.5 * (positions.front() + positions.back()), c.state.reference, yaw_rad, 0, 0};
  t.analyses = analyses_of_wheelset(c, *t.locator, middle, choice, progress);
  add_plugin_problems(*choice.registry, t.cautions);
  t.cautions.push_back(
      {"lateral_reference", Severity::note,
       std::string("Lateral displacement is taken at ") +
           (c.state.reference == LateralReference::axle ? "the axle centre" : "the height of the running surface") +
           "; the other choice differs by some per cent in conicity."});
  progress.at(1.0, "done");
  return t;
}

}  // namespace runband
