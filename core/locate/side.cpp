#include "core/locate/side.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/pairing/outline.h"

namespace runband {

namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kWheelStep_mm = 0.2;  // of arc, between samples of the wheel: finer than any feature that is kept
constexpr double kRailStep_mm = 0.02;  // of the rail's table over u
constexpr double kUpright = 1e-9;      // cosine of a tangent taken as upright
constexpr double kSteepest = 1e6;      // slope that stands for an upright or overhanging one

}  // namespace

SidePose side_pose(Side side, double lateral_axle_mm, double yaw_rad, double roll_rad, double axle_height_mm) {
  const double sign = side_sign(side), yaw = sign * yaw_rad, roll = sign * roll_rad;
  SidePose pose;
  pose.axis = Vec3(-std::sin(yaw) * std::cos(roll), std::cos(yaw) * std::cos(roll), std::sin(roll));
  pose.centre = Vec3(0.0, sign * lateral_axle_mm, axle_height_mm);
  pose.yaw = yaw;
  return pose;
}

SideGeometry::SideGeometry(const Pairing& pairing, Side side, std::shared_ptr<const SideGeometry> twin)
    : wheel_(pairing.wheel(side).curve),
      rail_(pairing.rail(side).curve),
      mount_(pairing.mount(side)),
      cos_(std::cos(mount_.inclination_rad)),
      sin_(std::sin(mount_.inclination_rad)),
      running_radius_(pairing.rolling_radius_mm(side)),
      running_circle_y_(pairing.wheelset().running_circle_y_mm()) {
  const std::vector<CurvePoint> samples = even_samples(*wheel_, kWheelStep_mm);
  const auto n = static_cast<Eigen::Index>(samples.size());
  t_.resize(n);
  axial_.resize(n);
  radius_.resize(n);
  slope_.resize(n);
  double steepest = 0.0, tip_z = 0.0, tip_t = wheel_->t_begin();
  for (const CurvePoint& p : samples)
    if (p.y() < 0.0 && p.z() < tip_z) {
      tip_z = p.z();
      tip_t = p.t;
    }
  for (Eigen::Index i = 0; i < n; ++i) {
    const CurvePoint& p = samples[static_cast<std::size_t>(i)];
    t_[i] = p.t;
    axial_[i] = running_circle_y_ + p.y();
    radius_[i] = rolling_radius(p.z());
    const Vec2 d = p.d1.normalized();
    slope_[i] = d.x() > 1.0 / kSteepest ? d.y() / d.x() : kSteepest;
    if (p.t > tip_t && p.y() < 0.0) steepest = std::max(steepest, std::atan2(d.y(), d.x()));
  }
  radius_slope_ = radius_ * slope_;
  steepness_ = 1.0 + slope_.square();
  flange_angle_ = steepest;
  field_end_y_ = samples.back().y();
  // From the gauge-side end of the steepest stretch on towards the tip, a touching flange climbs.
  constexpr double kStretch_rad = 0.01;
  climb_t_ = wheel_->t_begin();
  for (const CurvePoint& p : samples)
    if (p.t > tip_t && p.y() < 0.0 && std::atan2(p.d1.y(), p.d1.x()) >= steepest - kStretch_rad) {
      climb_t_ = p.t;
      break;
    }
  const bool same_rail = twin && twin->rail_ == rail_ && twin->mount_.shift == mount_.shift &&
                         twin->mount_.inclination_rad == mount_.inclination_rad;
  rail_table_ = same_rail ? twin->rail_table_ : tabulate(*rail_, mount_);
}

