// Closed triangle meshes of rail and wheel, for pictures and export.
#pragma once

#include <array>
#include <filesystem>
#include <vector>

#include "core/profile/profile.h"

namespace runband {

/// Triangles, counter-clockwise from outside. Vertices in mm.
struct TriangleMesh {
  std::vector<Vec3> vertices;
  std::vector<std::array<int, 3>> triangles;
  std::vector<double> scalar;  ///< one per vertex, or empty
  std::string scalar_name;
};

struct MeshOptions {
  double chord_error_mm = 0.01;           ///< largest distance between the triangles and the true surface
  std::size_t max_triangles = 4'000'000;  ///< more is an InputError that says which chord error would fit
};

/// Rail extruded along x from x0 to x1 in its profile frame (x, y outward, z up): the running surface as given, closed
/// below by a plain head bottom, web and foot outline of ordinary proportions where the profile ends; end caps
/// triangulated.
TriangleMesh rail_mesh(const Profile& rail, double x0_mm, double x1_mm, const MeshOptions& options = {});

/// Wheel revolved about its axle, closed by a plain rim, web and hub bore; coordinates (x, y outward, z up) with origin
/// on the axle at the running circle's plane; the tread point at angle 0 hangs straight down.
TriangleMesh wheel_mesh(const Profile& wheel, double rolling_radius_mm, const MeshOptions& options = {});

struct MeshReport {
  bool closed = false, oriented_outward = false, manifold = false, self_intersecting = false;
  double volume_mm3 = 0;
};
/// Checked with CGAL's polygon mesh processing. Self-intersection is the slow part and can be left out.
MeshReport check_mesh(const TriangleMesh& mesh, bool look_for_self_intersection = true);

/// By ending: .ply (binary, with scalar), .stl (binary), .vtp (VTK XML, base64), .glb (normals, vertex colours if
/// scalar). Units: mm, except GLB metres.
void write_mesh(const std::filesystem::path& path, const TriangleMesh& mesh);

}  // namespace runband
