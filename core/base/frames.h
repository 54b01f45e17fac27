// The frames, stated once.
//
// Track frame    right-handed; x along the track in the direction of travel, y to the left, z up; origin on the track
//                centre line at the height of the running surface (the plane that touches both rail tops).
// Profile frame  y lateral, positive towards the FIELD side (away from the track centre), z up; one definition serves
//                left (as it is) and right (mirrored). Wheel origin: running circle on the tread,
//                `running_circle_offset_mm` (70) from the flange back; the flange is at negative y and hangs to
//                negative z. Rail origin: top of the uninclined head; the gauge face is at negative y.
// Contact frame  x rolling, s across (tangent to the rail surface, positive towards the field side), n normal, into the
//                wheel. On the left x, s, n is right-handed with y left; on the right it is its mirror image (s to the
//                right).
// Signs          contact angle positive when the surface falls towards the track centre as a flange does (n leans to
//                the gauge side); roll positive lifts the left wheel; yaw positive moves the left wheel backwards;
//                rolling radius difference is left minus right; curvature of a body positive when convex.
#pragma once

namespace runband {

enum class Side { left, right };

/// +1 for left, -1 for right: track y = sign * (distance from the centre line).
constexpr double side_sign(Side side) { return side == Side::left ? 1.0 : -1.0; }
constexpr const char* side_name(Side side) { return side == Side::left ? "left" : "right"; }

}  // namespace runband