std::shared_ptr<const SideGeometry::RailTable> SideGeometry::tabulate(const ProfileCurve& rail,
                                                                      const RailMount& mount) {
  const std::vector<CurvePoint> samples = even_samples(rail, kRailStep_mm);
  std::vector<Vec2> points;
  points.reserve(samples.size());
  auto table = std::make_shared<RailTable>();
  table->begin = kInfinity;
  table->end = -kInfinity;
  const Vec2 across = mount.outward_direction(Vec2::UnitX()), up = mount.outward_direction(Vec2::UnitY());
  for (const CurvePoint& p : samples) {
    points.emplace_back(mount.shift + p.y() * across + p.z() * up);
    table->begin = std::min(table->begin, points.back().x());
    table->end = std::max(table->end, points.back().x());
  }
  const auto n = static_cast<std::size_t>(std::ceil((table->end - table->begin) / kRailStep_mm)) + 1;
  table->step = (table->end - table->begin) / static_cast<double>(n - 1);
  table->per_step = 1.0 / table->step;
  table->v.assign(n, -kInfinity);
  table->tau.assign(n, 0.0);
  // Upper envelope of the rail over u: what an undercut hides cannot be touched from above.
  for (std::size_t k = 1; k < points.size(); ++k) {
    const double u0 = points[k - 1].x(), u1 = points[k].x();
    const double low = std::min(u0, u1), high = std::max(u0, u1);
    const double reach = 1e-9 * table->step;
    auto i = static_cast<std::size_t>(
        std::max(0.0, std::ceil((low - table->begin) * table->per_step - reach * table->per_step)));
    for (; i < n && table->begin + static_cast<double>(i) * table->step <= high + reach; ++i) {
      const double u = table->begin + static_cast<double>(i) * table->step;
      const double part = high > low ? std::clamp((u - u0) / (u1 - u0), 0.0, 1.0) : 0.5;
      const double v = points[k - 1].y() + part * (points[k].y() - points[k - 1].y());
      if (v > table->v[i]) {
        table->v[i] = v;
        table->tau[i] = samples[k - 1].t + part * (samples[k].t - samples[k - 1].t);
      }
    }
  }
  return table;
}

Vec2 SideGeometry::rail_direction(const Vec2& d) const {
  return {cos_ * d.x() - sin_ * d.y(), sin_ * d.x() + cos_ * d.y()};
}

Vec2 SideGeometry::rail_outward(const Vec2& p) const { return rail_direction(p) + mount_.shift; }

LocusPoint SideGeometry::locus(const CurvePoint& p, const SidePose& pose) const {
  LocusPoint point;
  const double speed = p.d1.norm(), along = p.d1.x() / speed, down = p.d1.y() / speed;
  if (along <= kUpright) return point;
  const Vec3& a = pose.axis;
  const double slope = down / along, level2 = 1.0 - a.x() * a.x(), level = std::sqrt(level2);
  const double m2 = 1.0 - a.x() * a.x() * (1.0 + slope * slope);
  if (m2 <= 0.0) return point;
  // The radial unit vector e of the point, with e_x such that the normal e + slope a has no x component.
  const double ex = -a.x() * slope, outward = a.x() * a.x() * slope / level, downward = std::sqrt(m2) / level;
  const Vec3 e(ex, (outward * a.y() + downward * a.z()) / level, (outward * a.z() - downward * a.y()) / level);
  point.position = pose.centre + (running_circle_y_ + p.y()) * a + rolling_radius(p.z()) * e;
  const Vec2 normal(e.y() + slope * a.y(), e.z() + slope * a.z());
  const double length = normal.norm();
  if (normal.y() > -kUpright * length) return point;
  point.tangent = Vec2(-normal.y(), normal.x()) / length;
  point.exists = true;
  return point;
}

RailPoint SideGeometry::rail_at(double u) const {
  RailPoint point;
  const RailTable& table = *rail_table_;
  if (!(u >= table.begin && u <= table.end)) return point;
  const double place = std::min((u - table.begin) * table.per_step, static_cast<double>(table.v.size()) - 1.000001);
  const auto i = static_cast<std::size_t>(place);
  const double tau0 = table.tau[i], tau1 = table.tau[i + 1];
  // Newton from the table; the bracket is widened a little because the table is made of chords.
  const double low = std::min(tau0, tau1), high = std::max(tau0, tau1), pad = 0.25 * (high - low);
  double tau = tau0 + (place - static_cast<double>(i)) * (tau1 - tau0);
  CurvePoint p = rail_->at(tau);
  Vec2 d = rail_direction(p.d1);
  constexpr int kMost = 8;
  for (int k = 0; k < kMost; ++k) {
    const double error = rail_outward(p.position).x() - u;
    if (std::abs(error) < 4e-16 * std::max(1.0, std::abs(u)) || std::abs(d.x()) < kUpright * d.norm()) break;
    const double next = std::clamp(tau - error / d.x(), low - pad, high + pad);
    if (next == tau) break;
    tau = next;
    p = rail_->at(tau);
    d = rail_direction(p.d1);
    if (std::abs(error) < 1e-8 * std::abs(d.x()) / d.norm()) break;  // the step just taken squared that error
  }
  point.exists = true;
  point.tau = tau;
  point.position = rail_outward(p.position);
  point.tangent = d.normalized();
  point.curvature = p.curvature();
  return point;
}

