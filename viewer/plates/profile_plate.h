// A profile drawn: outline, curvature, and wear against a reference.
#pragma once

#include <filesystem>

#include "core/profile/profile.h"

namespace runband {

/// @param reference may be null. PNG, SVG or PDF by the ending.
void draw_profile(const Profile&, const Profile* reference, const std::filesystem::path& out);

}  // namespace runband
