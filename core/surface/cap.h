// Triangles that fill a plane outline.
#pragma once

#include <array>
#include <string>
#include <vector>

#include "core/surface/outline.h"

namespace runband {

/// Constrained Delaunay triangulation of the outline's inside, counter-clockwise, without new points; indices into it.
/// @throws InputError (profile_crosses_itself) if the outline crosses or touches itself; `name` begins the message.
std::vector<std::array<int, 3>> fill_outline(const Outline& outline, const std::string& name);

}  // namespace runband
