// Closed triangle meshes of rail and wheel, for pictures and export.
#pragma once

#include <Eigen/Core>
#include <array>
#include <cstddef>
#include <filesystem>
#include <string>
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
  double chord_error_mm = 0.01;           ///< largest distance between the triangles and the true surface, > 0
  double max_edge_mm = 1e9;               ///< longest step along the section and along the sweep, > 0
  std::size_t max_triangles = 4'000'000;  ///< more is an InputError that says which chord error would fit
};

/// Rail extruded along x from x0 to x1 in its profile frame (x, y outward, z up): the running surface as given, closed
/// below by a plain head bottom, web and foot outline of ordinary proportions where the profile ends; end caps
/// triangulated. The section's vertices lie on the profile.
/// @throws InputError (out_of_range) for options out of range, x1 <= x0 or too many triangles;
///         (profile_crosses_itself) if the closed section crosses itself.
TriangleMesh rail_mesh(const Profile& rail, double x0_mm, double x1_mm, const MeshOptions& options = {});

/// Wheel revolved about its axle, closed by a plain rim, web and hub bore; coordinates (x, y outward, z up) with origin
/// on the axle at the running circle's plane; the tread point at angle 0 hangs straight down. The chord error is shared
/// in halves by the section and the revolution; vertices lie on the true surface, one ring of them exactly at angle 0.
/// @throws InputError as rail_mesh; also if the radius is too small for the profile's height.
TriangleMesh wheel_mesh(const Profile& wheel, double rolling_radius_mm, const MeshOptions& options = {});

/// The radius of the bore that wheel_mesh leaves for the axle.
double wheel_bore_radius_mm(double rolling_radius_mm);

/// A plain hollow axle along y about the origin, that fits wheels of the given bore whose flange backs lie at
/// +-back_to_back/2: journals, wheel seats and a slimmer body, for pictures.
TriangleMesh axle_mesh(double back_to_back_mm, double bore_radius_mm, const MeshOptions& options = {});

/// matrix * v + offset for every vertex. Where the matrix mirrors (determinant < 0), the triangles are turned over so
/// that they still face outward.
TriangleMesh transformed(const TriangleMesh& mesh, const Eigen::Matrix3d& matrix, const Vec3& offset_mm);

struct MeshReport {
  bool closed = false;             ///< every edge borders exactly two triangles
  bool oriented_outward = false;   ///< neighbours agree, and the normals point out of the volume
  bool manifold = false;           ///< neighbours agree, no edge has three triangles, no vertex two fans
  bool self_intersecting = false;  ///< only if looked for
  double volume_mm3 = 0;           ///< of a closed mesh
};
/// Checked with CGAL's polygon mesh processing. Self-intersection is the slow part and can be left out.
/// @throws InputError (out_of_range) if a triangle names a vertex that is not there.
MeshReport check_mesh(const TriangleMesh& mesh, bool look_for_self_intersection = true);

/// By ending: .ply (binary, with scalar), .stl (binary), .vtp (VTK XML, base64), .glb (normals, vertex colours if
/// scalar). Units: mm, except GLB metres (and its y up, as that format prescribes). Each file states its unit.
/// @throws InputError (bad_option) for another ending; FileError.
void write_mesh(const std::filesystem::path& path, const TriangleMesh& mesh);

}  // namespace runband
