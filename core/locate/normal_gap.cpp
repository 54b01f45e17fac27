#include "core/locate/normal_gap.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "core/locate/tables.h"

namespace runband {

namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kMet_mm = 1e-9;      // residual at which a surface counts as met; Newton ends far below
constexpr double kLongStep_mm = 2.0;  // no step of Newton's method goes further
constexpr int kMostSteps = 40;

}  // namespace

NormalGap::NormalGap(const SideGeometry& geometry, const SidePose& pose, const Vec3& origin, const Vec2& tangent)
    : geometry_(geometry),
      pose_(pose),
      origin_(origin),
      across_(0.0, tangent.x(), tangent.y()),
      normal_(0.0, -tangent.y(), tangent.x()),
      tangent_(tangent),
      normal2_(-tangent.y(), tangent.x()) {}

bool NormalGap::find(double s, OnRail& point) const {
  const ProfileCurve& rail = geometry_.rail();
  const Vec2 from(origin_.y(), origin_.z());
  double shortest = kLongStep_mm;
  for (int k = 0; k < kMostSteps; ++k) {
    const CurvePoint p = rail.at(point.tau);
    const Vec2 offset = geometry_.rail_outward(p.position) - from, d = geometry_.rail_direction(p.d1);
    const double error = s - offset.dot(tangent_), forward = d.dot(tangent_);
    point.height = offset.dot(normal2_);
    if (std::abs(error) < 1e-12) return true;
    if (forward <= 1e-6 * d.norm()) return std::abs(error) < kMet_mm;
    const double limit = shortest / d.norm();
    const double step = std::clamp(error / forward, -limit, limit);
    const double next = std::clamp(point.tau + step, rail.t_begin(), rail.t_end());
    if (next == point.tau) return std::abs(error) < kMet_mm;
    if (k > 8) shortest *= 0.7;  // a corner: Newton hops over it and must be slowed down
    // The step that follows a small one would change nothing above rounding: take its effect to first order.
    if (std::abs(error) < 1e-7 && next == point.tau + step) {
      point.height += step * d.dot(normal2_);
      point.tau = next;
      return true;
    }
    point.tau = next;
  }
  return shortest < kMet_mm * 10.0;
}

bool NormalGap::find(double x, double s, OnWheel& point) const {
  const ProfileCurve& wheel = geometry_.wheel();
  const Vec3& a = pose_.axis;
  Vec3 base = origin_ + s * across_ - pose_.centre;
  base.x() += x;
  const double base_axial = base.dot(a), normal_axial = normal_.dot(a);
  double shortest = kLongStep_mm;
  for (int k = 0; k < kMostSteps; ++k) {
    const CurvePoint p = wheel.at(point.t);
    const double axial = base_axial + point.height * normal_axial;
    const Vec3 radial = base + point.height * normal_ - axial * a;
    const double radius = radial.norm();
    const double along = axial - geometry_.running_circle_y() - p.y(), out = radius - geometry_.rolling_radius(p.z());
    const double normal_radial = normal_.dot(radial) / radius;
    // | n.a  -y' | | dh |     | along |
    // | n.e   z' | | dt | = - |  out  |
    const double determinant = normal_axial * p.d1.y() + p.d1.x() * normal_radial, speed = p.d1.norm();
    if (std::abs(determinant) < 1e-6 * speed) return false;
    double dh = -(along * p.d1.y() + out * p.d1.x()) / determinant;
    double dt = (along * normal_radial - out * normal_axial) / determinant;
    const double length = std::max(std::abs(dh), std::abs(dt) * speed);
    if (length > shortest) {
      dh *= shortest / length;
      dt *= shortest / length;
    }
    if (k > 8) shortest *= 0.7;
    const double next = std::clamp(point.t + dt, wheel.t_begin(), wheel.t_end());
    const bool clamped = next != point.t + dt;
    if (clamped && next == point.t) return std::abs(along) + std::abs(out) < kMet_mm;
    point.t = next;
    point.height += dh;
    if (!clamped && length < 1e-6) return true;  // what is left is the square of that step
  }
  return shortest < kMet_mm * 10.0;
}

namespace {

// The zone of a Located, as its side sees it.
struct Seen {
  const SideGeometry& geometry;
  NormalGap gap;
  NormalGap::OnRail rail;
  NormalGap::OnWheel wheel;
  bool found = false;

