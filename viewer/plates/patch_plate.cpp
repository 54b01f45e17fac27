// The pressure over each loaded patch, all on one range and at one scale.
#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/text.h"
#include "viewer/plates/sheet.h"
#include "viewer/scene/fields.h"

namespace runband {

using plot::Anchor;
using plot::Box;

namespace {

constexpr const char* kRollsThisWay = "rolls this way";

/// What the plate shows of every patch, on one range.
struct Shown {
  std::string name = "pressure", title = "contact pressure", unit = "MPa";
  plot::ColourMap map = plot::ColourMap::ember;
  plot::Range range{0, 0};
  std::vector<std::string> labels;
  std::vector<plot::Colour> inks;
};

Shown shown_of(const Solution& solution, const std::vector<std::size_t>& chosen, const std::string& name) {
  Shown shown;
  if (name.empty() || name == "pressure") {
    for (const std::size_t i : chosen) shown.range.include(solution.contacts[i].patch->peak_pressure_MPa);
    return shown;
  }
  shown.name = name;
  bool any = false;
  std::vector<std::string> known{"pressure"};
  for (const std::size_t i : chosen) {
    for (const auto& [id, result] : solution.contacts[i].analyses)
      for (const Field& field : result.fields)
        if (std::find(known.begin(), known.end(), id + "." + field.name) == known.end())
          known.push_back(id + "." + field.name);
    const Field* field = field_named(solution.contacts[i], name);
    if (field == nullptr) continue;
    any = true;
    shown.title = field->title;
    if (!shown.title.empty())
      shown.title[0] = static_cast<char>(std::tolower(static_cast<unsigned char>(shown.title[0])));
    shown.unit = field->unit == "1" ? "" : field->unit;
    if (map_for(*field, shown.map) != shown.map) shown.map = plot::ColourMap::tide;
    const plot::Range range = range_of(*field, shown.map);
    shown.range.include(range.low);
    shown.range.include(range.high);
    shown.labels = field->labels;
    shown.inks = label_inks(*field);
  }
  if (!any)
    throw InputError(ErrorCode::unknown_name, "--field " + name + ": no loaded contact has such a field.",
                     "there are: " + join_names(known) + ".");
  return shown;
}

/// Inks and names of a label field, where a colour bar would stand.
void draw_label_key(const Shown& shown, const Box& bar, plot::Canvas& canvas, const plot::Theme& theme,
                    const plot::Style& style) {
  double x = bar.x;
  for (std::size_t k = 0; k < shown.labels.size(); ++k) {
    canvas.polygon(plot::corners({x, bar.y, 4 * style.mm, 2.6 * style.mm}), shown.inks[k]);
    plot::draw_text(canvas, {x + 5.5 * style.mm, bar.y + 2.3 * style.mm}, shown.labels[k], style.small(), theme.ink);
    x += canvas.measure(shown.labels[k], style.small()).width + 11 * style.mm;
  }
}

plot::Plot patch_plot(const Contact& contact, const Shown& shown) {
  const Patch& patch = *contact.patch;
  plot::Plot p;
  p.x.title = "rolling direction, x";
  p.x.unit = "mm";
  p.y.title = "across, s";
  p.y.unit = "mm";
  p.equal_aspect = true;
  const Field* field = field_named(contact, shown.name);
  if (shown.name == "pressure")
    p.maps.push_back(pressure_map(contact, shown.range.high));
  else if (field != nullptr)
    p.maps.push_back(field_heat_map(contact, *field, shown.map, shown.range));
  if (contact.zone.ellipse) {
    plot::Line outline = ellipse_line(*contact.zone.ellipse);
    if (patch.method == PatchMethod::half_space) outline.dash = plot::Dash::dashed;
    p.lines.push_back(std::move(outline));
  }
  return p;
}

/// Half the length and width of everything in a patch's picture, about the frame's origin.
std::pair<double, double> reach(const Contact& contact) {
  const Grid& g = contact.patch->grid;
  double x = std::max(std::abs(g.x(0)), std::abs(g.x(g.nx - 1))) + g.dx_mm;
  double s = std::max(std::abs(g.s(0)), std::abs(g.s(g.ns - 1))) + g.ds_mm;
  if (contact.zone.ellipse) {
    x = std::max(x, contact.zone.ellipse->semi_axis_rolling_mm);
    s = std::max(s, contact.zone.ellipse->semi_axis_across_mm);
  }
  return {x, s};
}

void draw_figures(const Contact& contact, const Box& box, plot::Canvas& canvas, const plot::Theme& theme,
                  const plot::Style& style) {
  const Patch& patch = *contact.patch;
  std::vector<std::array<std::string, 3>> rows{
      {"Peak pressure", plot::number(patch.peak_pressure_MPa, 0), "MPa"},
      {"Area", plot::number(patch.area_mm2, 1), "mm²"},
      {"Normal force", plot::number(contact.zone.normal_force_N * 1e-3, 1), "kN"},
      {"Approach", plot::number(patch.approach_mm * 1e3, 1), "µm"}};
  if (contact.zone.ellipse) {
    rows.push_back({"Semi-axis in rolling, a", plot::number(contact.zone.ellipse->semi_axis_rolling_mm, 2), "mm"});
    rows.push_back({"Semi-axis across, b", plot::number(contact.zone.ellipse->semi_axis_across_mm, 2), "mm"});
  }
  if (contact.zone.ellipse && patch.method == PatchMethod::half_space) {
    rows[4] = {"Hertz's peak pressure", plot::number(contact.zone.ellipse->peak_pressure_MPa, 0), "MPa"};
    rows[5] = {"Hertz's area", plot::number(contact.zone.ellipse->area_mm2(), 1), "mm²"};
  }
  const double step = 3.6 * style.mm;
  const int columns = box.width > 85 * style.mm ? 2 : 1;
  const double width = std::min(60 * style.mm, (box.width - (columns - 1) * 6 * style.mm) / columns);
  const std::size_t per_column =
      (rows.size() + static_cast<std::size_t>(columns) - 1) / static_cast<std::size_t>(columns);
  const double left = box.x;
  for (std::size_t i = 0; i < rows.size(); ++i) {
    const double y = box.y + step * static_cast<double>(i % per_column + 1) - 0.6 * style.mm;
    if (y > box.bottom()) continue;
    const double x =
        left + std::floor(static_cast<double>(i) / static_cast<double>(per_column)) * (width + 6 * style.mm);
    plot::draw_text(canvas, {x, y}, rows[i][0], style.small(), theme.ink);
    plot::draw_text(canvas, {x + width - 7.5 * style.mm, y}, rows[i][1], style.small(true), theme.ink, Anchor::end);
    plot::draw_text(canvas, {x + width - 6.5 * style.mm, y}, rows[i][2], style.small(), theme.quiet);
  }
}

}  // namespace

void draw_patch_plate(const Solution& solution, const Plate& plate, plot::Canvas& canvas) {
  const plot::Theme& theme = plot::theme(plate.theme);
  const plot::Style style;
  Box body = draw_title_block(title_block(solution.asked, plate, state_text(solution)), canvas, theme, style);
  const auto chosen = chosen_contacts(solution, plate.contact);

  const Shown shown = shown_of(solution, chosen, plate.field);
  double half_x = 0, half_s = 0;
  for (const std::size_t i : chosen) {
    const auto [x, s] = reach(solution.contacts[i]);
    half_x = std::max(half_x, x);
    half_s = std::max(half_s, s);
  }
  half_x = std::max(half_x * 1.08, 7.5);

  const double bar_height = 9.5 * style.mm;
  const bool wide = body.width >= body.height * 0.9;
  const auto count = static_cast<double>(chosen.size());
  const double gap = 5 * style.mm;
  const Box bar{body.x, body.bottom() - bar_height, std::min(body.width * 0.55, 90 * style.mm), bar_height};
  body.height -= bar_height + 2 * style.mm;
  const double cell_width = wide ? (body.width - gap * (count - 1)) / count : body.width;
  const double cell_height = wide ? body.height : (body.height - gap * (count - 1)) / count;
  const double head = 5 * style.mm;
  const int rows = cell_width > 85 * style.mm ? 3 : 6;
  const double figures = cell_height > (rows == 3 ? 55 : 65) * style.mm ? rows * 3.6 * style.mm + 1.5 * style.mm : 0;

  // Above the patch there is room for the arrow; the scale disc stands below it or to its right, whichever leaves the
  // patch larger.
  constexpr double kDiscRoom = 11.5, kArrowRoom = 3.0;  // mm of the patch's own scale
  const double room_x = cell_width * 0.9, room_s = (cell_height - head - figures) * 0.72;
  const double below = std::min(room_x / (2 * half_x), room_s / (2 * half_s + kDiscRoom + kArrowRoom));
  const double beside =
      std::min(room_x / (2 * half_x + kDiscRoom), room_s / (std::max(2 * half_s, kDiscRoom) + 2 * kArrowRoom));
  const bool disc_below = below >= beside;
  const plot::Range along{-half_x, half_x + (disc_below ? 0.0 : kDiscRoom)};
  const double half_room = std::max(half_s, kDiscRoom / 2) + kArrowRoom;
  const plot::Range across =
      disc_below ? plot::Range{-half_s - kDiscRoom, half_s + kArrowRoom} : plot::Range{-half_room, half_room};

  std::vector<plot::Plot> plots;
  std::vector<Box> boxes;
  double scale = 1e9;
  for (std::size_t k = 0; k < chosen.size(); ++k) {
    plots.push_back(patch_plot(solution.contacts[chosen[k]], shown));
    plots.back().x.range = along;
    plots.back().y.range = across;
    plots.back().disc = plot::ScaleDisc{};
    const auto step = static_cast<double>(k);
    const Box cell{body.x + (wide ? step * (cell_width + gap) : 0), body.y + (wide ? 0 : step * (cell_height + gap)),
                   cell_width, cell_height};
    boxes.push_back({cell.x, cell.y + head, cell.width, cell.height - head - figures});
    const plot::Margins m =
        plot::margins_of(plots.back(), canvas, style, boxes.back().width * 0.9, boxes.back().height * 0.8);
    scale = std::min({scale, (boxes.back().width - m.left - m.right) / along.span(),
                      (boxes.back().height - m.top - m.bottom) / across.span()});
  }
  for (std::size_t k = 0; k < chosen.size(); ++k) {
    const Contact& contact = solution.contacts[chosen[k]];
    plots[k].scale = scale;
    plot::draw_text(canvas, {boxes[k].x, boxes[k].y - head + 3 * style.mm}, contact_label(contact), style.label(),
                    theme.quiet);
    const plot::Frame frame = plot::draw_plot(plots[k], boxes[k], canvas, theme, style);
    // Rolling direction: the leading edge is at the right.
    const double y = frame.data.y + 4.2 * style.mm;
    const double x = frame.data.right() - 3 * style.mm;
    plot::draw_arrow(canvas, {x - 9 * style.mm, y}, {x, y}, {theme.accent, style.bold, plot::Dash::solid},
                     1.6 * style.mm);
    const plot::Point words{x - 10.5 * style.mm, y + 0.9 * style.mm};
    const double disc = 10 * scale + 2 * style.mm;
    // A small disc has its name at its left.
    const double name = canvas.measure(plots[k].disc->label, style.small()).width + 2 * style.mm;
    const Box disc_box{frame.data.right() - disc - name, frame.data.bottom() - disc, disc + name, disc};
    if (!plot::text_box(canvas, words, kRollsThisWay, style.small(), Anchor::end).overlaps(disc_box))
      plot::draw_text(canvas, words, kRollsThisWay, style.small(), theme.accent, Anchor::end);
    if (figures > 0)
      draw_figures(contact, {boxes[k].x, boxes[k].bottom() + 1.5 * style.mm, boxes[k].width, figures - 1.5 * style.mm},
                   canvas, theme, style);
  }
  if (shown.labels.empty())
    plot::draw_colour_bar(bar, shown.map, shown.range, shown.title, shown.unit, canvas, theme, style);
  else
    draw_label_key(shown, bar, canvas, theme, style);
}

}  // namespace runband
