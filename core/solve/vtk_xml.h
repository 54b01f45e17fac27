// Patch fields and volumes as VTK XML files (open format), which general-purpose visualisation programs read.
#pragma once

#include <filesystem>
#include <vector>

#include "core/base/quantities.h"

namespace runband {

/// Image data, one cell per grid cell; every field is a cell array named "name [unit]".
void write_patch_vti(const std::filesystem::path& path, const Grid& grid, const std::vector<Field>& fields);
/// Rectilinear grid with points at cell centres and z = -depth.
void write_volume_vtr(const std::filesystem::path& path, const Volume& volume);

}  // namespace runband
