// Closed plane sections of rail and wheel: the profile as given, completed by a plain body.
#pragma once

#include <functional>
#include <vector>

#include "core/profile/profile.h"

namespace runband {

using Outline = std::vector<Vec2>;  ///< closed, without repeating the first point

/// A corner of a polygon and the radius that rounds it; 0 leaves it sharp.
struct Corner {
  Vec2 at;
  double radius = 0;
};
/// Open polygon with rounded corners; arcs within `chord_error` of their chords. A radius that its neighbours leave no
/// room for is reduced.
Outline rounded(const std::vector<Corner>& corners, double chord_error);

/// Points on `curve` over [0, 1], ends included, within `chord_error` of it.
Outline sampled(const std::function<Vec2(double)>& curve, double chord_error);

/// Rail section (y, z) in its profile frame, counter-clockwise seen from +x. Proportions for a head 72 mm wide: height
/// 172, web 16.5, foot 150 wide and 11.5 thick at its edge, fishing surfaces 1:2.75; scaled with the head's width.
Outline rail_outline(const Profile& rail, double chord_error_mm, double max_edge_mm);

/// Wheel section as (y, -radius), counter-clockwise in that plane: profile, rim 62 thick, curved web, hub and bore for
/// a radius of 460; scaled with the radius.
Outline wheel_outline(const Profile& wheel, double rolling_radius_mm, double chord_error_mm, double max_edge_mm);

}  // namespace runband
