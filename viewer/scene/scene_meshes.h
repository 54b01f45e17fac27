// Bodies and patches of a solution, in their place in the track frame.
#pragma once

#include <Eigen/Geometry>

#include "core/solve/solution.h"
#include "core/surface/mesh.h"

namespace runband {

// Rails are shown from behind the contact to a cut section not far ahead of it.
constexpr double kSceneRailFrom_mm = -520.0, kSceneRailTo_mm = 150.0;

// Where things stand: from their own frame to the track's. A body's own frame is mirrored for the right side already, so
// these are rigid motions.
Eigen::Affine3d wheel_place(const Solution&, Side);
Eigen::Affine3d axle_place(const Solution&);
/// Meshes in their own frames.
TriangleMesh own_wheel(const Solution&, Side, const MeshOptions&);
TriangleMesh own_axle(const Solution&, const MeshOptions&);
/// The wheel's section in the plane through its axle below it, in the wheel's own frame; flat, to close a cut.
TriangleMesh wheel_cut(const Solution&, Side, double chord_error_mm);

/// Wheel of one side at the solved pose. The touching points of wheel and rail meet to within the mesh's chord error.
TriangleMesh placed_wheel(const Solution&, Side, const MeshOptions&);
TriangleMesh placed_axle(const Solution&, const MeshOptions&);
TriangleMesh placed_rail(const Solution&, Side, const MeshOptions&, double to_mm = kSceneRailTo_mm);

/// The patch as a sheet on the rail, lifted a little so that it is seen; one scalar per vertex, the pressure in MPa.
/// Cells without contact are left out.
TriangleMesh patch_sheet(const Contact&, double lift_mm, const std::vector<double>* values = nullptr);

}  // namespace runband
