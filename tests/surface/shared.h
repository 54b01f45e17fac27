// What the surface tests share: profiles made for a purpose and plain geometry.
#pragma once

#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>
#include <functional>
#include <memory>
#include <vector>

#include "core/surface/mesh.h"

namespace runband::surface_tests {

/// A curve given by a function of t in [0, 1], differentiated numerically; breaks at its ends only.
class FunctionCurve final : public ProfileCurve {
 public:
  explicit FunctionCurve(std::function<Vec2(double)> position) : position_(std::move(position)) {}
  double t_begin() const override { return 0.0; }
  double t_end() const override { return 1.0; }
  CurvePoint at(double t) const override {
    constexpr double kStep = 1e-4;
    t = std::clamp(t, 0.0, 1.0);
    const Vec2 here = position_(t), back = position_(t - kStep), ahead = position_(t + kStep);
    return {t, here, (ahead - back) / (2.0 * kStep), (ahead - 2.0 * here + back) / (kStep * kStep)};
  }
  std::vector<double> breaks() const override { return {0.0, 1.0}; }

 private:
  std::function<Vec2(double)> position_;
};

inline Profile profile_of(ProfileKind kind, std::function<Vec2(double)> position) {
  Profile profile;
  profile.kind = kind;
  profile.origin = "drawn";
  profile.curve = std::make_shared<FunctionCurve>(std::move(position));
  return profile;
}

/// Half a turn of a circle as a rail head: 72 mm wide, gauge side first.
inline Profile round_rail() {
  return profile_of(ProfileKind::rail, [](double t) {
    const double angle = 3.14159265358979323846 * (1.0 - t);
    return Vec2(36.0 * std::cos(angle), 36.0 * std::sin(angle) - 36.0);
  });
}

/// A tread without a flange: a cone of 1:20.
inline Profile coned_wheel() {
  return profile_of(ProfileKind::wheel, [](double t) {
    const double y = -70.0 + 135.0 * t;
    return Vec2(y, 0.05 * y);
  });
}

inline double distance_to_segment(const Vec2& p, const Vec2& a, const Vec2& b) {
  const Vec2 d = b - a;
  const double t = std::clamp((p - a).dot(d) / d.squaredNorm(), 0.0, 1.0);
  return (p - a - t * d).norm();
}

/// Distance of a point from a triangle: inside by the plane, else by the nearest edge.
inline double distance_to_triangle(const Vec3& p, const Vec3& a, const Vec3& b, const Vec3& c) {
  const Vec3 n = (b - a).cross(c - a);
  const auto inside = [&](const Vec3& u, const Vec3& v) { return (v - u).cross(p - u).dot(n) >= 0.0; };
  if (inside(a, b) && inside(b, c) && inside(c, a)) return std::abs((p - a).dot(n)) / n.norm();
  const auto edge = [&](const Vec3& u, const Vec3& v) {
    const Vec3 d = v - u;
    return (p - u - std::clamp((p - u).dot(d) / d.squaredNorm(), 0.0, 1.0) * d).norm();
  };
  return std::min({edge(a, b), edge(b, c), edge(c, a)});
}

/// Signed volume by the divergence theorem.
inline double volume(const TriangleMesh& mesh) {
  double six = 0.0;
  for (const auto& [a, b, c] : mesh.triangles)
    six += mesh.vertices[static_cast<std::size_t>(a)].dot(
        mesh.vertices[static_cast<std::size_t>(b)].cross(mesh.vertices[static_cast<std::size_t>(c)]));
  return six / 6.0;
}

inline TriangleMesh tetrahedron(const Vec3& at = Vec3::Zero()) {
  TriangleMesh mesh;
  mesh.vertices = {at, at + Vec3(1, 0, 0), at + Vec3(0, 1, 0), at + Vec3(0, 0, 1)};
  mesh.triangles = {{0, 2, 1}, {0, 1, 3}, {1, 2, 3}, {0, 3, 2}};
  return mesh;
}

}  // namespace runband::surface_tests
