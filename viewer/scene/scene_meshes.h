// Bodies and patches of a solution, in their place in the track frame.
#pragma once

#include "core/solve/solution.h"
#include "core/surface/mesh.h"

namespace runband {

// Rails are shown from behind the contact to a cut section not far ahead of it.
constexpr double kSceneRailFrom_mm = -520.0, kSceneRailTo_mm = 150.0;

/// Wheel of one side at the solved pose. The touching points of wheel and rail meet to within the mesh's chord error.
TriangleMesh placed_wheel(const Solution&, Side, const MeshOptions&);
TriangleMesh placed_axle(const Solution&, const MeshOptions&);
TriangleMesh placed_rail(const Solution&, Side, const MeshOptions&);

/// The patch as a sheet on the rail, lifted a little so that it is seen; one scalar per vertex, the pressure in MPa.
/// Cells without contact are left out.
TriangleMesh patch_sheet(const Contact&, double lift_mm);

}  // namespace runband
