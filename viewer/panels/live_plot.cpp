// A plot in the window: the same value as on paper, with hover, zoom, pan and copy.
#include <imgui.h>

#include <algorithm>
#include <cmath>
#include <sstream>

#include "viewer/panels/frame.h"

namespace runband {

namespace {

/// Value of a line at x; not-a-number outside it or in a gap.
double value_at(const plot::Line& line, double x) {
  for (std::size_t i = 0; i + 1 < line.x.size(); ++i) {
    const double a = line.x[i], b = line.x[i + 1];
    if (!(std::min(a, b) <= x && x <= std::max(a, b)) || a == b) continue;
    if (std::isnan(line.y[i]) || std::isnan(line.y[i + 1])) continue;
    return std::lerp(line.y[i], line.y[i + 1], (x - a) / (b - a));
  }
  return std::nan("");
}

bool is_function(const plot::Line& line) {
  for (std::size_t i = 0; i + 1 < line.x.size(); ++i)
    if (!std::isnan(line.x[i + 1]) && line.x[i + 1] < line.x[i]) return false;
  return !line.closed && line.x.size() > 2;
}

plot::Range zoomed(const plot::Range& range, double about, double factor, bool logarithmic) {
  if (logarithmic && range.low > 0 && about > 0) {
    const double a = std::log(about);
    return {std::exp(a + (std::log(range.low) - a) * factor), std::exp(a + (std::log(range.high) - a) * factor)};
  }
  return {about + (range.low - about) * factor, about + (range.high - about) * factor};
}

std::string as_table(const plot::Plot& plot) {
  std::ostringstream out;
  out.precision(9);
  const auto name = [](const plot::Axis& axis) {
    return axis.title + (axis.unit.empty() ? "" : " (" + axis.unit + ")");
  };
  for (const plot::Line& line : plot.lines) {
    if (line.x.size() < 2) continue;
    out << name(plot.x) << '\t' << (line.label.empty() ? name(plot.y) : line.label) << '\n';
    for (std::size_t i = 0; i < line.x.size(); ++i)
      if (!std::isnan(line.y[i])) out << line.x[i] << '\t' << line.y[i] << '\n';
    out << '\n';
  }
  return out.str();
}

}  // namespace

plot::Frame Frame::draw_live_plot(const std::string& id, plot::Plot plot, const plot::Box& box,
                                  const std::optional<plot::Margins>& margins) {
  PlotView& view = plot_view(id);
  const plot::Style style = screen_style(screen_.scale());
  const plot::Theme& theme = desk_.theme();
  if (view.x) plot.x.range = view.x;
  if (view.y) plot.y.range = view.y;
  if (view.x || view.y) plot.scale.reset();
  plot.x.logarithmic = plot.x.logarithmic || view.log_x;
  plot.y.logarithmic = plot.y.logarithmic || view.log_y;
  const Grip grip = ui_.grip(id, box);
  plot::Frame frame;
  {
    ScreenCanvas canvas = ui_.canvas();
    frame = plot::draw_plot(plot, box, canvas, theme, style, margins);
  }
  const ImGuiIO& io = ImGui::GetIO();
  const bool over = grip.hovered && frame.data.contains(grip.at);
  const plot::Point value = frame.value(grip.at);
  if (grip.hovered && io.MouseWheel != 0) {
    const double factor = std::pow(1.18, -static_cast<double>(io.MouseWheel));
    if (!io.KeyShift) view.x = zoomed(frame.x, value.x, factor, frame.log_x);
    if (!io.KeyCtrl || plot.equal_aspect) view.y = zoomed(frame.y, value.y, factor, frame.log_y);
  }
  if (grip.held && (grip.dx != 0 || grip.dy != 0)) {
    const plot::Point before = frame.value({grip.at.x - grip.dx, grip.at.y - grip.dy});
    const auto moved = [](const plot::Range& range, double from, double to, bool logarithmic) {
      if (logarithmic && from > 0 && to > 0) return plot::Range{range.low * from / to, range.high * from / to};
      return plot::Range{range.low + from - to, range.high + from - to};
    };
    view.x = moved(frame.x, before.x, value.x, frame.log_x);
    view.y = moved(frame.y, before.y, value.y, frame.log_y);
  }
  if (grip.double_clicked) {
    view.x.reset();
    view.y.reset();
  }
  if (grip.hovered) hovered_plot_ = id;
  if (over && !grip.held) {
    ScreenCanvas canvas = ui_.canvas();
    const plot::Point post[] = {{grip.at.x, frame.data.y}, {grip.at.x, frame.data.bottom()}};
    canvas.line(post, {plot::with_opacity(theme.steel, 0.6), 1, plot::Dash::solid}, false);
    const auto digits = [](const plot::Range& range) {
      return static_cast<int>(std::clamp(2 - std::floor(std::log10(std::max(1e-12, range.span()))), 0.0, 6.0));
    };
    std::vector<std::pair<std::string, plot::Colour>> rows;
    rows.emplace_back(plot.x.title + " " + plot::number(value.x, digits(frame.x)) +
                          (plot.x.unit.empty() ? "" : "\u2009" + plot.x.unit),
                      theme.quiet);
    for (const plot::Line& line : plot.lines) {
      if (!is_function(line)) continue;
      const double y = value_at(line, value.x);
      if (std::isnan(y)) continue;
      const plot::Point dot = frame.at(value.x, y);
      if (frame.data.contains(dot)) canvas.polygon(plot::circle(dot, ui_.px(3)), plot::colour_of(line.paint, theme));
      rows.emplace_back((line.label.empty() ? plot.y.title : line.label) + " " + plot::number(y, digits(frame.y)) +
                            (plot.y.unit.empty() ? "" : "\u2009" + plot.y.unit),
                        plot::colour_of(line.paint, theme));
    }
    if (rows.size() == 1)
      rows.emplace_back(plot.y.title + " " + plot::number(value.y, digits(frame.y)) +
                            (plot.y.unit.empty() ? "" : "\u2009" + plot.y.unit),
                        theme.quiet);
    double width = 0;
    for (const auto& [words, colour] : rows) width = std::max(width, canvas.number_width(words, ui_.note_font()));
    const double line_height = ui_.px(17);
    plot::Box note{grip.at.x + ui_.px(12), frame.data.y + ui_.px(6), width + ui_.px(16),
                   line_height * static_cast<double>(rows.size()) + ui_.px(8)};
    if (note.right() > frame.data.right()) note.x = grip.at.x - ui_.px(12) - note.width;
    canvas.polygon(plot::corners(note), plot::with_opacity(theme.sheet, 0.94));
    canvas.line(plot::corners(note), {theme.rule, 1, plot::Dash::solid}, true);
    double y = note.y + ui_.px(16);
    for (const auto& [words, colour] : rows) {
      canvas.number({note.x + ui_.px(8), y}, words, ui_.note_font(), colour, plot::Anchor::start);
      y += line_height;
    }
  }
  if (grip.hovered && !screen_.typing()) {
    for (const Event& key : screen_.keys()) {
      if (key.key == Key::c && key.modifiers.control) {
        screen_.host().set_clipboard(as_table(plot));
        say_copied("the curve's values");
      }
      if (key.key == Key::x && key.modifiers.shift) view.log_x = !view.log_x;
      if (key.key == Key::y && key.modifiers.shift) view.log_y = !view.log_y;
    }
  }
  return frame;
}

}  // namespace runband
