#include "core/locate/curvature.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>

namespace runband {

namespace {

constexpr int kNodes = 40;          // across the window: middles of equal strips
constexpr double kFlattest = 1e-3;  // least relative curvature across, as a part of that along
constexpr double kFewestNodes = 4;

struct Node {
  bool met = false;
  double arc = 0;    // from the touching point, signed, mm
  double angle = 0;  // of the tangent, against that at the touching point, rad
};
using Nodes = std::array<Node, kNodes>;

// Nodes of a curve at the tangent coordinates s_k, followed from the touching point outward both ways.
void place_nodes(const ProfileCurve& curve, double t0, const Vec2& origin, const Vec2& direction, double half_width,
                 Nodes& nodes) {
  const double strip = 2.0 * half_width / kNodes;
  for (const int way : {1, -1}) {
    double t = t0;
    for (int k = way > 0 ? kNodes / 2 : kNodes / 2 - 1; k >= 0 && k < kNodes; k += way) {
      const double s = (k + 0.5) * strip - half_width;
      CurvePoint p;
      bool met = false;
      double longest = std::max(2.0 * strip, 0.05);
      for (int step = 0; step < 30; ++step) {
        p = curve.at(t);
        const double error = s - (p.position - origin).dot(direction), speed = p.d1.norm();
        if (std::abs(error) < 1e-7 * half_width) {
          met = true;
          break;
        }
        const double forward = p.d1.dot(direction);
        if (forward < 0.05 * speed) break;
        const double next = std::clamp(t + std::clamp(error / forward, -longest / speed, longest / speed),
                                       curve.t_begin(), curve.t_end());
        if (next == t) break;
        if (step > 6) longest *= 0.7;  // over a corner
        met = step > 6 && longest < 1e-6;
        if (met) break;
        t = next;
      }
      if (!met) break;
      Node& node = nodes[static_cast<std::size_t>(k)];
      const Vec2 chord = p.position - origin;
      node.angle = std::atan2(direction.x() * p.d1.y() - direction.y() * p.d1.x(), direction.dot(p.d1));
      // Exact for an arc; for anything else right to the fourth order.
      const double half = 0.5 * node.angle;
      const double stretch = std::abs(half) < 1e-4 ? 1.0 + half * half / 6.0 : half / std::sin(half);
      node.arc = std::copysign(chord.norm() * stretch, s);
      node.met = true;
    }
  }
}

// Weighted straight line through (arc, angle).
struct Line {
  double offset = 0, slope = 0;
};

Line straight_line(const Nodes& nodes, const Nodes& other) {
  double w = 0, wx = 0, wy = 0, wxx = 0, wxy = 0;
  for (int k = 0; k < kNodes; ++k) {
    const auto i = static_cast<std::size_t>(k);
    if (!nodes[i].met || !other[i].met) continue;
    const double place = (k + 0.5) * 2.0 / kNodes - 1.0, weight = 1.0 - place * place;
    w += weight;
    wx += weight * nodes[i].arc;
    wy += weight * nodes[i].angle;
    wxx += weight * nodes[i].arc * nodes[i].arc;
    wxy += weight * nodes[i].arc * nodes[i].angle;
  }
  Line line;
  const double determinant = w * wxx - wx * wx;
  if (determinant > 0.0) {
    line.slope = (w * wxy - wx * wy) / determinant;
    line.offset = (wy - line.slope * wx) / w;
  }
  return line;
}

double sharpest(const Nodes& nodes) {
  double most = 0.0;
  for (std::size_t k = 1; k < kNodes; ++k) {
    const double arc = nodes[k].arc - nodes[k - 1].arc;
    if (nodes[k].met && nodes[k - 1].met && arc > 0.0)
      most = std::max(most, std::abs(nodes[k].angle - nodes[k - 1].angle) / arc);
  }
  return most;
}

}  // namespace

CurvatureWindow::CurvatureWindow(const SideGeometry& geometry, const SidePose& pose, const Touch& touch)
    : geometry_(&geometry), touch_(touch) {
  const CurvePoint p = geometry.wheel().at(touch.t);
  const Vec2 d = p.d1.normalized();
  const double radius = geometry.rolling_radius(p.z());
  circle_ = d.x() / radius;
  // Meridian's direction in space; its part along the track says how far the wheel's circle is turned from the track.
  const Vec3 radial = (touch.wheel - pose.centre) - (touch.wheel - pose.centre).dot(pose.axis) * pose.axis;
  const Vec3 meridian = d.x() * pose.axis - d.y() * radial.normalized();
  turn2_ = meridian.x() * meridian.x();
  rolling_ = circle_ * (1.0 - turn2_);
}

WindowFit CurvatureWindow::fit(double half_width_mm) const {
  WindowFit result;
  Nodes wheel{}, rail{};
  const CurvePoint w = geometry_->wheel().at(touch_.t), r = geometry_->rail().at(touch_.tau);
  // The tangent that both share at the touching point, turned into each profile's frame. At a corner the wheel's own
  // tangent is one side's; the rail's stands for both.
  const Vec2 rail_tangent = r.d1.normalized();
  const Vec2 wheel_tangent = w.d1.normalized();
  place_nodes(geometry_->wheel(), touch_.t, w.position, wheel_tangent, half_width_mm, wheel);
  place_nodes(geometry_->rail(), touch_.tau, r.position, rail_tangent, half_width_mm, rail);
  int met = 0;
  for (std::size_t k = 0; k < kNodes; ++k) met += wheel[k].met && rail[k].met ? 1 : 0;
  result.cut_off = met < kNodes;
  const Line wheel_line = straight_line(wheel, rail), rail_line = straight_line(rail, wheel);
  // Euler's theorem: with yaw the frame is turned a little against the wheel's own principal directions.
  FittedCurvature& c = result.curvature;
  const double meridian = wheel_line.slope;
  c.rolling_per_mm = circle_ * (1.0 - turn2_) + meridian * turn2_;
  c.wheel_across_per_mm = meridian * (1.0 - turn2_) + circle_ * turn2_;
  c.rail_across_per_mm = -rail_line.slope;
  c.across_per_mm = c.wheel_across_per_mm + c.rail_across_per_mm;
  if (met < kFewestNodes) c.across_per_mm = std::max(c.across_per_mm, 1.0 / half_width_mm);
  if (!(c.rolling_per_mm > 0.1 * circle_)) c.rolling_per_mm = 0.1 * circle_;

  // What is left of the angles, summed up, is the deviation of the gap from its parabola.
  double height = 0.0, sum = 0.0, squares = 0.0, before = 0.0, place = 0.0;
  bool first = true;
  for (std::size_t k = 0; k < kNodes; ++k) {
    if (!wheel[k].met || !rail[k].met) continue;
    const double left = (wheel[k].angle - wheel_line.offset - wheel_line.slope * wheel[k].arc) -
                        (rail[k].angle - rail_line.offset - rail_line.slope * rail[k].arc);
    if (!first) height += 0.5 * (left + before) * (rail[k].arc - place);
    first = false;
    before = left;
    place = rail[k].arc;
    sum += height;
    squares += height * height;
  }
  if (met > 0) result.deviation_mm = std::sqrt(std::max(0.0, squares / met - sum * sum / met / met));
  const double sharp = std::max(sharpest(wheel), sharpest(rail));
  result.smallest_radius_mm = sharp > 0.0 ? 1.0 / sharp : std::numeric_limits<double>::infinity();
  const double floor = kFlattest * c.rolling_per_mm;
  if (c.across_per_mm < floor) {
    c.across_per_mm = floor;
    result.conforming = true;
  }
  return result;
}

}  // namespace runband
