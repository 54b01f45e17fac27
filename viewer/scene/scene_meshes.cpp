#include "viewer/scene/scene_meshes.h"

#include <Eigen/Geometry>
#include <cmath>

#include "core/surface/cap.h"
#include "core/surface/outline.h"

namespace runband {

namespace {

/// Rotation of the wheelset: roll about x lifts the left wheel, yaw about z moves the left wheel backwards.
Eigen::Matrix3d wheelset_turn(const WheelsetPose& pose) {
  return (Eigen::AngleAxisd(pose.yaw_rad, Vec3::UnitZ()) * Eigen::AngleAxisd(pose.roll_rad, Vec3::UnitX()))
      .toRotationMatrix();
}

Vec3 axle_centre(const Solution& solution) {
  const WheelsetGeometry& w = solution.locator->pairing().wheelset();
  const double height = (w.rolling_radius_mm[0] + w.rolling_radius_mm[1]) / 2 + solution.pose.height_mm;
  double lateral = solution.pose.lateral_mm;
  // Prescribed at rail level, the axle's centre has moved by the roll.
  if (solution.pose.reference == LateralReference::rail) {
    const Vec3 down = wheelset_turn(solution.pose) * -Vec3::UnitZ();
    lateral -= height / -down.z() * down.y();
  }
  return {0, lateral, height};
}

}  // namespace

Eigen::Affine3d wheel_place(const Solution& solution, Side side) {
  const Eigen::Matrix3d turn = wheelset_turn(solution.pose);
  const Vec3 place = axle_centre(solution) +
                     turn * Vec3(0, side_sign(side) * solution.locator->pairing().wheelset().running_circle_y_mm(), 0);
  Eigen::Affine3d at = Eigen::Affine3d::Identity();
  at.linear() = turn;
  at.translation() = place;
  return at;
}

Eigen::Affine3d axle_place(const Solution& solution) {
  Eigen::Affine3d at = Eigen::Affine3d::Identity();
  at.linear() = wheelset_turn(solution.pose);
  at.translation() = axle_centre(solution);
  return at;
}

TriangleMesh own_wheel(const Solution& solution, Side side, const MeshOptions& options) {
  const Pairing& pairing = solution.locator->pairing();
  const Eigen::Matrix3d mirror = Vec3(1, side_sign(side), 1).asDiagonal();
  return transformed(wheel_mesh(pairing.wheel(side), pairing.rolling_radius_mm(side), options), mirror, Vec3::Zero());
}

TriangleMesh own_axle(const Solution& solution, const MeshOptions& options) {
  const WheelsetGeometry& w = solution.locator->pairing().wheelset();
  const double bore =
      std::min(wheel_bore_radius_mm(w.rolling_radius_mm[0]), wheel_bore_radius_mm(w.rolling_radius_mm[1]));
  return axle_mesh(w.back_to_back_mm, bore, options);
}

TriangleMesh wheel_cut(const Solution& solution, Side side, double chord_error_mm) {
  const Pairing& pairing = solution.locator->pairing();
  const Outline outline = wheel_outline(pairing.wheel(side), pairing.rolling_radius_mm(side), chord_error_mm, 1e9);
  TriangleMesh mesh;
  for (const Vec2& p : outline) mesh.vertices.emplace_back(0, side_sign(side) * p.x(), p.y());
  for (const auto& t : fill_outline(outline, "wheel")) mesh.triangles.push_back(t);
  return mesh;
}

TriangleMesh placed_wheel(const Solution& solution, Side side, const MeshOptions& options) {
  const Eigen::Affine3d at = wheel_place(solution, side);
  return transformed(own_wheel(solution, side, options), at.linear(), at.translation());
}

TriangleMesh placed_axle(const Solution& solution, const MeshOptions& options) {
  const Eigen::Affine3d at = axle_place(solution);
  return transformed(own_axle(solution, options), at.linear(), at.translation());
}

TriangleMesh placed_rail(const Solution& solution, Side side, const MeshOptions& options, double to_mm) {
  const Pairing& pairing = solution.locator->pairing();
  const RailMount& mount = pairing.mount(side);
  const Vec2 across = mount.outward_direction(Vec2::UnitX()), up = mount.outward_direction(Vec2::UnitY());
  const double sign = side_sign(side);
  Eigen::Matrix3d matrix;
  matrix << 1, 0, 0, 0, sign * across.x(), sign * up.x(), 0, across.y(), up.y();
  return transformed(rail_mesh(pairing.rail(side), kSceneRailFrom_mm, to_mm, options), matrix,
                     {0, sign * mount.shift.x(), mount.shift.y()});
}

TriangleMesh patch_sheet(const Contact& contact, double lift_mm, const std::vector<double>* values) {
  const Patch& patch = *contact.patch;
  const Grid& g = patch.grid;
  TriangleMesh sheet;
  sheet.scalar_name = "pressure";
  // The rail curves away from the tangent plane across the patch.
  const double bend = contact.zone.curvature.rail_across_per_mm / 2;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const auto cell = static_cast<std::size_t>(j * g.nx + i);
      if (patch.pressure.values[cell] <= 0) continue;
      const double p = values != nullptr && cell < values->size() ? (*values)[cell] : patch.pressure.values[cell];
      const int first = static_cast<int>(sheet.vertices.size());
      for (const auto& [dx, ds] : {std::pair{-0.5, -0.5}, {0.5, -0.5}, {0.5, 0.5}, {-0.5, 0.5}}) {
        const double x = g.x(i) + dx * g.dx_mm, s = g.s(j) + ds * g.ds_mm;
        sheet.vertices.push_back(contact.zone.track_mm + contact.zone.frame * Vec3(x, s, lift_mm - bend * s * s));
        sheet.scalar.push_back(p);
      }
      // Up on both sides: the contact frame on the right is left-handed.
      if (contact.zone.frame.determinant() > 0) {
        sheet.triangles.push_back({first, first + 1, first + 2});
        sheet.triangles.push_back({first, first + 2, first + 3});
      } else {
        sheet.triangles.push_back({first, first + 2, first + 1});
        sheet.triangles.push_back({first, first + 3, first + 2});
      }
    }
  }
  return sheet;
}

}  // namespace runband
