// A plot as plain data: what to show, not how. The same value is drawn on paper and on a screen.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "viewer/plot/canvas.h"
#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"
#include "viewer/plot/theme.h"

namespace runband::plot {

/// An ink of the theme, or a colour of its own.
struct Paint {
  Ink ink = Ink::ink;
  double opacity = 1;
  std::optional<Colour> colour;
};

/// Which of the two line widths of a drawing.
enum class Weight { fine, bold };

struct Axis {
  std::string title, unit;
  std::optional<Range> range;  ///< empty: from the data
  bool logarithmic = false;
  bool numbers = true;  ///< tick labels and title; off where the plot below carries them
};

/// Not-a-number breaks the line.
struct Line {
  std::vector<double> x, y;
  Paint paint;
  Weight weight = Weight::bold;
  Dash dash = Dash::solid;
  bool closed = false;
  std::string label;  ///< written at the end of the line
};

/// Filled between low and high over x.
struct Band {
  std::vector<double> x, low, high;
  Paint paint{Ink::steel, 0.25, {}};
};

/// A filled outline, hatched as a cut body is.
struct Area {
  std::vector<double> x, y;
  std::optional<Paint> fill;
  std::optional<double> hatch_deg;  ///< direction of the hatch
  Paint hatch{Ink::steel, 1, {}};
};

enum class Shape { dot, ring, cross, triangle };

struct Points {
  std::vector<double> x, y;
  Paint paint;
  Shape shape = Shape::dot;
  double size = 1.4;  ///< across, in units of the style's millimetre
};

/// Something that happens at one x: a short post on the ruler, and a dotted line above it.
struct Post {
  double x = 0;
  std::string label;
  Paint paint{Ink::warning, 1, {}};
};

/// Where the user stands: a solid triangle at the top with its value and a line down.
struct Pointer {
  double x = 0;
  std::string label;
};

/// Values on cells; cell (0, 0) has its lower left corner at (x0, y0). values[j * nx + i].
struct HeatMap {
  int nx = 0, ny = 0;
  double x0 = 0, y0 = 0, dx = 1, dy = 1;
  std::vector<double> values;
  ColourMap map = ColourMap::ember;
  Range range;
  /// Cells with exactly this value are left empty (no contact); not-a-number always is.
  std::optional<double> empty_value;
  std::vector<Colour> inks;                ///< for labels: value k is drawn with inks[k]; empty for numbers
  std::vector<double> edge_x{}, edge_y{};  ///< convex outline that cuts the cells, where it is known; else whole cells
};

/// Words at a data point, moved by (dx, dy) millimetres, y up; the first place that is free is taken if several.
struct Note {
  double x = 0, y = 0;
  std::string text;
  Paint paint;
  Anchor anchor = Anchor::start;
  double dx = 0, dy = 0;
  bool strong = false, small = true;
};

/// An arrow or a dimension between two data points.
struct Arrow {
  double x0 = 0, y0 = 0, x1 = 0, y1 = 0;
  Paint paint;
  bool both_ends = false;
};

/// A dashed ring of true size in a corner, so that nobody has to read axes to know how big a patch is.
struct ScaleDisc {
  double diameter = 10;
  std::string label = "10\u2009mm";
  bool left = false;  ///< lower left corner instead of lower right
};

struct Plot {
  std::string title, caption;
  Axis x, y;
  bool equal_aspect = false;
  std::optional<double> scale;  ///< canvas units per data unit; needs equal_aspect
  bool grid = true;
  std::vector<HeatMap> maps;  ///< drawn first, then in the order of this struct
  std::vector<Area> areas;
  std::vector<Band> bands;
  std::vector<Post> posts;
  std::vector<Line> lines;
  std::vector<Arrow> arrows;
  std::vector<Points> points;
  std::vector<Note> notes;
  std::optional<ScaleDisc> disc;
  std::optional<Pointer> pointer;
};

/// Sizes in canvas units. Defaults are for paper: millimetres, 7 and 9 pt, 0.25 and 0.5 mm.
struct Style {
  double mm = 1;  ///< one millimetre in canvas units
  double fine = 0.25, bold = 0.5;
  double small_text = 7 * 25.4 / 72, text = 9 * 25.4 / 72;
  Font small(bool strong = false) const { return {small_text, strong, 0}; }
  Font normal(bool strong = false) const { return {text, strong, 0}; }
  /// Small spaced capitals for labels.
  Font label() const { return {small_text, true, 0.06}; }
  double width(Weight weight) const { return weight == Weight::fine ? fine : bold; }
};

/// Where a plot was put: data to canvas and back.
struct Frame {
  Box data;
  Range x, y;
  bool log_x = false, log_y = false;
  Point at(double data_x, double data_y) const;
  Point value(Point on_canvas) const;
};

/// Space a plot wants around its data (left, top, right, bottom), so that stacked plots can share an edge.
struct Margins {
  double left = 0, top = 0, right = 0, bottom = 0;
};
Margins margins_of(const Plot&, const Canvas&, const Style&, double data_width, double data_height);

/// Draws inside `box` and nowhere else. @param margins if given, used instead of the plot's own.
Frame draw_plot(const Plot&, const Box& box, Canvas&, const Theme&, const Style&,
                const std::optional<Margins>& margins = std::nullopt);

/// A lying colour bar with its range, title and unit inside `box`; returns the bar itself.
Box draw_colour_bar(const Box& box, ColourMap, const Range&, const std::string& title, const std::string& unit, Canvas&,
                    const Theme&, const Style&);

/// The image of a heat map, one pixel a cell, upper row first.
Image image_of(const HeatMap&);
Colour colour_of(const Paint&, const Theme&);

/// Keeps words apart: remembers the boxes of words already set.
class Places {
 public:
  bool is_free(const Box& box) const;
  void take(const Box& box) { taken_.push_back(box); }
  /// Sets the words at the first of `candidates` that is free and inside `within`; false if none is.
  bool set(Canvas& canvas, const Box& within, std::span<const std::pair<Point, Anchor>> candidates,
           std::string_view words, const Font& font, const Colour& colour);

 private:
  std::vector<Box> taken_;
};

}  // namespace runband::plot
