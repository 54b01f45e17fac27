#include "core/profile/checks.h"

#include <algorithm>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace {

InputError not_covering(const std::string& origin, const std::string& what, const std::string& cure) {
  return {ErrorCode::profile_not_covering, origin + ": " + what, cure};
}

}  // namespace

void check_coverage(const ProfileCurve& curve, ProfileKind kind, const std::string& origin) {
  double y_min = 1e300, y_max = -1e300, z_min_gauge = 1e300;
  for (const CurvePoint& p : sample_curve(curve, 0.01)) {
    y_min = std::min(y_min, p.y());
    y_max = std::max(y_max, p.y());
    if (p.y() < 0.0) z_min_gauge = std::min(z_min_gauge, p.z());
  }
  // How far a profile must reach, common practice, no source: beyond these no zone of contact is looked for.
  constexpr double kWheelFlangeBy_mm = -45.0, kWheelTreadTo_mm = 20.0, kWheelFlangeDepth_mm = -15.0;
  constexpr double kRailHeadTo_mm = 15.0, kRailGaugeDepth_mm = -10.0;
  const std::string range = "it covers y = " + number_text(y_min, 5) + " to " + number_text(y_max, 5) + " mm";
  if (kind == ProfileKind::wheel) {
    if (y_max < kWheelTreadTo_mm)
      throw not_covering(origin, "the tread is not covered: " + range + ".",
                         "a wheel must reach from the flange to y = 20 mm or more beyond the running circle (y = 0).");
    if (y_min > kWheelFlangeBy_mm || z_min_gauge > kWheelFlangeDepth_mm)
      throw not_covering(
          origin, "the flange is not covered: " + range + ".",
          "a wheel must reach past the flange tip, to y = -45 mm or less from the running circle (y = 0).");
  } else {
    if (y_max < kRailHeadTo_mm || y_min > -kRailHeadTo_mm)
      throw not_covering(origin, "the rail head is not covered: " + range + ".",
                         "a rail must reach at least 15 mm to both sides of its axis (y = 0).");
    if (z_min_gauge > kRailGaugeDepth_mm)
      throw not_covering(origin,
                         "the gauge face is not covered: on the gauge side it reaches down to z = " +
                             number_text(z_min_gauge, 4) + " mm.",
                         "a rail must reach at least 10 mm, better 16 mm, below its top on the gauge side.");
  }
}

}  // namespace runband
