#include "core/surface/outline.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/surface/mesh.h"

namespace runband {

namespace {

double cross(const Vec2& a, const Vec2& b) { return a.x() * b.y() - a.y() * b.x(); }

// Points closer than this are one point.
constexpr double kSamePoint_mm = 1e-7;

void append(Outline& outline, const Outline& more) { outline.insert(outline.end(), more.begin(), more.end()); }

// Longest edges split, repeated points dropped, counter-clockwise.
Outline finished(const Outline& rough, double max_edge_mm) {
  Outline fine;
  for (std::size_t i = 0; i < rough.size(); ++i) {
    const Vec2& here = rough[i];
    const Vec2& next = rough[(i + 1) % rough.size()];
    const double length = (next - here).norm();
    if (length < kSamePoint_mm) continue;
    const int pieces = std::max(1, static_cast<int>(std::ceil(length / max_edge_mm)));
    for (int k = 0; k < pieces; ++k) fine.emplace_back(here + (next - here) * (static_cast<double>(k) / pieces));
  }
  double area = 0.0;
  for (std::size_t i = 0; i < fine.size(); ++i) area += cross(fine[i], fine[(i + 1) % fine.size()]);
  if (area < 0.0) std::reverse(fine.begin(), fine.end());
  return fine;
}

Outline profile_points(const Profile& profile, double chord_error_mm, double max_edge_mm) {
  Outline points;
  for (const CurvePoint& point : sample_curve(*profile.curve, chord_error_mm, max_edge_mm))
    points.push_back(point.position);
  return points;
}

// The part of the curve between two parameters that the chord leaves by more than the error, halved again and again.
void bisect(const std::function<Vec2(double)>& curve, double t0, const Vec2& p0, double t1, const Vec2& p1,
            double chord_error, int depth, Outline& out) {
  const Vec2 chord = p1 - p0;
  double worst = 0.0;
  for (const double share : {0.25, 0.5, 0.75}) {
    const Vec2 away = curve(t0 + share * (t1 - t0)) - p0;
    worst = std::max(worst, std::abs(cross(chord, away)) / std::max(chord.norm(), kSamePoint_mm));
  }
  if (depth > 0 && worst > 0.9 * chord_error) {
    const double middle = 0.5 * (t0 + t1);
    const Vec2 p = curve(middle);
    bisect(curve, t0, p0, middle, p, chord_error, depth - 1, out);
    bisect(curve, middle, p, t1, p1, chord_error, depth - 1, out);
    return;
  }
  out.push_back(p1);
}

}  // namespace

Outline sampled(const std::function<Vec2(double)>& curve, double chord_error) {
  constexpr int kFirstPieces = 8;
  Outline points{curve(0.0)};
  for (int i = 0; i < kFirstPieces; ++i) {
    const double t1 = (i + 1.0) / kFirstPieces;
    bisect(curve, static_cast<double>(i) / kFirstPieces, points.back(), t1, curve(t1), chord_error, 16, points);
  }
  return points;
}

Outline rounded(const std::vector<Corner>& corners, double chord_error) {
  Outline points;
  for (std::size_t i = 0; i < corners.size(); ++i) {
    const Vec2& corner = corners[i].at;
    if (i == 0 || i + 1 == corners.size() || corners[i].radius <= 0.0) {
      points.push_back(corner);
      continue;
    }
    const Vec2 back = corners[i - 1].at - corner;
    const Vec2 ahead = corners[i + 1].at - corner;
    const Vec2 u = back.normalized();
    const Vec2 v = ahead.normalized();
    const double half_angle = 0.5 * std::acos(std::clamp(u.dot(v), -1.0, 1.0));
    const double turn = std::numbers::pi - 2.0 * half_angle;
    if (turn < 1e-6 || half_angle < 1e-6) {
      points.push_back(corner);
      continue;
    }
    const double room = 0.48 * std::min(back.norm(), ahead.norm());
    const double tangent = std::min(corners[i].radius / std::tan(half_angle), room);
    const double radius = tangent * std::tan(half_angle);
    const Vec2 centre = corner + (u + v).normalized() * (radius / std::sin(half_angle));
    const Vec2 from = corner + u * tangent - centre;
    const double sense = cross(u, v) < 0.0 ? 1.0 : -1.0;
    const double step = 2.0 * std::acos(std::max(0.0, 1.0 - chord_error / radius));
    const int pieces = std::max(2, static_cast<int>(std::ceil(turn / step)));
    for (int k = 0; k <= pieces; ++k) {
      const double angle = sense * turn * k / pieces;
      points.push_back(centre + Vec2(std::cos(angle) * from.x() - std::sin(angle) * from.y(),
                                     std::sin(angle) * from.x() + std::cos(angle) * from.y()));
    }
  }
  return points;
}

Outline rail_outline(const Profile& rail, double chord_error_mm, double max_edge_mm) {
  Outline outline = profile_points(rail, chord_error_mm, max_edge_mm);
  const Vec2 gauge_end = outline.front();
  const Vec2 field_end = outline.back();
  // The width of the head where the trade measures it, 14 mm below its top, or where a shorter profile ends.
  constexpr double kGaugeDepth_mm = -14.0;
  double lowest_y = 0.0, highest_y = 0.0;
  const auto widen = [&](double y) {
    lowest_y = std::min(lowest_y, y);
    highest_y = std::max(highest_y, y);
  };
  for (std::size_t i = 0; i < outline.size(); ++i) {
    if (outline[i].y() >= kGaugeDepth_mm) widen(outline[i].x());
    if (i == 0) continue;
    const double above = outline[i - 1].y() - kGaugeDepth_mm, below = outline[i].y() - kGaugeDepth_mm;
    if (above * below < 0.0) widen((outline[i - 1] + (outline[i] - outline[i - 1]) * (above / (above - below))).x());
  }
  const double width = highest_y - lowest_y;
  // The web stands under the profile's origin unless the profile hardly reaches to one side of it.
  double middle = 0.0;
  if (std::min(-gauge_end.x(), field_end.x()) < 0.2 * width) middle = 0.5 * (gauge_end.x() + field_end.x());
  const double scale = 2.0 * std::max(middle - lowest_y, highest_y - middle) / 72.0;
  const double web = std::min({8.25 * scale, 0.8 * (field_end.x() - middle), 0.8 * (middle - gauge_end.x())});
  constexpr double kFishing = 1.0 / 2.75;  // slope of the fishing surfaces, head and foot

  // Where the side of the head ends: as deep as usual, or where a deeper profile ends.
  const double usual_side = -36.0 * scale;
  const double lower_end = std::min({gauge_end.y(), field_end.y(), usual_side});
  const double foot = lower_end - usual_side - 172.0 * scale;  // z of the foot's underside
  const double edge_top = foot + 11.5 * scale;
  const double knee_y = 40.0 * scale;
  const double knee_z = edge_top + 35.0 * scale / 14.0;

  // One side of the body from the profile's end downward to the foot's lower edge; side = +1 field, -1 gauge.
  const auto body = [&](const Vec2& end, double side) {
    std::vector<Corner> corners{{end, 0.0}};
    double side_z = end.y();
    if (end.y() > usual_side + 0.1 * scale) {
      side_z = usual_side;
      corners.push_back({{end.x(), side_z}, 3.0 * scale});
    }
    const double reach = std::abs(end.x() - middle) - web;
    const double web_y = middle + side * web;
    corners.push_back({{web_y, side_z - reach * kFishing}, 22.0 * scale});
    corners.push_back({{web_y, knee_z + (knee_y - web) * kFishing}, 22.0 * scale});
    corners.push_back({{middle + side * knee_y, knee_z}, 40.0 * scale});
    corners.push_back({{middle + side * 75.0 * scale, edge_top}, 4.0 * scale});
    corners.push_back({{middle + side * 75.0 * scale, foot}, 2.0 * scale});
    corners.push_back({{middle, foot}, 0.0});
    return rounded(corners, chord_error_mm);
  };
  Outline gauge_side = body(gauge_end, -1.0);
  std::reverse(gauge_side.begin(), gauge_side.end());
  append(outline, body(field_end, 1.0));
  append(outline, gauge_side);
  return finished(outline, max_edge_mm);
}

double wheel_bore_radius_mm(double rolling_radius_mm) {
  require_positive("wheel", "rolling_radius_mm", rolling_radius_mm, "mm");
  return 92.0 / 460.0 * rolling_radius_mm;
}

Outline wheel_outline(const Profile& wheel, double rolling_radius_mm, double chord_error_mm, double max_edge_mm) {
  // Below, z is minus the radius: the axle is at z = 0, the tread at z = -rolling radius.
  Outline outline = profile_points(wheel, chord_error_mm, max_edge_mm);
  for (Vec2& point : outline) point.y() -= rolling_radius_mm;
  const double scale = rolling_radius_mm / 460.0;
  const Vec2 back = outline.front();
  const Vec2 front = outline.back();
  double highest = back.y();
  for (const Vec2& point : outline) highest = std::max(highest, point.y());

  const double rim_edge = std::max(-398.0 * scale, highest + 5.0 * scale);
  const double rim = rim_edge + 7.0 * scale;  // where the web begins
  const double hub = -142.0 * scale;
  const double bore = -wheel_bore_radius_mm(rolling_radius_mm);
  if (rim > hub - 60.0 * scale) {
    throw out_of_range("wheel", "rolling_radius_mm", rolling_radius_mm, "mm",
                       "large against the height of the wheel's profile");
  }
  const double width = front.x() - back.x();
  const double hub_back = back.x() - 10.0 * scale;
  const double hub_front = hub_back + std::max(175.0 * scale, 0.8 * width);
  const double web_at_rim = back.x() + 0.52 * width;
  const double web_at_hub = 0.5 * (hub_back + hub_front);

  // The web's middle line bends between rim and hub; its half thickness flares out at both, as fillets would make it.
  const auto web_side = [&](double side) {
    return [=](double u) {  // 0 at the rim, 1 at the hub
      const double ease = u * u * (3.0 - 2.0 * u);
      const double bow = std::sin(std::numbers::pi * u);
      const double middle = web_at_rim + (web_at_hub - web_at_rim) * ease - 22.0 * scale * bow * bow;
      const double half = 11.0 + 3.0 * u + 17.0 * std::pow(1.0 - u, 9.0) + 17.0 * std::pow(u, 9.0);
      return Vec2(middle + side * std::min(half * scale, 0.35 * width), rim + (hub - rim) * u);
    };
  };
  const Outline field_web = sampled(web_side(1.0), chord_error_mm);
  Outline gauge_web = sampled(web_side(-1.0), chord_error_mm);
  std::reverse(gauge_web.begin(), gauge_web.end());

  append(outline,
         rounded({{front, 0.0}, {{front.x(), rim_edge}, 6.0 * scale}, {field_web.front(), 0.0}}, chord_error_mm));
  append(outline, field_web);
  append(outline, rounded({{field_web.back(), 0.0},
                           {{hub_front, hub}, 6.0 * scale},
                           {{hub_front, bore}, 2.0 * scale},
                           {{hub_back, bore}, 2.0 * scale},
                           {{hub_back, hub}, 6.0 * scale},
                           {gauge_web.front(), 0.0}},
                          chord_error_mm));
  append(outline, gauge_web);
  append(outline, rounded({{gauge_web.back(), 0.0}, {{back.x(), rim_edge}, 6.0 * scale}, {back, 0.0}}, chord_error_mm));
  return finished(outline, max_edge_mm);
}

}  // namespace runband
