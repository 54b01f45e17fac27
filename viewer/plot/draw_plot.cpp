#include <algorithm>
#include <cmath>

#include "viewer/plot/plot.h"

namespace runband::plot {

namespace {

// Gaps in millimetres.
constexpr double kGap = 1.2;          // between a tick and its number, and between rows of words
constexpr double kTitleDrop = 0.6;    // further between the numbers and the axis title
constexpr double kTickLength = 1.4;   // labelled ticks of the ruler
constexpr double kMinorTick = 0.8;    // the others
constexpr double kPostLength = 1.8;   // marks of events
constexpr double kNumberEvery = 14;   // about one labelled tick on so many millimetres across ...
constexpr double kNumberEveryUp = 9;  // ... and upwards
constexpr double kBreathing = 0.06;   // data margin upwards when the range is taken from the data

Stroke stroke(const Paint& paint, double width, const Theme& theme, Dash dash = Dash::solid) {
  return {colour_of(paint, theme), width, dash};
}

// "Title, unit": the comma form of a drawing.
std::string with_unit(const Axis& axis) { return axis.unit.empty() ? axis.title : axis.title + ", " + axis.unit; }

Range range_of(const Axis& axis, const Plot& plot, bool is_x) {
  if (axis.range) return *axis.range;
  Range range = empty_range();
  const auto add = [&](const std::vector<double>& values) {
    for (const double v : values)
      if (!axis.logarithmic || v > 0) range.include(v);
  };
  for (const Line& line : plot.lines) add(is_x ? line.x : line.y);
  for (const Points& points : plot.points) add(is_x ? points.x : points.y);
  for (const Area& area : plot.areas) add(is_x ? area.x : area.y);
  for (const Band& band : plot.bands) {
    add(is_x ? band.x : band.low);
    add(is_x ? band.x : band.high);
  }
  for (const HeatMap& map : plot.maps)
    add(is_x ? std::vector{map.x0, map.x0 + map.nx * map.dx} : std::vector{map.y0, map.y0 + map.ny * map.dy});
  if (!(range.high >= range.low)) return {axis.logarithmic ? 0.1 : 0.0, 1.0};
  if (range.span() == 0) {
    const double half = range.low == 0 ? 1.0 : std::abs(range.low) * 0.1;
    return axis.logarithmic ? Range{range.low / 2, range.high * 2} : Range{range.low - half, range.high + half};
  }
  if (is_x || axis.logarithmic || plot.equal_aspect) return range;
  return {range.low - kBreathing * range.span(), range.high + kBreathing * range.span()};
}

std::vector<Tick> ticks_of(const Axis& axis, const Range& range, double length, double every) {
  const int most = std::max(2, static_cast<int>(length / every));
  return axis.logarithmic ? logarithmic_ticks(range, most) : linear_ticks(range, most);
}

// Draws one plot whose frame is settled.
class Painter {
 public:
  Painter(const Plot& plot, const Box& box, const Frame& frame, Canvas& canvas, const Theme& theme, const Style& style)
      : plot_(plot), box_(box), frame_(frame), canvas_(canvas), theme_(theme), style_(style) {}

  void draw() {
    if (plot_.grid) rules();
    canvas_.push_clip(corners(frame_.data.grown(style_.bold / 2)));
    for (const HeatMap& map : plot_.maps) heat_map(map);
    for (const Area& area : plot_.areas) filled(area);
    for (const Band& band : plot_.bands) filled(band);
    canvas_.pop_clip();
    axes();
    head();
    pointer();
    posts();
    canvas_.push_clip(corners(frame_.data.grown(style_.bold / 2)));
    for (const Line& line : plot_.lines) curve(line);
    for (const Arrow& each : plot_.arrows) arrow(each);
    for (const Points& points : plot_.points) markers(points);
    canvas_.pop_clip();
    disc();
    for (const Line& line : plot_.lines) end_label(line);
    for (const Note& note : plot_.notes) words(note);
  }

 private:
  std::vector<Point> path(const std::vector<double>& x, const std::vector<double>& y) const {
    std::vector<Point> points;
    for (std::size_t i = 0; i < std::min(x.size(), y.size()); ++i) points.push_back(frame_.at(x[i], y[i]));
    return points;
  }

  // Outlines far larger than the picture are cut a little outside of it, before they become ink.
  Box around() const { return frame_.data.grown(2 * style_.mm); }

