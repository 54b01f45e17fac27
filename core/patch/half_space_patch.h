// The patch of the actual surfaces: pressure of two elastic half-spaces, whatever its shape.
#pragma once

#include <cstddef>
#include <vector>

#include "core/base/progress.h"
#include "core/locate/locate.h"
#include "core/patch/gap_grid.h"
#include "core/patch/patch.h"

namespace runband {

/// Patch of one zone of a located wheelset: the gap along the zone's normal between wheel of revolution and rail, as
/// fitted, pressed together by the zone's force. Nothing is assumed of its shape, and it may fall into several spots.
/// Whether the patch is small enough against the radii is said in the zone's cautions (half_space_doubtful).
///
/// @param normal_force_N  > 0.
/// @param material        with hardness_MPa the pressure is capped (elastic-perfectly plastic).
/// @return grid in the zone's contact frame with at least one empty cell around the contact.
/// @throws InputError (out_of_range, no_contact), NotConverged, Cancelled.
Patch half_space_patch(const Locator& locator, const ContactZone& zone, const WheelsetPose& pose, double normal_force_N,
                       const MaterialPair& material, const PatchOptions& options, const Progress& progress = {});

/// Zones that press on each other (cautions patches_overlap) share one patch: indices into `zones`, each load-carrying
/// zone in exactly one group, the one with the largest force first; groups in the order of their first zones.
std::vector<std::vector<std::size_t>> zones_solved_together(const std::vector<ContactZone>& zones);

/// One patch for such a group: in the contact frame of zones[group.front()], under the sum of the forces of all of its
/// zones along that zone's normal. The directions of their normals differ by a few degrees at most.
Patch half_space_patch(const Locator& locator, const std::vector<ContactZone>& zones,
                       const std::vector<std::size_t>& group, const WheelsetPose& pose, const MaterialPair& material,
                       const PatchOptions& options, const Progress& progress = {});

/// Patch of two bodies with the given relative curvatures, as hertz_ellipse sees them.
Patch half_space_patch(double curvature_rolling_per_mm, double curvature_across_per_mm, double normal_force_N,
                       const MaterialPair& material, const PatchOptions& options, const Progress& progress = {});

/// Patch of a gap given as a table. Contact that reaches the border of the table is cut off there, with a caution.
Patch half_space_patch(const GapGrid& gap, double normal_force_N, const MaterialPair& material,
                       const PatchOptions& options, const Progress& progress = {});

}  // namespace runband
