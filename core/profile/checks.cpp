#include "core/profile/checks.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/profile/outline.h"

namespace runband {

namespace {

double median(std::vector<double> values) {
  const auto middle = values.begin() + static_cast<std::ptrdiff_t>(values.size() / 2);
  std::nth_element(values.begin(), middle, values.end());
  return *middle;
}

std::vector<double> steps(const std::vector<Vec2>& points) {
  std::vector<double> lengths;
  for (std::size_t i = 1; i < points.size(); ++i) lengths.push_back((points[i] - points[i - 1]).norm());
  return lengths;
}

double extent(const std::vector<Vec2>& points, Eigen::Index axis) {
  const auto [low, high] = std::minmax_element(points.begin(), points.end(),
                                               [&](const Vec2& a, const Vec2& b) { return a(axis) < b(axis); });
  return (*high)(axis) - (*low)(axis);
}

struct Unit {
  const char* name;
  double in_mm;
};
constexpr std::array<Unit, 4> kUnits{{{"mm", 1.0}, {"m", 1000.0}, {"in", 25.4}, {"um", 0.001}}};

// Widths of profiles, mm: the ranges of the four units do not overlap, so a width tells them apart.
constexpr double kNarrowest_mm = 40.0, kWidest_mm = 250.0;

bool believable(double width_mm) { return width_mm >= kNarrowest_mm && width_mm <= kWidest_mm; }

// Where the flange is, or which way a rail head is round, in the file's own axes.
struct Shape {
  double up = 1.0;     ///< +1 if z points up
  double field = 1.0;  ///< +1 if y points to the field side (wheels only)
};

Shape shape_of(const CheckedPoints& in) {
  std::vector<double> z;
  for (const Vec2& p : in.points) z.push_back(p.y());
  const double middle = median(z);
  const auto [low, high] = std::minmax_element(in.points.begin(), in.points.end(),
                                               [](const Vec2& a, const Vec2& b) { return a.y() < b.y(); });
  Shape shape;
  // Flange and gauge face both leave the tread or the crown downwards, by more than anything leaves it upwards.
  shape.up = middle - low->y() >= high->y() - middle ? 1.0 : -1.0;
  const double flange_y = shape.up > 0.0 ? low->x() : high->x();
  const auto [left, right] = std::minmax_element(in.points.begin(), in.points.end(),
                                                 [](const Vec2& a, const Vec2& b) { return a.x() < b.x(); });
  shape.field = flange_y < 0.5 * (left->x() + right->x()) ? 1.0 : -1.0;
  return shape;
}

void require_choice(const CheckedPoints& in, const std::string& key, const std::string& value,
                    const std::vector<std::string>& choices) {
  if (value.empty() || std::find(choices.begin(), choices.end(), value) != choices.end()) return;
  throw InputError(ErrorCode::bad_option, in.origin + ": " + key + " is '" + value + "'.",
                   "it takes " + join_names(choices) + ".");
}

InputError not_covering(const std::string& origin, const std::string& what, const std::string& cure) {
  return {ErrorCode::profile_not_covering, origin + ": " + what, cure};
}

}  // namespace

void check_count(const CheckedPoints& in) {
  constexpr std::size_t kFewest = 20;
  if (in.points.size() >= kFewest) return;
  throw InputError(ErrorCode::profile_too_few_points,
                   in.origin + ": " +
                       (in.points.empty() ? "there are no points"
                                          : "there are only " + std::to_string(in.points.size()) + " points") +
                       " in it.",
                   "a profile needs at least " + std::to_string(kFewest) + ", better several hundred.");
}

void to_millimetres(CheckedPoints& in, const std::string& stated_unit) {
  const double width = std::max(extent(in.points, 0), extent(in.points, 1));
  std::string looks_like;
  for (const Unit& unit : kUnits)
    if (believable(width * unit.in_mm)) looks_like = unit.name;
  const std::string cure = looks_like.empty()
                               ? "a wheel or rail head is 40 to 250 mm wide; check the columns and state the unit."
                               : "it looks like " + looks_like + ": write '# unit: " + looks_like +
                                     "' into the file or give the unit as an option.";
  if (stated_unit.empty()) {
    if (looks_like == "mm") {
      in.findings.push_back({"unit_recognised",
                             "no unit is stated; the profile is " + number_text(width, 4) +
                                 " wide, which is a profile in mm and in no other unit.",
                             0, Vec2::Zero()});
      return;
    }
    throw InputError(ErrorCode::profile_wrong_unit,
                     in.origin + ": no unit is stated and the profile would be " + number_text(width, 4) + " mm wide.",
                     cure);
  }
  for (const Unit& unit : kUnits) {
    if (stated_unit != unit.name) continue;
    if (!believable(width * unit.in_mm))
      throw InputError(ErrorCode::profile_wrong_unit,
                       in.origin + ": in the stated unit, " + stated_unit + ", the profile is " +
                           number_text(width * unit.in_mm, 4) + " mm wide.",
                       cure);
    for (Vec2& p : in.points) p *= unit.in_mm;
    return;
  }
  throw InputError(ErrorCode::bad_option, in.origin + ": the unit is '" + stated_unit + "'.",
                   "units known here are mm, m, in and um.");
}

void to_profile_frame(CheckedPoints& in, const std::string& stated_y, const std::string& stated_z) {
  require_choice(in, "y_axis", stated_y, {"field", "gauge"});
  require_choice(in, "z_axis", stated_z, {"up", "down"});
  const bool wheel = in.kind == ProfileKind::wheel;
  const Shape shape = shape_of(in);
  const double up = stated_z.empty() ? shape.up : stated_z == "up" ? 1.0 : -1.0;
  const char* outstanding = wheel ? "the flange" : "the head";
  if (up != shape.up)
    throw InputError(ErrorCode::profile_upside_down,
                     in.origin + ": z is stated to point " + stated_z + ", but then " + outstanding +
                         (wheel ? " points upward." : " is hollow, not round."),
                     std::string("z points ") + (shape.up > 0 ? "up" : "down") + " in it by its shape: correct z_axis" +
                         ", or check that this is a " + (wheel ? "wheel." : "rail."));
  double field = stated_y == "gauge" ? -1.0 : 1.0;
  if (wheel) {
    if (stated_y.empty())
      field = shape.field;
    else if (field != shape.field)
      throw InputError(
          ErrorCode::profile_mirrored,
          in.origin + ": y is stated to point to the " + stated_y + " side, but then the flange is on the field side.",
          std::string("y points to the ") + (shape.field > 0 ? "field" : "gauge") +
              " side by its shape: correct y_axis.");
  } else if (stated_y.empty()) {
    in.findings.push_back(
        {"side_assumed", "y_axis is not stated; positive y is taken as the field side of the rail.", 0, Vec2::Zero()});
  }
  if (stated_z.empty() && up < 0.0)
    in.findings.push_back({"turned_over", "z was found to point down and was turned over.", 0, Vec2::Zero()});
  if (wheel && stated_y.empty() && field < 0.0)
    in.findings.push_back({"mirrored", "y was found to point to the gauge side and was mirrored.", 0, Vec2::Zero()});
  for (Vec2& p : in.points) p = {field * p.x(), up * p.y()};
  if (wheel) return;
  // A rail measured on its gauge side only, taken for the field side.
  double low_gauge = 0.0, low_field = 0.0;
  for (const Vec2& p : in.points)
    (p.x() < 0.0 ? low_gauge : low_field) = std::min(p.x() < 0.0 ? low_gauge : low_field, p.y());
  constexpr double kGaugeDepth_mm = -10.0;
  if (low_gauge > kGaugeDepth_mm && low_field <= kGaugeDepth_mm)
    throw InputError(ErrorCode::profile_mirrored,
                     in.origin + ": on the gauge side it reaches down only to z = " + number_text(low_gauge, 4) +
                         " mm, on the field side to " + number_text(low_field, 4) + " mm.",
                     std::string("it looks mirrored: write '# y_axis: ") + (field > 0 ? "gauge" : "field") +
                         "' into the file or give it as an option.");
}

void put_in_order(CheckedPoints& in) {
  if (in.points.back().x() < in.points.front().x()) {
    std::reverse(in.points.begin(), in.points.end());
    std::reverse(in.rows.begin(), in.rows.end());
    in.findings.push_back(
        {"reversed", "the points ran from the field to the gauge side and were reversed.", 0, in.points.front()});
  }
  std::vector<std::size_t> kept{0};
  std::size_t repeated = 0;
  long first_row = 0;
  Vec2 at = Vec2::Zero();
  for (std::size_t i = 1; i < in.points.size(); ++i) {
    if ((in.points[i] - in.points[kept.back()]).norm() > 1e-9) {
      kept.push_back(i);
    } else if (repeated++ == 0) {
      first_row = in.rows[i];
      at = in.points[i];
    }
  }
  if (repeated == 0) return;
  // A file joined from two scans repeats its seam; more than one row in fifty is another kind of mistake.
  if (repeated > std::max<std::size_t>(3, in.points.size() / 50))
    throw InputError(ErrorCode::profile_repeated_points,
                     in.origin + ":" + std::to_string(first_row) + ": " + std::to_string(repeated) + " of " +
                         std::to_string(in.points.size()) + " points repeat the one before, the first in this row.",
                     "remove the repeated rows, or check that the columns are y and z.");
  std::vector<Vec2> points;
  std::vector<long> rows;
  for (const std::size_t i : kept) {
    points.push_back(in.points[i]);
    rows.push_back(in.rows[i]);
  }
  in.points = std::move(points);
  in.rows = std::move(rows);
  in.findings.push_back(
      {"repeated_points",
       std::to_string(repeated) + (repeated == 1 ? " repeated point was" : " repeated points were") + " dropped.",
       first_row, at});
}

void check_spikes(const CheckedPoints& in) {
  const std::vector<Vec2>& p = in.points;
  const double usual = median(steps(p));
  // Distance of each point from the cubic through two neighbours on either side.
  std::vector<double> off(p.size(), 0.0);
  std::vector<double> sizes;
  for (std::size_t i = 2; i + 2 < p.size(); ++i) {
    const double before = (p[i - 1] - p[i - 2]).norm(), over = (p[i + 1] - p[i - 1]).norm(),
                 after = (p[i + 2] - p[i + 1]).norm();
    if (std::max({before, 0.5 * over, after}) > 3.0 * std::min({before, 0.5 * over, after})) continue;
    const Vec2 expected = (4.0 * (p[i - 1] + p[i + 1]) - p[i - 2] - p[i + 2]) / 6.0;
    off[i] = (p[i] - expected).norm();
    // A sharp edge leaves the cubic by up to half a spacing; only what exceeds that counts.
    sizes.push_back(off[i]);
    off[i] -= 0.3 * over;
  }
  if (sizes.empty()) return;
  // Ten times the usual scatter, and never less than what would pass for roughness.
  const double limit = std::max({10.0 * median(sizes), 0.2, 0.05 * usual});
  const auto worst = std::max_element(off.begin(), off.end());
  if (*worst <= limit) return;
  const std::size_t i = static_cast<std::size_t>(worst - off.begin());
  throw InputError(ErrorCode::profile_spike,
                   in.place(i) + ": the point at y = " + number_text(p[i].x(), 5) +
                       " mm, z = " + number_text(p[i].y(), 5) + " mm stands " + number_text(*worst, 2) +
                       " mm or more off its neighbours.",
                   "remove or correct the row; a spike is dirt or a failed reading, not a profile.");
}

void check_gaps(CheckedPoints& in) {
  const std::vector<double> lengths = steps(in.points);
  const double usual = median(lengths);
  const auto widest = std::max_element(lengths.begin(), lengths.end());
  const std::size_t i = static_cast<std::size_t>(widest - lengths.begin());
  // Devices thin out on steep faces; several millimetres without a point is a piece missing.
  if (*widest > std::max(5.0, 6.0 * usual))
    throw InputError(ErrorCode::profile_gap,
                     in.place(i + 1) + ": there is a gap of " + number_text(*widest, 3) + " mm between y = " +
                         number_text(in.points[i].x(), 5) + " and " + number_text(in.points[i + 1].x(), 5) +
                         " mm; points usually stand " + number_text(usual, 2) + " mm apart.",
                     "measure again, join the scans, or look for rows that are out of order.");
  if (*widest > std::max(2.0, 6.0 * usual))
    in.findings.push_back({"wide_step",
                           "no point for " + number_text(*widest, 3) + " mm; the curve there is an interpolation.",
                           in.rows[i + 1], in.points[i]});
}

void check_crossing(const CheckedPoints& in) {
  const auto crossing = self_crossing(in.points);
  if (!crossing) return;
  const auto [i, j] = *crossing;
  throw InputError(ErrorCode::profile_crosses_itself,
                   in.place(i) +
                       ": the outline crosses itself: what runs from this row to the next meets what runs "
                       "from row " +
                       std::to_string(in.rows[j]) + ", at y = " + number_text(in.points[i].x(), 5) + " mm.",
                   "look for swapped rows there, or for two scans in one file.");
}

void check_origin(const CheckedPoints& in) {
  const auto by_z = [](const Vec2& a, const Vec2& b) { return a.y() < b.y(); };
  const Vec2 low = *std::min_element(in.points.begin(), in.points.end(), by_z);
  const Vec2 high = *std::max_element(in.points.begin(), in.points.end(), by_z);
  if (in.kind == ProfileKind::wheel) {
    if (low.x() < -70.0 || low.x() > -40.0)
      throw not_covering(in.origin, "the lowest point, the flange tip, is at y = " + number_text(low.x(), 4) + " mm.",
                         "y counts from the running circle, 70 mm from the flange back; the tip belongs at about -55 "
                         "mm. Shift y, or add the flange if it is missing.");
    if (low.y() < -60.0 || low.y() > -15.0)
      throw not_covering(in.origin, "the flange tip is at z = " + number_text(low.y(), 4) + " mm.",
                         "z counts from the running circle; the tip belongs at about -28 mm. Shift z, or add the "
                         "flange if it is missing.");
    return;
  }
  if (std::abs(high.y()) > 25.0)
    throw not_covering(in.origin, "the top of the rail is at z = " + number_text(high.y(), 4) + " mm.",
                       "z counts from the top of the head when new. Shift z.");
}

void check_coverage(const ProfileCurve& curve, ProfileKind kind, const std::string& origin) {
  double y_min = 1e300, y_max = -1e300, z_min_gauge = 1e300;
  for (const CurvePoint& p : sample_curve(curve, 0.01)) {
    y_min = std::min(y_min, p.y());
    y_max = std::max(y_max, p.y());
    if (p.y() < 0.0) z_min_gauge = std::min(z_min_gauge, p.z());
  }
  // How far a profile must reach, common practice, no source: what lies beyond is never in contact.
  constexpr double kWheelFlangeBy_mm = -45.0, kWheelTreadTo_mm = 20.0, kWheelFlangeDepth_mm = -15.0;
  constexpr double kRailHeadTo_mm = 15.0, kRailGaugeDepth_mm = -10.0;
  const std::string range = "it covers y = " + number_text(y_min, 5) + " to " + number_text(y_max, 5) + " mm";
  if (kind == ProfileKind::wheel) {
    if (y_max < kWheelTreadTo_mm)
      throw not_covering(origin, "the tread is not covered: " + range + ".",
                         "a wheel must reach from the flange to 20 mm or more beyond the running circle (y = 0).");
    if (y_min > kWheelFlangeBy_mm || z_min_gauge > kWheelFlangeDepth_mm)
      throw not_covering(origin, "the flange is not covered: " + range + ".",
                         "a wheel must reach past the flange, to y = -45 mm or less from the running circle (y = 0).");
    return;
  }
  if (y_max < kRailHeadTo_mm || y_min > -kRailHeadTo_mm)
    throw not_covering(origin, "the rail head is not covered: " + range + ".",
                       "a rail must reach at least 15 mm to both sides of its axis (y = 0).");
  if (z_min_gauge > kRailGaugeDepth_mm)
    throw not_covering(origin,
                       "the gauge face is not covered: on the gauge side it reaches down to z = " +
                           number_text(z_min_gauge, 4) + " mm.",
                       "a rail must reach at least 10 mm, better 16 mm, below its top on the gauge side.");
}

}  // namespace runband