  void rules() {
    const Stroke rule = stroke({Ink::rule, 1, {}}, style_.fine * 0.8, theme_);
    for (const Tick& tick : ticks_of(plot_.y, frame_.y, frame_.data.height, kNumberEveryUp * style_.mm)) {
      if (!tick.major || tick.text.empty()) continue;
      const double y = frame_.at(frame_.x.low, tick.value).y;
      draw_line(canvas_, {frame_.data.x, y}, {frame_.data.right(), y}, rule);
    }
    if (!plot_.equal_aspect) return;
    for (const Tick& tick : ticks_of(plot_.x, frame_.x, frame_.data.width, kNumberEvery * style_.mm)) {
      if (!tick.major || tick.text.empty()) continue;
      const double x = frame_.at(tick.value, frame_.y.low).x;
      draw_line(canvas_, {x, frame_.data.y}, {x, frame_.data.bottom()}, rule);
    }
  }

  // A ruler along the bottom; upwards only numbers, since the rules already lead the eye.
  void axes() {
    const Font font = style_.small();
    const Stroke ruler = stroke({Ink::quiet, 1, {}}, style_.fine, theme_);
    const double mm = style_.mm, bottom = frame_.data.bottom();
    draw_line(canvas_, {frame_.data.x, bottom}, {frame_.data.right(), bottom}, ruler);
    double used_to = -1e9;
    for (const Tick& tick : ticks_of(plot_.x, frame_.x, frame_.data.width, kNumberEvery * mm)) {
      const double x = frame_.at(tick.value, frame_.y.low).x;
      draw_line(canvas_, {x, bottom}, {x, bottom + (tick.major ? kTickLength : kMinorTick) * mm}, ruler);
      if (!plot_.x.numbers || tick.text.empty()) continue;
      const TextSize size = canvas_.measure(tick.text, font);
      // A true minus hangs to the left, so that the digits stand under their tick.
      const double left = std::clamp(x - size.width / 2, box_.x, std::max(box_.x, box_.right() - size.width));
      if (left < used_to + kGap * mm) continue;
      const Point at{left, bottom + (kTickLength + kGap) * mm + size.ascent};
      set(at, tick.text, font, theme_.quiet, Anchor::start);
      used_to = left + size.width;
    }
    if (plot_.x.numbers && !plot_.x.title.empty()) {
      const TextSize size = canvas_.measure("0", font);
      const double below = bottom + (kTickLength + 2 * kGap + kTitleDrop) * mm + 2 * size.ascent;
      set({frame_.data.right(), below}, with_unit(plot_.x), font, theme_.quiet, Anchor::end);
    }
    if (!plot_.y.numbers) return;
    for (const Tick& tick : ticks_of(plot_.y, frame_.y, frame_.data.height, kNumberEveryUp * mm)) {
      if (tick.text.empty()) continue;
      const TextSize size = canvas_.measure(tick.text, font);
      const Point at{frame_.data.x - kGap * mm, frame_.at(frame_.x.low, tick.value).y + size.ascent / 2};
      set(at, tick.text, font, theme_.quiet, Anchor::end);
    }
  }

  // Title, caption and the name of the upward axis share the rows above the data.
  void head() {
    double baseline = box_.y;
    const double gap = kGap * style_.mm;
    if (!plot_.title.empty()) {
      const TextSize size = canvas_.measure(plot_.title, style_.normal(true));
      baseline += size.ascent;
      set({frame_.data.x, baseline}, plot_.title, style_.normal(true), theme_.ink, Anchor::start);
      if (!plot_.caption.empty()) {
        const double after = frame_.data.x + size.width + 2.5 * gap;
        if (after + canvas_.measure(plot_.caption, style_.small()).width <= box_.right()) {
          set({after, baseline}, plot_.caption, style_.small(), theme_.quiet, Anchor::start);
        } else {
          baseline += gap + size.descent + canvas_.measure("0", style_.small()).ascent;
          set({frame_.data.x, baseline}, plot_.caption, style_.small(), theme_.quiet, Anchor::start);
        }
      }
    }
    if (!plot_.y.numbers || plot_.y.title.empty()) return;
    const double above = frame_.data.y - gap * 1.2;
    set({plot_.equal_aspect ? box_.x : frame_.data.x, above}, with_unit(plot_.y), style_.small(),
        plot_.equal_aspect ? theme_.quiet : theme_.ink, Anchor::start);
  }

