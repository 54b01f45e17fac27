// What a profile must be before anything is computed on it. Each check either passes, corrects what is safe to correct
// and says so in a Finding, or throws an InputError that names file, row, fault and cure.
#pragma once

#include <string>
#include <vector>

#include "core/profile/profile.h"

namespace runband {

/// Points on their way into a profile. `rows[i]` is the line of point i in the file.
struct CheckedPoints {
  std::string origin;
  ProfileKind kind = ProfileKind::wheel;
  std::vector<Vec2> points;
  std::vector<long> rows;
  std::vector<Finding> findings;

  std::string place(std::size_t i) const { return origin + ":" + std::to_string(rows[i]); }
};

/// Enough points to describe a profile at all. @throws profile_too_few_points.
void check_count(const CheckedPoints&);
/// To mm. A stated unit must give a profile of believable width; without one the numbers must look like mm and like
/// nothing else. @throws profile_wrong_unit, naming the unit it looks like; bad_option.
void to_millimetres(CheckedPoints&, const std::string& stated_unit);
/// To the profile frame: z up, y to the field side. What is stated must agree with what the shape shows; what is not
/// stated is recognised (a rail's sides cannot be told apart: positive y is then taken as the field side).
/// @throws profile_upside_down, profile_mirrored, bad_option.
void to_profile_frame(CheckedPoints&, const std::string& stated_y, const std::string& stated_z);
/// From gauge to field side; a few repeated points are dropped. @throws profile_repeated_points.
void put_in_order(CheckedPoints&);
/// No row far off its neighbours. @throws profile_spike.
void check_spikes(const CheckedPoints&);
/// No hole in the outline. @throws profile_gap.
void check_gaps(CheckedPoints&);
/// The outline does not cross itself. @throws profile_crosses_itself.
void check_crossing(const CheckedPoints&);
/// Origin where the profile frame has it, as far as the shape shows. @throws profile_not_covering.
void check_origin(const CheckedPoints&);

/// Does the curve reach over what a contact needs? A wheel from its flange tip to the outer tread, a rail from its
/// gauge face to the field side of its head. @throws profile_not_covering.
void check_coverage(const ProfileCurve& curve, ProfileKind kind, const std::string& origin);

}  // namespace runband
