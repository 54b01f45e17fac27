#include "viewer/plot/canvas.h"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace runband::plot {

namespace {
// Corners of a drawn circle: the sagitta stays below 0.02 mm up to 30 mm radius.
constexpr int kCircleCorners = 144;
constexpr double kDegree = std::numbers::pi / 180.0;
constexpr double kArrowSlimness = 0.18;  // half width over length of an arrow head, at least ...
constexpr double kArrowShoulder = 1.5;   // ... so many widths of its line
}  // namespace

std::vector<Point> corners(const Box& box) {
  return {{box.x, box.y}, {box.right(), box.y}, {box.right(), box.bottom()}, {box.x, box.bottom()}};
}

std::vector<Point> ellipse(Point centre, double radius_x, double radius_y) {
  std::vector<Point> points;
  points.reserve(kCircleCorners);
  for (int i = 0; i < kCircleCorners; ++i) {
    const double angle = 2 * std::numbers::pi * i / kCircleCorners;
    points.push_back({centre.x + radius_x * std::cos(angle), centre.y - radius_y * std::sin(angle)});
  }
  return points;
}

std::vector<Point> circle(Point centre, double radius) { return ellipse(centre, radius, radius); }

std::vector<Point> arc(Point centre, double radius, double from_deg, double to_deg) {
  const int pieces = std::max(2, static_cast<int>(std::ceil(std::abs(to_deg - from_deg) / 360.0 * kCircleCorners)));
  std::vector<Point> points;
  for (int i = 0; i <= pieces; ++i) {
    const double angle = std::lerp(from_deg, to_deg, static_cast<double>(i) / pieces) * kDegree;
    points.push_back({centre.x + radius * std::cos(angle), centre.y - radius * std::sin(angle)});
  }
  return points;
}

void draw_line(Canvas& canvas, Point from, Point to, const Stroke& stroke) {
  const Point points[] = {from, to};
  canvas.line(points, stroke, false);
}

void draw_text(Canvas& canvas, Point at, std::string_view words, const Font& font, const Colour& colour, Anchor anchor,
               double turn_deg) {
  if (!words.empty()) canvas.text(at, words, font, colour, anchor, turn_deg);
}

void draw_arrow(Canvas& canvas, Point from, Point to, const Stroke& stroke, double head) {
  const double length = std::hypot(to.x - from.x, to.y - from.y);
  if (length <= 0) return;
  const Point u{(to.x - from.x) / length, (to.y - from.y) / length};
  const Point base{to.x - u.x * head, to.y - u.y * head};
  if (length > head) draw_line(canvas, from, base, stroke);
  const double half = std::max(head * kArrowSlimness, stroke.width * kArrowShoulder);
  const Point tip[] = {to, {base.x - u.y * half, base.y + u.x * half}, {base.x + u.y * half, base.y - u.x * half}};
  canvas.polygon(tip, stroke.colour);
}

void draw_hatch(Canvas& canvas, std::span<const Point> outline, double angle_deg, double spacing,
                const Stroke& stroke) {
  if (outline.size() < 3 || !(spacing > 0)) return;
  // Along the hatch (u) and across it (v).
  const Point along{std::cos(angle_deg * kDegree), -std::sin(angle_deg * kDegree)}, across{-along.y, along.x};
  const auto u = [&](Point p) { return p.x * along.x + p.y * along.y; };
  const auto v = [&](Point p) { return p.x * across.x + p.y * across.y; };
  double low = v(outline[0]), high = low;
  for (const Point& p : outline) {
    low = std::min(low, v(p));
    high = std::max(high, v(p));
  }
  for (double level = std::ceil(low / spacing) * spacing; level < high; level += spacing) {
    std::vector<double> crossings;
    for (std::size_t i = 0; i < outline.size(); ++i) {
      const Point p = outline[i], q = outline[(i + 1) % outline.size()];
      const double a = v(p) - level, b = v(q) - level;
      if ((a < 0) != (b < 0)) crossings.push_back(std::lerp(u(p), u(q), a / (a - b)));
    }
    std::sort(crossings.begin(), crossings.end());
    for (std::size_t i = 0; i + 1 < crossings.size(); i += 2) {
      const auto at = [&](double along_u) {
        return Point{along.x * along_u + across.x * level, along.y * along_u + across.y * level};
      };
      draw_line(canvas, at(crossings[i]), at(crossings[i + 1]), stroke);
    }
  }
}

// Sutherland and Hodgman (1974): one edge of the box after the other.
std::vector<Point> cut_to(std::vector<Point> outline, const Box& box) {
  const auto keep = [&](const auto& depth) {
    std::vector<Point> kept;
    for (std::size_t i = 0; i < outline.size(); ++i) {
      const Point p = outline[i], q = outline[(i + 1) % outline.size()];
      const double a = depth(p), b = depth(q);
      if (a >= 0) kept.push_back(p);
      if ((a < 0) != (b < 0)) kept.push_back({std::lerp(p.x, q.x, a / (a - b)), std::lerp(p.y, q.y, a / (a - b))});
    }
    outline = std::move(kept);
  };
  keep([&](Point p) { return p.x - box.x; });
  keep([&](Point p) { return box.right() - p.x; });
  keep([&](Point p) { return p.y - box.y; });
  keep([&](Point p) { return box.bottom() - p.y; });
  return outline;
}

Box text_box(const Canvas& canvas, Point at, std::string_view words, const Font& font, Anchor anchor) {
  const TextSize size = canvas.measure(words, font);
  const double shift = anchor == Anchor::start ? 0.0 : anchor == Anchor::middle ? size.width / 2 : size.width;
  return {at.x - shift, at.y - size.ascent, size.width, size.ascent + size.descent};
}

}  // namespace runband::plot