  void heat_map(const HeatMap& map) {
    const Point low = frame_.at(map.x0, map.y0), high = frame_.at(map.x0 + map.nx * map.dx, map.y0 + map.ny * map.dy);
    const bool cut = map.edge_x.size() > 2;
    if (cut) canvas_.push_clip(path(map.edge_x, map.edge_y));
    canvas_.image({low.x, high.y, high.x - low.x, low.y - high.y}, image_of(map), false);
    if (cut) canvas_.pop_clip();
  }

  void filled(const Area& area) {
    const std::vector<Point> outline = cut_to(path(area.x, area.y), around());
    if (area.fill) canvas_.polygon(outline, colour_of(*area.fill, theme_));
    if (area.hatch_deg)
      draw_hatch(canvas_, outline, *area.hatch_deg, 1.8 * style_.mm, stroke(area.hatch, style_.fine * 0.6, theme_));
  }

  void filled(const Band& band) {
    std::vector<Point> outline = path(band.x, band.low);
    const std::vector<Point> back = path(band.x, band.high);
    outline.insert(outline.end(), back.rbegin(), back.rend());
    canvas_.polygon(outline, colour_of(band.paint, theme_));
  }

  void curve(const Line& line) {
    const Stroke pen = stroke(line.paint, style_.width(line.weight), theme_, line.dash);
    std::vector<Point> piece;
    for (std::size_t i = 0; i <= std::min(line.x.size(), line.y.size()); ++i) {
      const bool end = i == std::min(line.x.size(), line.y.size());
      if (end || !std::isfinite(line.x[i]) || !std::isfinite(line.y[i])) {
        const bool ring = line.closed && end;
        canvas_.line(ring ? cut_to(std::move(piece), around()) : piece, pen, ring);
        piece.clear();
      } else {
        piece.push_back(frame_.at(line.x[i], line.y[i]));
      }
    }
  }

  void end_label(const Line& line) {
    if (line.label.empty() || line.x.empty()) return;
    std::size_t last = std::min(line.x.size(), line.y.size());
    while (last > 0 && !std::isfinite(line.y[last - 1])) --last;
    if (last == 0) return;
    const Point end = frame_.at(line.x[last - 1], line.y[last - 1]);
    const double half = canvas_.measure("x", style_.small()).ascent / 2, row = 3.4 * half, gap = kGap * style_.mm;
    std::vector<std::pair<Point, Anchor>> places;
    for (const int k : {0, 1, -1, 2, -2, 3, -3})
      places.push_back({{end.x + gap, end.y + half + k * row}, Anchor::start});
    taken_.set(canvas_, box_, places, line.label, style_.small(), colour_of(line.paint, theme_));
  }

  void arrow(const Arrow& each) {
    const Stroke pen = stroke(each.paint, style_.fine, theme_);
    const Point from = frame_.at(each.x0, each.y0), to = frame_.at(each.x1, each.y1);
    draw_arrow(canvas_, from, to, pen, 2.2 * style_.mm);
    if (each.both_ends) draw_arrow(canvas_, to, from, pen, 2.2 * style_.mm);
  }

  void markers(const Points& points) {
    const double half = points.size / 2 * style_.mm;
    const Colour colour = colour_of(points.paint, theme_);
    const Stroke pen{colour, style_.fine, Dash::solid};
    for (const Point& p : path(points.x, points.y)) {
      switch (points.shape) {
        case Shape::dot:
          canvas_.polygon(circle(p, half), colour);
          break;
        case Shape::ring:
          canvas_.polygon(circle(p, half), theme_.paper);
          canvas_.line(circle(p, half), pen, true);
          break;
        case Shape::cross:
          draw_line(canvas_, {p.x - half, p.y}, {p.x + half, p.y}, pen);
          draw_line(canvas_, {p.x, p.y - half}, {p.x, p.y + half}, pen);
          break;
        case Shape::triangle:
          canvas_.polygon(std::vector<Point>{{p.x - half, p.y - 2 * half}, {p.x + half, p.y - 2 * half}, p}, colour);
          break;
      }
    }
  }

  void posts() {
    for (const Post& post : plot_.posts) {
      if (!frame_.x.contains(post.x)) continue;
      const Colour colour = colour_of(post.paint, theme_);
      const double x = frame_.at(post.x, frame_.y.low).x, bottom = frame_.data.bottom(), mm = style_.mm;
      draw_line(canvas_, {x, frame_.data.y}, {x, bottom}, {with_opacity(colour, 0.55), style_.fine, Dash::dotted});
      draw_line(canvas_, {x, bottom - kPostLength * mm}, {x, bottom}, {colour, style_.bold * 1.4, Dash::solid});
      const std::pair<Point, Anchor> places[] = {{{x + mm, bottom - 0.9 * mm}, Anchor::start},
                                                 {{x - mm, bottom - 0.9 * mm}, Anchor::end}};
      if (!post.label.empty()) taken_.set(canvas_, frame_.data, places, post.label, style_.small(), colour);
    }
  }