  Seen(const LocatorTables& tables, const ContactZone& zone, const WheelsetPose& pose)
      : geometry(tables.side(zone.side)),
        gap(geometry, tables.seen_from(zone.side, pose),
            Vec3(zone.track_mm.x(), side_sign(zone.side) * zone.track_mm.y(), zone.track_mm.z()),
            Vec2(std::cos(zone.contact_angle_rad), std::sin(zone.contact_angle_rad))) {
    rail.tau = geometry.rail_at(geometry.rail_outward(Vec2(zone.rail_y_mm, zone.rail_z_mm)).x()).tau;
    wheel = {geometry.wheel_parameter(Vec2(zone.wheel_y_mm, zone.wheel_z_mm)), zone.gap_mm};
    found = gap.find(0.0, rail) && gap.find(0.0, 0.0, wheel);
  }
};

constexpr double kStride_mm = 0.5;  // between neighbours from which a solution is followed

bool follow_rail(const NormalGap& gap, double from, double to, NormalGap::OnRail& point) {
  const int steps = std::max(1, static_cast<int>(std::ceil(std::abs(to - from) / kStride_mm)));
  for (int k = 1; k <= steps; ++k)
    if (!gap.find(from + (to - from) * k / steps, point)) return false;
  return true;
}

bool follow_wheel(const NormalGap& gap, const Vec2& from, const Vec2& to, NormalGap::OnWheel& point) {
  const int steps = std::max(1, static_cast<int>(std::ceil((to - from).norm() / kStride_mm)));
  for (int k = 1; k <= steps; ++k) {
    const Vec2 at = from + (to - from) * (static_cast<double>(k) / steps);
    if (!gap.find(at.x(), at.y(), point)) return false;
  }
  return true;
}

// One row of the grid at s, from its start outwards both ways, each cell from an extrapolation of its neighbours.
void fill_row(const NormalGap& gap, const Grid& grid, double s, int start, const NormalGap::OnWheel& at_start,
              double rail_height, double* row) {
  for (const int way : {1, -1}) {
    NormalGap::OnWheel last = at_start, before = at_start, earlier = at_start;
    int known = 1;
    for (int i = start + way; i >= 0 && i < grid.nx; i += way) {
      NormalGap::OnWheel next = last;
      if (known >= 3) {
        next.height = 3.0 * (last.height - before.height) + earlier.height;
        next.t = 3.0 * (last.t - before.t) + earlier.t;
      } else if (known == 2) {
        next.height = 2.0 * last.height - before.height;
        next.t = 2.0 * last.t - before.t;
      }
      const bool met = known == 1 ? follow_wheel(gap, Vec2(grid.x(i - way), s), Vec2(grid.x(i), s), next)
                                  : gap.find(grid.x(i), s, next);
      if (!met) break;
      row[i] = next.height - rail_height;
      earlier = before;
      before = last;
      last = next;
      ++known;
    }
  }
}

}  // namespace

double Locator::gap_mm(const ContactZone& zone, const WheelsetPose& pose, double x_mm, double s_mm) const {
  Seen seen(*tables_, zone, pose);
  if (!seen.found || !follow_rail(seen.gap, 0.0, s_mm, seen.rail)) return kInfinity;
  if (!follow_wheel(seen.gap, Vec2::Zero(), Vec2(0.0, s_mm), seen.wheel)) return kInfinity;
  if (!follow_wheel(seen.gap, Vec2(0.0, s_mm), Vec2(x_mm, s_mm), seen.wheel)) return kInfinity;
  return seen.wheel.height - seen.rail.height;
}

std::vector<double> Locator::gap_field_mm(const ContactZone& zone, const WheelsetPose& pose, const Grid& grid) const {
  std::vector<double> values(static_cast<std::size_t>(std::max(0, grid.cells())), kInfinity);
  if (values.empty()) return values;
  const Seen centre(*tables_, zone, pose);
  if (!centre.found) return values;
  const auto nearest = [](double zero, double step, int n) {
    return std::clamp(static_cast<int>(std::lround(-zero / step)), 0, n - 1);
  };
  const int i0 = nearest(grid.x0_mm, grid.dx_mm, grid.nx), j0 = nearest(grid.s0_mm, grid.ds_mm, grid.ns);
  NormalGap::OnRail rail0 = centre.rail;
  NormalGap::OnWheel wheel0 = centre.wheel;
  if (!follow_rail(centre.gap, 0.0, grid.s(j0), rail0)) return values;
  if (!follow_wheel(centre.gap, Vec2::Zero(), Vec2(grid.x(i0), grid.s(j0)), wheel0)) return values;
  for (const int way : {1, -1}) {
    NormalGap::OnRail rail = rail0;
    NormalGap::OnWheel wheel = wheel0;
    for (int j = way > 0 ? j0 : j0 - 1; j >= 0 && j < grid.ns; j += way) {
      if (j != j0) {
        if (!follow_rail(centre.gap, grid.s(j - way), grid.s(j), rail)) break;
        if (!follow_wheel(centre.gap, Vec2(grid.x(i0), grid.s(j - way)), Vec2(grid.x(i0), grid.s(j)), wheel)) break;
      }
      double* row = values.data() + static_cast<std::ptrdiff_t>(j) * grid.nx;
      row[i0] = wheel.height - rail.height;
      fill_row(centre.gap, grid, grid.s(j), i0, wheel, rail.height, row);
    }
  }
  return values;
}

}  // namespace runband
