// Is a mesh what it should be: closed, oriented, without crossings. CGAL's headers stay in this file.
#include <CGAL/Exact_predicates_inexact_constructions_kernel.h>
#include <CGAL/Polygon_mesh_processing/measure.h>
#include <CGAL/Polygon_mesh_processing/orientation.h>
#include <CGAL/Polygon_mesh_processing/polygon_soup_to_polygon_mesh.h>
#include <CGAL/Polygon_mesh_processing/self_intersections.h>
#include <CGAL/Surface_mesh.h>

#include <algorithm>
#include <cstdint>
#include <string>
#include <vector>

#include "core/base/error.h"
#include "core/surface/mesh.h"

namespace runband {

namespace {

using Kernel = CGAL::Exact_predicates_inexact_constructions_kernel;
using SurfaceMesh = CGAL::Surface_mesh<Kernel::Point_3>;

void check_indices(const TriangleMesh& mesh) {
  const auto count = static_cast<int>(mesh.vertices.size());
  for (std::size_t i = 0; i < mesh.triangles.size(); ++i) {
    for (const int v : mesh.triangles[i]) {
      if (v < 0 || v >= count) {
        throw InputError(ErrorCode::out_of_range,
                         "mesh: triangle " + std::to_string(i) + " names vertex " + std::to_string(v) + " of " +
                             std::to_string(count) + ".",
                         "make the mesh again from its profile.");
      }
    }
  }
}

bool every_edge_twice(const TriangleMesh& mesh) {
  std::vector<std::uint64_t> edges;
  edges.reserve(3 * mesh.triangles.size());
  for (const auto& triangle : mesh.triangles) {
    for (int i = 0; i < 3; ++i) {
      const auto a = static_cast<std::uint64_t>(triangle[static_cast<std::size_t>(i)]);
      const auto b = static_cast<std::uint64_t>(triangle[static_cast<std::size_t>((i + 1) % 3)]);
      edges.push_back(std::min(a, b) << 32U | std::max(a, b));
    }
  }
  std::sort(edges.begin(), edges.end());
  for (std::size_t i = 0; i < edges.size();) {
    std::size_t j = i;
    while (j < edges.size() && edges[j] == edges[i]) ++j;
    if (j - i != 2) return false;
    i = j;
  }
  return !edges.empty();
}

}  // namespace

MeshReport check_mesh(const TriangleMesh& mesh, bool look_for_self_intersection) {
  namespace processing = CGAL::Polygon_mesh_processing;
  check_indices(mesh);
  MeshReport report;
  report.closed = every_edge_twice(mesh);
  std::vector<std::array<std::size_t, 3>> triangles;
  triangles.reserve(mesh.triangles.size());
  for (const auto& [a, b, c] : mesh.triangles)
    triangles.push_back({static_cast<std::size_t>(a), static_cast<std::size_t>(b), static_cast<std::size_t>(c)});
  report.manifold = !triangles.empty() && processing::is_polygon_soup_a_polygon_mesh(triangles);
  if (!report.manifold) return report;
  std::vector<Kernel::Point_3> points;
  points.reserve(mesh.vertices.size());
  for (const Vec3& v : mesh.vertices) points.emplace_back(v.x(), v.y(), v.z());
  SurfaceMesh surface;
  processing::polygon_soup_to_polygon_mesh(points, triangles, surface);
  if (report.closed) {
    report.volume_mm3 = processing::volume(surface);
    report.oriented_outward = processing::is_outward_oriented(surface);
  }
  if (look_for_self_intersection) report.self_intersecting = processing::does_self_intersect(surface);
  return report;
}

}  // namespace runband