  void pointer() {
    if (!plot_.pointer || !frame_.x.contains(plot_.pointer->x)) return;
    const double x = frame_.at(plot_.pointer->x, frame_.y.low).x, mm = style_.mm, top = frame_.data.y;
    draw_line(canvas_, {x, top}, {x, frame_.data.bottom()}, {theme_.ink, style_.fine, Dash::solid});
    if (plot_.pointer->label.empty()) return;
    canvas_.polygon(std::vector<Point>{{x - 1.2 * mm, top - 2 * mm}, {x + 1.2 * mm, top - 2 * mm}, {x, top}},
                    theme_.ink);
    const std::pair<Point, Anchor> places[] = {{{x + 2 * mm, top - 0.4 * mm}, Anchor::start},
                                               {{x - 2 * mm, top - 0.4 * mm}, Anchor::end}};
    taken_.set(canvas_, box_, places, plot_.pointer->label, style_.small(true), theme_.ink);
  }

  void disc() {
    if (!plot_.disc) return;
    const double per_unit = frame_.data.width / frame_.x.span(), radius = plot_.disc->diameter / 2 * per_unit;
    const double inset = radius + style_.mm;
    if (2 * inset > frame_.data.height || 2 * inset > frame_.data.width) return;
    const Point centre{plot_.disc->left ? frame_.data.x + inset : frame_.data.right() - inset,
                       frame_.data.bottom() - inset};
    canvas_.line(circle(centre, radius), {theme_.quiet, style_.fine, Dash::dashed}, true);
    const TextSize size = canvas_.measure(plot_.disc->label, style_.small());
    if (size.width < 1.9 * radius) {
      set({centre.x, centre.y + size.ascent / 2}, plot_.disc->label, style_.small(), theme_.quiet, Anchor::middle);
    } else {
      set({plot_.disc->left ? centre.x + radius + style_.mm : centre.x - radius - style_.mm,
           centre.y + size.ascent / 2},
          plot_.disc->label, style_.small(), theme_.quiet, plot_.disc->left ? Anchor::start : Anchor::end);
    }
  }

  void words(const Note& note) {
    const Point p = frame_.at(note.x, note.y);
    const Font font = note.small ? style_.small(note.strong) : style_.normal(note.strong);
    const double dx = note.dx * style_.mm, dy = note.dy * style_.mm;
    const auto turned = [](Anchor a) {
      return a == Anchor::middle ? a : a == Anchor::start ? Anchor::end : Anchor::start;
    };
    const double rise = canvas_.measure("x", font).ascent;
    const std::pair<Point, Anchor> places[] = {{{p.x + dx, p.y - dy}, note.anchor},
                                               {{p.x - dx, p.y - dy}, turned(note.anchor)},
                                               {{p.x + dx, p.y + dy + rise}, note.anchor},
                                               {{p.x - dx, p.y + dy + rise}, turned(note.anchor)}};
    taken_.set(canvas_, box_, places, note.text, font, colour_of(note.paint, theme_));
  }

  // Words with a fixed place; dropped rather than set over others or outside the box.
  void set(Point at, const std::string& text, const Font& font, const Colour& colour, Anchor anchor) {
    const std::pair<Point, Anchor> place[] = {{at, anchor}};
    taken_.set(canvas_, box_.grown(style_.mm * 0.05), place, text, font, colour);
  }