double SideGeometry::wheel_parameter(const Vec2& on_wheel) const {
  const double axial = running_circle_y_ + on_wheel.x(), radius = rolling_radius(on_wheel.y());
  Eigen::Index nearest = 0;
  ((axial_ - axial).square() + (radius_ - radius).square()).minCoeff(&nearest);
  const Eigen::Index first = std::max<Eigen::Index>(nearest - 1, 0), last = std::min(nearest + 1, t_.size() - 1);
  double t = t_[nearest];
  for (int k = 0; k < 12; ++k) {
    const CurvePoint p = wheel_->at(t);
    const double next = std::clamp(t + (on_wheel - p.position).dot(p.d1) / p.d1.squaredNorm(), t_[first], t_[last]);
    if (std::abs(next - t) < 1e-13 * std::max(1.0, std::abs(t))) break;
    t = next;
  }
  return t;
}

void SideGeometry::scan(const SidePose& pose, SearchSpace& space) const {
  const Vec3& a = pose.axis;
  const double ax2 = a.x() * a.x(), level2 = 1.0 - ax2;
  const Eigen::Index n = t_.size();
  space.root.resize(n);
  space.u.resize(n);
  space.v.resize(n);
  space.gap.resize(n);
  // u and v of the locus: see locus(); outward part ax2 slope / level, downward part sqrt(m2) / level.
  space.root = (1.0 - ax2 * steepness_).max(0.0).sqrt();
  space.u = (pose.centre.y()) + a.y() * axial_ + (ax2 * a.y() / level2) * radius_slope_ +
            (a.z() / level2) * (radius_ * space.root);
  space.v = (pose.centre.z()) + a.z() * axial_ + (ax2 * a.z() / level2) * radius_slope_ -
            (a.y() / level2) * (radius_ * space.root);
  const RailTable& table = *rail_table_;
  const double last = static_cast<double>(table.v.size()) - 1.0;
  const double *u = space.u.data(), *v = space.v.data(), *root = space.root.data(), *slope = slope_.data();
  const double* rail = table.v.data();
  double* gap = space.gap.data();
  const auto beside = [&](Eigen::Index i) { return !(u[i] >= table.begin && u[i] < table.end); };
  space.first = 0;
  space.last = n;
  while (space.first < n && beside(space.first)) ++space.first;
  while (space.last > space.first && beside(space.last - 1)) --space.last;
  std::fill(gap, gap + space.first, kInfinity);
  std::fill(gap + space.last, gap + n, kInfinity);
  for (Eigen::Index i = space.first; i < space.last; ++i) {
    const double place = (u[i] - table.begin) * table.per_step;
    double above = kInfinity;
    if (place >= 0.0 && place < last && slope[i] < kSteepest && root[i] > 0.0) {
      const int k = static_cast<int>(place);
      const double part = place - static_cast<double>(k);
      above = v[i] - (rail[k] + part * (rail[k + 1] - rail[k]));
    }
    gap[i] = above;
  }
}

SideGeometry::Sampled SideGeometry::sample(double t, const SidePose& pose) const {
  Sampled s;
  s.gap = kInfinity;
  const CurvePoint profile = wheel_->at(t);
  s.wheel = locus(profile, pose);
  if (!s.wheel.exists) return s;
  s.rail = rail_at(s.wheel.position.y());
  if (!s.rail.exists) return s;
  s.gap = s.wheel.position.z() - s.rail.position.y();
  s.slope_difference = s.wheel.tangent.y() * s.rail.tangent.x() - s.wheel.tangent.x() * s.rail.tangent.y();
  s.speed = profile.d1.norm();
  s.bend = s.speed * (profile.curvature() - s.rail.curvature);
  return s;
}

}  // namespace runband
