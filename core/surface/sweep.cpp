// Sections swept into closed meshes: along x for rails, about the axle for wheels.
#include <Eigen/LU>
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/surface/cap.h"
#include "core/surface/mesh.h"
#include "core/surface/outline.h"

namespace runband {

namespace {

constexpr double kSmallestChordError_mm = 1e-6;

void check_options(const std::string& where, const MeshOptions& options) {
  if (!(options.chord_error_mm >= kSmallestChordError_mm && std::isfinite(options.chord_error_mm)))
    throw out_of_range(where, "chord_error_mm", options.chord_error_mm, "mm", "finite and at least 1e-06");
  require_positive(where, "max_edge_mm", options.max_edge_mm, "mm");
}

int pieces(double length, double step) { return static_cast<int>(std::clamp(std::ceil(length / step), 1.0, 1e9)); }

// Steps of the revolution: the sagitta of the largest radius stays within the error.
int revolution_steps(double largest_radius, double chord_error, double max_edge) {
  const double angle = 2.0 * std::acos(std::max(0.0, 1.0 - chord_error / largest_radius));
  const double turn = 2.0 * std::numbers::pi;
  return std::max({12, pieces(turn, angle), pieces(turn * largest_radius, max_edge)});
}

// Throws if `count(chord error)` is above the limit, naming a chord error that is not.
template <typename Count>
void refuse_too_many(const std::string& where, const MeshOptions& options, const Count& count) {
  const double wanted = count(options.chord_error_mm);
  const auto limit = static_cast<double>(options.max_triangles);
  if (wanted <= limit) return;
  std::string cure = "set max_edge_mm larger.";
  double fitting = options.chord_error_mm;
  for (int i = 0; i < 60 && count(fitting) > limit; ++i) fitting *= 1.3;
  if (count(fitting) <= limit) cure = "a chord_error_mm of " + number_text(1.1 * fitting, 2) + " would fit.";
  throw InputError(ErrorCode::out_of_range,
                   where + ": a chord error of " + number_text(options.chord_error_mm) + " mm needs " +
                       number_text(std::round(wanted), 3) + " triangles; the limit is " + number_text(limit, 3) + ".",
                   cure);
}

double largest_radius(const Outline& section) {
  double radius = 0.0;
  for (const Vec2& point : section) radius = std::max(radius, -point.y());
  return radius;
}

// Joins ring k to ring `next` (each of n vertices, counter-clockwise seen against the sweep) by two triangles an edge.
void join_rings(int n, int ring, int next, std::vector<std::array<int, 3>>& triangles) {
  for (int i = 0; i < n; ++i) {
    const int j = i + 1 == n ? 0 : i + 1;
    triangles.push_back({ring * n + i, ring * n + j, next * n + j});
    triangles.push_back({ring * n + i, next * n + j, next * n + i});
  }
}

TriangleMesh revolved(const Outline& section, int steps) {
  const int n = static_cast<int>(section.size());
  TriangleMesh mesh;
  mesh.vertices.reserve(section.size() * static_cast<std::size_t>(steps));
  mesh.triangles.reserve(2 * section.size() * static_cast<std::size_t>(steps));
  for (int k = 0; k < steps; ++k) {
    const double angle = 2.0 * std::numbers::pi * k / steps;
    const double c = std::cos(angle), s = std::sin(angle);
    for (const Vec2& point : section) mesh.vertices.emplace_back(-point.y() * s, point.x(), point.y() * c);
    join_rings(n, k, k + 1 == steps ? 0 : k + 1, mesh.triangles);
  }
  return mesh;
}

TriangleMesh extruded(const Outline& section, double x0, double x1, int steps, const std::string& name) {
  const int n = static_cast<int>(section.size());
  const std::vector<std::array<int, 3>> cap = fill_outline(section, name);
  TriangleMesh mesh;
  mesh.vertices.reserve(section.size() * static_cast<std::size_t>(steps + 1));
  mesh.triangles.reserve(2 * section.size() * static_cast<std::size_t>(steps) + 2 * cap.size());
  for (int k = 0; k <= steps; ++k) {
    const double x = k == steps ? x1 : x0 + (x1 - x0) * k / steps;
    for (const Vec2& point : section) mesh.vertices.emplace_back(x, point.x(), point.y());
    if (k < steps) join_rings(n, k, k + 1, mesh.triangles);
  }
  for (const auto& [a, b, c] : cap) {
    mesh.triangles.push_back({c, b, a});
    mesh.triangles.push_back({steps * n + a, steps * n + b, steps * n + c});
  }
  return mesh;
}

std::string name_of(const Profile& profile, const char* otherwise) {
  return profile.origin.empty() ? otherwise : profile.origin;
}

}  // namespace

TriangleMesh rail_mesh(const Profile& rail, double x0_mm, double x1_mm, const MeshOptions& options) {
  const std::string name = name_of(rail, "rail");
  check_options(name, options);
  if (!(std::isfinite(x0_mm) && std::isfinite(x1_mm) && x1_mm > x0_mm))
    throw out_of_range(name, "x1_mm", x1_mm, "mm", "finite and above x0_mm, " + number_text(x0_mm));
  const int steps = pieces(x1_mm - x0_mm, options.max_edge_mm);
  Outline section;
  refuse_too_many(name, options, [&](double chord_error) {
    Outline trial = rail_outline(rail, chord_error, options.max_edge_mm);
    const double count = 2.0 * static_cast<double>(trial.size()) * (steps + 1.0);
    if (chord_error == options.chord_error_mm) section = std::move(trial);
    return count;
  });
  return extruded(section, x0_mm, x1_mm, steps, name);
}

TriangleMesh wheel_mesh(const Profile& wheel, double rolling_radius_mm, const MeshOptions& options) {
  const std::string name = name_of(wheel, "wheel");
  check_options(name, options);
  require_positive(name, "rolling_radius_mm", rolling_radius_mm, "mm");
  Outline section;
  int steps = 0;
  refuse_too_many(name, options, [&](double chord_error) {
    Outline trial = wheel_outline(wheel, rolling_radius_mm, 0.5 * chord_error, options.max_edge_mm);
    const int turn = revolution_steps(largest_radius(trial), 0.5 * chord_error, options.max_edge_mm);
    const double count = 2.0 * static_cast<double>(trial.size()) * turn;
    if (chord_error == options.chord_error_mm) {
      section = std::move(trial);
      steps = turn;
    }
    return count;
  });
  return revolved(section, steps);
}

TriangleMesh axle_mesh(double back_to_back_mm, double bore_radius_mm, const MeshOptions& options) {
  check_options("axle", options);
  require_positive("axle", "back_to_back_mm", back_to_back_mm, "mm");
  require_positive("axle", "bore_radius_mm", bore_radius_mm, "mm");
  const double scale = bore_radius_mm / 92.0;
  const double seat = bore_radius_mm, body = 0.87 * bore_radius_mm, journal = 0.7 * bore_radius_mm;
  const double seat_in = 0.5 * back_to_back_mm - 30.0 * scale, seat_out = 0.5 * back_to_back_mm + 185.0 * scale;
  const double tip = seat_out + 190.0 * scale, hole = 0.33 * bore_radius_mm;
  if (seat_in < 60.0 * scale)
    throw out_of_range("axle", "back_to_back_mm", back_to_back_mm, "mm", "large against the bore");
  const double fillet = 30.0 * scale;
  Outline section = rounded({{{-tip, -hole}, 0.0},
                             {{-tip, -journal}, 4.0 * scale},
                             {{-seat_out, -journal}, fillet},
                             {{-seat_out, -seat}, 2.0 * scale},
                             {{-seat_in, -seat}, 2.0 * scale},
                             {{-seat_in + 40.0 * scale, -body}, fillet},
                             {{seat_in - 40.0 * scale, -body}, fillet},
                             {{seat_in, -seat}, 2.0 * scale},
                             {{seat_out, -seat}, 2.0 * scale},
                             {{seat_out, -journal}, fillet},
                             {{tip, -journal}, 4.0 * scale},
                             {{tip, -hole}, 0.0}},
                            0.5 * options.chord_error_mm);
  return revolved(section, revolution_steps(seat, 0.5 * options.chord_error_mm, options.max_edge_mm));
}

TriangleMesh transformed(const TriangleMesh& mesh, const Eigen::Matrix3d& matrix, const Vec3& offset_mm) {
  TriangleMesh moved = mesh;
  for (Vec3& vertex : moved.vertices) vertex = (matrix * vertex + offset_mm).eval();
  if (matrix.determinant() < 0.0)
    for (auto& triangle : moved.triangles) std::swap(triangle[1], triangle[2]);
  return moved;
}

}  // namespace runband
