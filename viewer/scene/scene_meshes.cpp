#include "viewer/scene/scene_meshes.h"

#include <Eigen/Geometry>
#include <cmath>

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

TriangleMesh placed_wheel(const Solution& solution, Side side, const MeshOptions& options) {
  const Pairing& pairing = solution.locator->pairing();
  const double sign = side_sign(side);
  const Eigen::Matrix3d mirror = Vec3(1, sign, 1).asDiagonal();
  const Eigen::Matrix3d turn = wheelset_turn(solution.pose);
  const Vec3 place = axle_centre(solution) + turn * Vec3(0, sign * pairing.wheelset().running_circle_y_mm(), 0);
  return transformed(wheel_mesh(pairing.wheel(side), pairing.rolling_radius_mm(side), options), turn * mirror, place);
}

TriangleMesh placed_axle(const Solution& solution, const MeshOptions& options) {
  const WheelsetGeometry& w = solution.locator->pairing().wheelset();
  const double bore =
      std::min(wheel_bore_radius_mm(w.rolling_radius_mm[0]), wheel_bore_radius_mm(w.rolling_radius_mm[1]));
  return transformed(axle_mesh(w.back_to_back_mm, bore, options), wheelset_turn(solution.pose), axle_centre(solution));
}

TriangleMesh placed_rail(const Solution& solution, Side side, const MeshOptions& options) {
  const Pairing& pairing = solution.locator->pairing();
  const RailMount& mount = pairing.mount(side);
  const Vec2 across = mount.outward_direction(Vec2::UnitX()), up = mount.outward_direction(Vec2::UnitY());
  const double sign = side_sign(side);
  Eigen::Matrix3d matrix;
  matrix << 1, 0, 0, 0, sign * across.x(), sign * up.x(), 0, across.y(), up.y();
  return transformed(rail_mesh(pairing.rail(side), kSceneRailFrom_mm, kSceneRailTo_mm, options), matrix,
                     {0, sign * mount.shift.x(), mount.shift.y()});
}

TriangleMesh patch_sheet(const Contact& contact, double lift_mm) {
  const Patch& patch = *contact.patch;
  const Grid& g = patch.grid;
  TriangleMesh sheet;
  sheet.scalar_name = "pressure";
  // The rail curves away from the tangent plane across the patch.
  const double bend = contact.zone.curvature.rail_across_per_mm / 2;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const double p = patch.pressure.values[static_cast<std::size_t>(j * g.nx + i)];
      if (p <= 0) continue;
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