  const Plot& plot_;
  const Box& box_;
  const Frame& frame_;
  Canvas& canvas_;
  const Theme& theme_;
  const Style& style_;
  Places taken_;
};

double place_in(double v, const Range& range, bool logarithmic) {
  if (logarithmic) return std::log(v / range.low) / std::log(range.high / range.low);
  return (v - range.low) / range.span();
}
double value_at(double place, const Range& range, bool logarithmic) {
  return logarithmic ? range.low * std::pow(range.high / range.low, place) : range.low + place * range.span();
}

}  // namespace

Colour colour_of(const Paint& paint, const Theme& theme) {
  return with_opacity(paint.colour ? *paint.colour : theme.of(paint.ink), paint.opacity);
}

Point Frame::at(double data_x, double data_y) const {
  return {data.x + place_in(data_x, x, log_x) * data.width, data.bottom() - place_in(data_y, y, log_y) * data.height};
}

Point Frame::value(Point p) const {
  return {value_at((p.x - data.x) / data.width, x, log_x), value_at((data.bottom() - p.y) / data.height, y, log_y)};
}

bool Places::is_free(const Box& box) const {
  return std::none_of(taken_.begin(), taken_.end(), [&](const Box& other) { return other.overlaps(box); });
}

bool Places::set(Canvas& canvas, const Box& within, std::span<const std::pair<Point, Anchor>> candidates,
                 std::string_view words, const Font& font, const Colour& colour) {
  for (const auto& [at, anchor] : candidates) {
    const Box box = text_box(canvas, at, words, font, anchor);
    const bool inside = box.x >= within.x && box.right() <= within.right() && box.y >= within.y &&
                        box.bottom() <= within.bottom() + 1e-9;
    if (!inside || !is_free(box.grown(font.size * 0.08))) continue;
    take(box);
    draw_text(canvas, at, words, font, colour, anchor);
    return true;
  }
  return false;
}

Margins margins_of(const Plot& plot, const Canvas& canvas, const Style& style, double data_width, double data_height) {
  const double gap = kGap * style.mm;
  const TextSize small = canvas.measure("0", style.small()), normal = canvas.measure("0", style.normal(true));
  Margins margins{0, 0, 0, kTickLength * style.mm};
  if (plot.y.numbers) {
    for (const Tick& tick : ticks_of(plot.y, range_of(plot.y, plot, false), data_height, kNumberEveryUp * style.mm))
      margins.left = std::max(margins.left, canvas.measure(tick.text, style.small()).width);
    margins.left += gap;
    if (!plot.y.title.empty()) margins.top += small.ascent + small.descent + 1.2 * gap;
    margins.top = std::max(margins.top, small.ascent / 2 + small.descent);
  }
  if (!plot.title.empty()) {
    margins.top += normal.ascent + normal.descent + gap;
    const double words = canvas.measure(plot.title, style.normal(true)).width + 2.5 * gap +
                         canvas.measure(plot.caption, style.small()).width;
    if (!plot.caption.empty() && words > data_width) margins.top += small.ascent + small.descent + gap;
  }
  if (plot.pointer && !plot.pointer->label.empty()) margins.top = std::max(margins.top, small.ascent + 2 * gap);
  if (plot.x.numbers) {
    margins.bottom += gap + small.ascent + small.descent;
    if (!plot.x.title.empty()) margins.bottom += gap + kTitleDrop * style.mm + small.ascent;
    const auto ticks = ticks_of(plot.x, range_of(plot.x, plot, true), data_width, kNumberEvery * style.mm);
    double last = 0;
    for (const Tick& tick : ticks)
      if (!tick.text.empty()) last = canvas.measure(tick.text, style.small()).width / 2;
    margins.right = std::max(margins.right, last);
  }
  for (const Line& line : plot.lines)
    if (!line.label.empty())
      margins.right = std::max(margins.right, gap * 1.5 + canvas.measure(line.label, style.small()).width);
  return margins;
}

Frame draw_plot(const Plot& plot, const Box& box, Canvas& canvas, const Theme& theme, const Style& style,
                const std::optional<Margins>& given) {
  const Margins m = given ? *given : margins_of(plot, canvas, style, box.width * 0.9, box.height * 0.8);
  Frame frame;
  frame.data = {box.x + m.left, box.y + m.top, std::max(1e-6, box.width - m.left - m.right),
                std::max(1e-6, box.height - m.top - m.bottom)};
  frame.x = range_of(plot.x, plot, true);
  frame.y = range_of(plot.y, plot, false);
  frame.log_x = plot.x.logarithmic;
  frame.log_y = plot.y.logarithmic;
  if (plot.equal_aspect) {
    // One scale for both; what is left over widens the ranges about their middles.
    const double fits = std::min(frame.data.width / frame.x.span(), frame.data.height / frame.y.span());
    const double scale = plot.scale ? *plot.scale : fits;
    const auto widen = [](Range& range, double span) {
      const double middle = (range.low + range.high) / 2;
      range = {middle - span / 2, middle + span / 2};
    };
    widen(frame.x, frame.data.width / scale);
    widen(frame.y, frame.data.height / scale);
  }
  Painter(plot, box, frame, canvas, theme, style).draw();
  return frame;
}

}  // namespace runband::plot
