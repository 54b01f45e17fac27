#include "core/surface/cap.h"

#include <CGAL/Constrained_Delaunay_triangulation_2.h>
#include <CGAL/Exact_predicates_inexact_constructions_kernel.h>
#include <CGAL/Triangulation_face_base_with_info_2.h>
#include <CGAL/Triangulation_vertex_base_with_info_2.h>

#include <utility>

#include "core/base/error.h"

namespace runband {

namespace {

constexpr int kUnseen = -1;

struct FaceInfo {
  int depth = kUnseen;  // outlines crossed on the way from outside
};

using Kernel = CGAL::Exact_predicates_inexact_constructions_kernel;
using VertexBase = CGAL::Triangulation_vertex_base_with_info_2<int, Kernel>;
using FaceBase =
    CGAL::Constrained_triangulation_face_base_2<Kernel, CGAL::Triangulation_face_base_with_info_2<FaceInfo, Kernel>>;
using Structure = CGAL::Triangulation_data_structure_2<VertexBase, FaceBase>;
using Triangulation =
    CGAL::Constrained_Delaunay_triangulation_2<Kernel, Structure, CGAL::No_constraint_intersection_tag>;

InputError crosses_itself(const std::string& name) {
  return {ErrorCode::profile_crosses_itself, name + ": the closed section crosses itself.",
          "check the ends of the profile: they must lie on the sides of the body, not inside it."};
}

// Marks every face with the number of constraint edges between it and the outside.
void mark_depth(Triangulation& triangulation) {
  std::vector<std::pair<Triangulation::Face_handle, int>> waiting{{triangulation.infinite_face(), 0}};
  while (!waiting.empty()) {
    const auto [face, depth] = waiting.back();
    waiting.pop_back();
    if (face->info().depth != kUnseen) continue;
    face->info().depth = depth;
    for (int i = 0; i < 3; ++i) {
      const Triangulation::Face_handle next = face->neighbor(i);
      if (next->info().depth == kUnseen) waiting.emplace_back(next, depth + (face->is_constrained(i) ? 1 : 0));
    }
  }
}

}  // namespace

std::vector<std::array<int, 3>> fill_outline(const Outline& outline, const std::string& name) {
  Triangulation triangulation;
  std::vector<Triangulation::Vertex_handle> vertices;
  vertices.reserve(outline.size());
  for (const Vec2& point : outline) {
    const auto start = vertices.empty() ? Triangulation::Face_handle() : vertices.back()->face();
    const auto vertex = triangulation.insert(Kernel::Point_2(point.x(), point.y()), start);
    vertex->info() = static_cast<int>(vertices.size());
    vertices.push_back(vertex);
  }
  if (triangulation.number_of_vertices() != outline.size()) throw crosses_itself(name);
  try {
    for (std::size_t i = 0; i < vertices.size(); ++i)
      triangulation.insert_constraint(vertices[i], vertices[(i + 1) % vertices.size()]);
  } catch (const Triangulation::Intersection_of_constraints_exception&) {
    throw crosses_itself(name);
  }
  mark_depth(triangulation);
  std::vector<std::array<int, 3>> triangles;
  triangles.reserve(outline.size());
  for (const auto face : triangulation.finite_face_handles()) {
    if (face->info().depth % 2 == 1)
      triangles.push_back({face->vertex(0)->info(), face->vertex(1)->info(), face->vertex(2)->info()});
  }
  // A simple polygon of n corners has n - 2 triangles; an edge that runs through another corner leaves a different
  // count.
  if (triangles.size() + 2 != outline.size()) throw crosses_itself(name);
  return triangles;
}

}  // namespace runband
