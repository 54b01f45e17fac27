// Curves over lateral displacement, stacked over one ruler.
#include <algorithm>
#include <cmath>
#include <limits>

#include "viewer/plates/sheet.h"

namespace runband {

using plot::Box;

namespace {

/// y over the lateral displacement, broken where a contact of this side (of either, if none is named) jumps.
plot::Line broken_line(const Traverse& t, const std::vector<double>& y, const Side* side, plot::Paint paint,
                       const std::string& label) {
  plot::Line line;
  line.paint = paint;
  line.label = label;
  for (std::size_t i = 0; i < y.size(); ++i) {
    if (i > 0) {
      for (const ContactJump& jump : t.jumps) {
        if ((side == nullptr || jump.side == *side) && jump.lateral_mm > t.lateral_mm[i - 1] &&
            jump.lateral_mm <= t.lateral_mm[i]) {
          line.x.push_back(jump.lateral_mm);
          line.y.push_back(std::numeric_limits<double>::quiet_NaN());
          break;
        }
      }
    }
    line.x.push_back(t.lateral_mm[i]);
    line.y.push_back(y[i]);
  }
  return line;
}

}  // namespace

void draw_traverse_plate(const Traverse& t, const Plate& plate, plot::Canvas& canvas) {
  const plot::Theme& theme = plot::theme(plate.theme);
  const plot::Style style;
  std::string state = "lateral displacement at ";
  state += t.asked.state.reference == LateralReference::axle ? "the axle centre" : "rail level";
  state += ", yaw " + plot::number(t.asked.state.yaw_mrad, 1) + " mrad";
  const bool one_place = t.asked.state.lateral_mm.size() == 1;
  if (!t.jumps.empty()) state += "; red posts: jumps";
  if (one_place) state += "; line: this case, " + plot::number(t.asked.state.lateral_mm.front(), 2) + " mm";
  const Box body = draw_title_block(title_block(t.asked, plate, state), canvas, theme, style);

  const Side left = Side::left, right = Side::right;
  const plot::Paint blue{plot::Ink::accent, 1, {}}, ink{plot::Ink::ink, 1, {}};
  std::vector<plot::Plot> plots(4);
  const auto set_up = [&](plot::Plot& p, const std::string& title, const std::string& caption) {
    p.title = title;
    p.caption = caption;
    p.x.numbers = false;
    p.x.range = plot::Range{t.lateral_mm.front(), std::max(t.lateral_mm.back(), t.lateral_mm.front() + 1e-9)};
  };
  set_up(plots[0], "Rolling radius difference, mm", "left minus right");
  plots[0].lines.push_back(broken_line(t, t.rolling_radius_difference_mm, nullptr, blue, ""));
  set_up(plots[1], "Contact angle, °", "");
  plots[1].lines.push_back(broken_line(t, t.left.contact_angle_deg, &left, blue, "left"));
  plots[1].lines.push_back(broken_line(t, t.right.contact_angle_deg, &right, ink, "right"));
  set_up(plots[2], "Position on the wheel, mm", "from the running circle");
  plots[2].lines.push_back(broken_line(t, t.left.wheel_y_mm, &left, blue, "left"));
  plots[2].lines.push_back(broken_line(t, t.right.wheel_y_mm, &right, ink, "right"));
  set_up(plots[3], "Position on the rail, mm", "from the head's centre");
  plots[3].lines.push_back(broken_line(t, t.left.rail_y_mm, &left, blue, "left"));
  plots[3].lines.push_back(broken_line(t, t.right.rail_y_mm, &right, ink, "right"));
  plots[3].x.numbers = true;
  plots[3].x.title = "lateral displacement of the wheelset";
  plots[3].x.unit = "mm";
  for (plot::Plot& p : plots) {
    for (const ContactJump& jump : t.jumps) p.posts.push_back({jump.lateral_mm, "", {plot::Ink::warning, 1, {}}});
    if (one_place) p.pointer = plot::Pointer{t.asked.state.lateral_mm.front(), ""};
  }

  // One column where the page is tall, two by two where it is wide.
  const bool two_columns = body.width > 1.25 * body.height && body.width > 120 * style.mm;
  if (two_columns) {
    plots[2].x.numbers = true;
    plots[2].x.title = plots[3].x.title;
    plots[2].x.unit = "mm";
  }
  const std::size_t columns = two_columns ? 2 : 1;
  const std::size_t rows = plots.size() / columns;
  const double gap = 4 * style.mm;
  const double width = (body.width - gap * static_cast<double>(columns - 1)) / static_cast<double>(columns);
  std::vector<plot::Margins> margins;
  for (const plot::Plot& p : plots)
    margins.push_back(plot::margins_of(p, canvas, style, width * 0.9, body.height / static_cast<double>(rows) * 0.8));
  // Plots of a row share top and bottom, plots of a column left and right.
  for (std::size_t k = 0; k < margins.size(); ++k) {
    for (std::size_t other = 0; other < margins.size(); ++other) {
      if (other / columns == k / columns) {
        margins[k].top = std::max(margins[k].top, margins[other].top);
        margins[k].bottom = std::max(margins[k].bottom, margins[other].bottom);
      }
      if (other % columns == k % columns) {
        margins[k].left = std::max(margins[k].left, margins[other].left);
        margins[k].right = std::max(margins[k].right, margins[other].right);
      }
    }
  }
  double sum = 0;
  for (std::size_t r = 0; r < rows; ++r) sum += margins[r * columns].top + margins[r * columns].bottom;
  const double data_height = (body.height - sum - gap * static_cast<double>(rows - 1)) / static_cast<double>(rows);
  double y = body.y;
  for (std::size_t r = 0; r < rows; ++r) {
    const double height = margins[r * columns].top + margins[r * columns].bottom + data_height;
    for (std::size_t c = 0; c < columns; ++c) {
      const std::size_t k = r * columns + c;
      plot::draw_plot(plots[k], {body.x + static_cast<double>(c) * (width + gap), y, width, height}, canvas, theme,
                      style, margins[k]);
    }
    y += height + gap;
  }
}

}  // namespace runband
