// What a drawing is made with. Small on purpose: paper (cairo), a page (SVG) and a screen can each be it.
#pragma once

#include <span>
#include <string_view>
#include <vector>

#include "viewer/plot/colour.h"

namespace runband::plot {

/// In canvas units: millimetres on paper, pixels on a screen. x to the right, y down.
struct Point {
  double x = 0, y = 0;
};

struct Box {
  double x = 0, y = 0, width = 0, height = 0;
  double right() const { return x + width; }
  double bottom() const { return y + height; }
  Point centre() const { return {x + width / 2, y + height / 2}; }
  bool contains(Point p) const { return p.x >= x && p.x <= right() && p.y >= y && p.y <= bottom(); }
  bool overlaps(const Box& other) const {
    return x < other.right() && other.x < right() && y < other.bottom() && other.y < bottom();
  }
  Box grown(double by) const { return {x - by, y - by, width + 2 * by, height + 2 * by}; }
};

enum class Dash { solid, dashed, dotted, chain };

struct Stroke {
  Colour colour;
  double width = 0.25;
  Dash dash = Dash::solid;
};

/// Two weights of one family; `spacing` is added after every letter, in units of the size.
struct Font {
  double size = 2.47;
  bool strong = false;
  double spacing = 0;
};

/// Width along the baseline; capital height above it and depth below it.
struct TextSize {
  double width = 0, ascent = 0, descent = 0;
};

enum class Anchor { start, middle, end };

/// Four bytes a pixel, red first, alpha not premultiplied, rows from the top.
struct Image {
  int width = 0, height = 0;
  std::vector<std::uint8_t> rgba;
};

class Canvas {
 public:
  virtual ~Canvas() = default;

  virtual Box page() const = 0;
  /// Straight pieces through the points; `closed` joins the last to the first.
  virtual void line(std::span<const Point> points, const Stroke& stroke, bool closed) = 0;
  /// Filled, even-odd.
  virtual void polygon(std::span<const Point> points, const Colour& fill) = 0;
  /// `at` is on the baseline, at the start, middle or end of the words; turned by `turn_deg` anticlockwise about it.
  virtual void text(Point at, std::string_view words, const Font& font, const Colour& colour, Anchor anchor,
                    double turn_deg) = 0;
  virtual TextSize measure(std::string_view words, const Font& font) const = 0;
  /// The image fills the box; pixels stay sharp unless `smooth`.
  virtual void image(const Box& box, const Image& image, bool smooth) = 0;
  /// Nothing outside this convex outline is drawn until the matching pop_clip. Nests.
  virtual void push_clip(std::span<const Point> outline) = 0;
  virtual void pop_clip() = 0;
};

// Shorthands every drawing uses.

std::vector<Point> corners(const Box& box);
/// A circle or ellipse as a closed polyline, fine enough for paper.
std::vector<Point> circle(Point centre, double radius);
std::vector<Point> ellipse(Point centre, double radius_x, double radius_y);
/// From one angle to another, degrees anticlockwise from the x axis (y down on the canvas is taken care of).
std::vector<Point> arc(Point centre, double radius, double from_deg, double to_deg);

void draw_line(Canvas& canvas, Point from, Point to, const Stroke& stroke);
void draw_text(Canvas& canvas, Point at, std::string_view words, const Font& font, const Colour& colour,
               Anchor anchor = Anchor::start, double turn_deg = 0);
/// A line with a solid arrow head at `to`.
void draw_arrow(Canvas& canvas, Point from, Point to, const Stroke& stroke, double head);
/// Parallel lines inside a closed outline (even-odd), `angle_deg` anticlockwise, `spacing` apart.
void draw_hatch(Canvas& canvas, std::span<const Point> outline, double angle_deg, double spacing, const Stroke& stroke);
/// The part of a closed outline inside the box; where the outline leaves it, the result runs along the box's edge.
std::vector<Point> cut_to(std::vector<Point> outline, const Box& box);
/// The box that words occupy, unturned.
Box text_box(const Canvas& canvas, Point at, std::string_view words, const Font& font, Anchor anchor);

}  // namespace runband::plot
