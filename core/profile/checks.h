// What a profile must be before anything is computed on it.
#pragma once

#include "core/profile/profile.h"

namespace runband {

/// Does the curve reach over what a contact needs? A wheel from its flange tip to the outer tread, a rail from its
/// gauge face to the field side of its head.
/// @throws InputError (profile_not_covering).
void check_coverage(const ProfileCurve& curve, ProfileKind kind, const std::string& origin);

}  // namespace runband
