#include "plugins/creepage/motion.h"

#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/halfspace/creep_laws.h"
#include "core/halfspace/elastic.h"

namespace runband {

WheelsetMotion::WheelsetMotion(const PatchContext& c) : context_(c) {
  const WheelsetPose& pose = c.pose;
  const Pairing& pairing = c.locator->pairing();
  const double yaw = pose.yaw_rad, roll = pose.roll_rad;
  axle_ = Vec3(-std::sin(yaw) * std::cos(roll), std::cos(yaw) * std::cos(roll), std::sin(roll));
  const double height =
      0.5 * (pairing.rolling_radius_mm(Side::left) + pairing.rolling_radius_mm(Side::right)) + pose.height_mm;
  double lateral = pose.lateral_mm;
  if (pose.reference == LateralReference::rail) lateral -= height * std::tan(roll) * std::cos(yaw);
  centre_ = Vec3(0.0, lateral, height);
  curvature_ = c.motion.curve_radius_m == 0 ? 0 : 1e-3 / c.motion.curve_radius_m;
  const RigidContact rigid = c.locator->rigid(pose.lateral_mm, yaw, pose.reference);
  mean_radius_ = 0.5 * (rigid.touch[0].rolling_radius_mm + rigid.touch[1].rolling_radius_mm);
}

Vec3 WheelsetMotion::slip(const Vec3& p, double turn) const {
  // Seen from the wheelset, the rail comes by at V (1 - y / R): the inner one has less way to go.
  return turn * axle_.cross(p - centre_) + Vec3(1.0 - curvature_ * p.y(), curvature_ * p.x(), 0.0);
}

double WheelsetMotion::spin_per_mm(Side side, const Vec3& normal, double turn) const {
  return side_sign(side) * (turn * axle_.dot(normal) + curvature_ * normal.z());
}

Creepages WheelsetMotion::creepages(const ContactZone& zone, double turn) const {
  const Vec3 v = slip(zone.track_mm, turn);
  return {v.dot(zone.frame.col(0)), v.dot(zone.frame.col(1)), spin_per_mm(zone.side, zone.frame.col(2), turn)};
}

double bow_per_mm2(const ContactZone& zone, double turn) {
  return 0.25 * std::cos(zone.contact_angle_rad) *
         (zone.curvature.wheel_across_per_mm - zone.curvature.rail_across_per_mm) * turn;
}

std::optional<double> WheelsetMotion::torque_Nm(double turn, bool local_radius) const {
  if (context_.zones == nullptr) return std::nullopt;
  const halfspace::ElasticPair elastic = halfspace::elastic_pair(context_.material);
  double torque = 0;
  for (const ContactZone& zone : *context_.zones) {
    if (!zone.carries_load || !zone.ellipse) continue;
    const double a = zone.ellipse->semi_axis_rolling_mm, b = zone.ellipse->semi_axis_across_mm;
    const Creepages k = creepages(zone, turn);
    // The mean of s^2 under Hertz's pressure is b^2 / 5.
    const double bow = local_radius ? bow_per_mm2(zone, turn) * b * b / 5 : 0.0;
    const halfspace::CreepContact contact{a,
                                          b,
                                          zone.normal_force_N,
                                          context_.friction,
                                          elastic.shear_modulus_MPa,
                                          elastic.poisson_ratio,
                                          k.longitudinal + bow,
                                          k.lateral,
                                          k.spin_per_mm};
    const halfspace::CreepForces f =
        shen_hedrick_elkins(contact, halfspace::creep_coefficients(a / b, elastic.poisson_ratio));
    const Vec3 force = f.rolling_N * zone.frame.col(0) + f.across_N * zone.frame.col(1);
    torque -= (zone.track_mm - centre_).cross(force).dot(axle_);
  }
  return torque * 1e-3;
}

std::optional<double> WheelsetMotion::turn_for_torque(double torque_Nm_asked, bool local_radius) const {
  if (context_.zones == nullptr) return std::nullopt;
  if (!(context_.friction > 0.0) && torque_Nm_asked == 0.0) return 1.0 / mean_radius_;
  constexpr double kWidest = 0.3;  // of creepage: everything slides
  double low = (1 - kWidest) / mean_radius_, high = (1 + kWidest) / mean_radius_;
  const double least = *torque_Nm(low, local_radius), most = *torque_Nm(high, local_radius);
  if (!(torque_Nm_asked > least && torque_Nm_asked < most))
    throw InputError(ErrorCode::out_of_range,
                     "an axle torque of " + number_text(torque_Nm_asked, 6) +
                         " N m is more than friction holds here (" + number_text(least, 6) + " to " +
                         number_text(most, 6) + " N m): the wheels would spin or lock.",
                     "ask a torque inside that range, or give more friction or load.");
  // The torque rises with the turning speed: false position with halving behind it.
  double f_low = least - torque_Nm_asked, f_high = most - torque_Nm_asked, turn = 1.0 / mean_radius_;
  for (int k = 0; k < 100 && high - low > 1e-14 / mean_radius_; ++k) {
    turn = k % 3 == 2 ? 0.5 * (low + high) : low - f_low * (high - low) / (f_high - f_low);
    const double f = *torque_Nm(turn, local_radius) - torque_Nm_asked;
    if (std::abs(f) < 1e-9 * (most - least)) break;
    (f > 0 ? high : low) = turn;
    (f > 0 ? f_high : f_low) = f;
  }
  return turn;
}

}  // namespace runband
