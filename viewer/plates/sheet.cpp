#include "viewer/plates/sheet.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/base/version.h"
#include "core/profile/checksum.h"
#include "viewer/scene/fields.h"

namespace runband {

using plot::Anchor;
using plot::Box;

std::pair<double, double> parse_size(const std::string& text) {
  const auto cross = text.find('x');
  const bool has_unit = text.size() > 2 && text.ends_with("mm");
  std::optional<double> width, height;
  if (cross != std::string::npos && has_unit) {
    width = parse_number(text.substr(0, cross));
    height = parse_number(text.substr(cross + 1, text.size() - cross - 3));
  }
  if (!width || !height || !(*width >= 40) || !(*height >= 30) || *width > 2000 || *height > 2000) {
    throw InputError(ErrorCode::bad_option, "--size " + text + " is not a size between 40x30mm and 2000x2000mm.",
                     "write for example --size 180x120mm.");
  }
  return {*width, *height};
}

std::string state_text(const Solution& solution) {
  if (solution.asked.bench)
    return "bench contact, normal force " + plot::number(solution.asked.bench->normal_force_N * 1e-3, 1) + " kN";
  return "lateral " + plot::number(solution.pose.lateral_mm, 2) + " mm at " +
         (solution.pose.reference == LateralReference::axle ? "the axle centre" : "rail level") + ", yaw " +
         plot::number(solution.pose.yaw_rad * 1e3, 1) + " mrad";
}

namespace {

std::string load_text(const Case& c) {
  const auto [left, right] = c.load.vertical_N;
  return "; wheel load " + plot::number(left * 1e-3, 1) +
         (left == right ? "" : " and " + plot::number(right * 1e-3, 1)) + " kN";
}

}  // namespace

TitleBlock title_block(const Case& c, const Plate& plate, const std::string& state) {
  TitleBlock block;
  block.title = c.title.empty() ? "Untitled case" : c.title;
  std::string second = state;
  if (!c.bench && plate.kind != "traverse") second += load_text(c);
  if (!c.bench) {
    const double slope = std::tan(c.track.inclination_rad);
    second += "; gauge " + plot::number(c.track.gauge_mm, 1) + " mm" +
              (slope > 0 ? ", rails 1 : " + plot::number(1.0 / slope, 0) : ", rails upright");
  }
  block.left = {second};
  std::string method = c.patch.method == PatchMethod::hertz
                           ? "Hertz's ellipse"
                           : "elastic half-space, " + std::to_string(c.patch.cells) + " cells";
  if (plate.kind == "traverse") method = "rigid contact";
  block.right = {method, std::string("Runband ") + version() + ", case " + checksum(write_case(c)).substr(0, 10) +
                             (plate.date.empty() ? "" : ", " + plate.date)};
  return block;
}

Box draw_title_block(const TitleBlock& block, plot::Canvas& canvas, const plot::Theme& theme,
                     const plot::Style& style) {
  const Box page = canvas.page();
  const double margin = 5 * style.mm;
  const double height = 8.5 * style.mm;
  const double top = page.bottom() - margin - height;
  plot::draw_line(canvas, {page.x + margin, top}, {page.right() - margin, top},
                  {theme.ink, style.fine, plot::Dash::solid});
  const double first = top + 3.7 * style.mm;
  const double second = top + 7.3 * style.mm;
  const double right = page.right() - margin;
  double right_width[2] = {};
  for (std::size_t i = 0; i < block.right.size() && i < 2; ++i) {
    plot::draw_text(canvas, {right, i == 0 ? first : second}, block.right[i], style.small(), theme.quiet, Anchor::end);
    right_width[i] = canvas.measure(block.right[i], style.small()).width;
  }
  // Words that do not fit lose their last clauses rather than run into the next column.
  const auto fitted = [&](std::string words, const plot::Font& font, double beside) {
    const double room = page.width - 2 * margin - beside - 3 * style.mm;
    while (canvas.measure(words, font).width > room) {
      const auto clause = words.rfind(';');
      if (clause == std::string::npos) {
        while (!words.empty() && canvas.measure(words + "…", font).width > room) {
          words.pop_back();
          while (!words.empty() && (static_cast<unsigned char>(words.back()) & 0xC0U) == 0x80U) words.pop_back();
        }
        return words + "…";
      }
      words.resize(clause);
    }
    return words;
  };
  plot::draw_text(canvas, {page.x + margin, first}, fitted(block.title, style.normal(true), right_width[0]),
                  style.normal(true), theme.ink);
  if (!block.left.empty())
    plot::draw_text(canvas, {page.x + margin, second}, fitted(block.left.front(), style.small(), right_width[1]),
                    style.small(), theme.quiet);
  return {page.x + margin, page.y + margin, page.width - 2 * margin, top - page.y - 2 * margin};
}

plot::PictureOptions picture_options(const Plate& plate, const Case& c) {
  plot::PictureOptions options;
  options.width_mm = plate.width_mm;
  options.height_mm = plate.height_mm;
  options.dpi = plate.dpi;
  if (!plate.transparent) options.ground = plot::theme(plate.theme).paper;
  options.title = c.title;
  options.case_text = write_case(c);
  options.date = plate.date;
  return options;
}

std::string contact_name(const Contact& contact) {
  return contact.on_bench ? "bench" : std::string(side_name(contact.zone.side)) + " " + contact.zone.zone;
}

std::vector<std::size_t> chosen_contacts(const Solution& solution, const std::string& wanted) {
  std::vector<std::size_t> chosen;
  std::vector<std::string> names;
  for (std::size_t i = 0; i < solution.contacts.size(); ++i) {
    const Contact& contact = solution.contacts[i];
    if (!contact.patch) continue;
    names.push_back(contact_name(contact));
    if (wanted.empty() || names.back() == wanted || names.back().starts_with(wanted + " ") ||
        contact.zone.zone == wanted)
      chosen.push_back(i);
  }
  if (chosen.empty())
    throw InputError(ErrorCode::unknown_name, "--contact " + wanted + ": there is no such loaded contact.",
                     "there are: " + join_names(names) + ".");
  return chosen;
}

std::size_t hardest_contact(const Solution& solution, const std::string& wanted) {
  const auto chosen = chosen_contacts(solution, wanted);
  return *std::max_element(chosen.begin(), chosen.end(), [&](std::size_t a, std::size_t b) {
    return solution.contacts[a].patch->peak_pressure_MPa < solution.contacts[b].patch->peak_pressure_MPa;
  });
}

plot::HeatMap pressure_map(const Patch& patch, double highest_MPa) {
  const Grid& g = patch.grid;
  plot::HeatMap map;
  map.nx = g.nx;
  map.ny = g.ns;
  map.x0 = g.x0_mm - g.dx_mm / 2;
  map.y0 = g.s0_mm - g.ds_mm / 2;
  map.dx = g.dx_mm;
  map.dy = g.ds_mm;
  map.values = patch.pressure.values;
  map.map = plot::ColourMap::ember;
  map.range = {0, highest_MPa};
  map.empty_value = 0.0;
  return map;
}

plot::HeatMap pressure_map(const Contact& contact, double highest_MPa) {
  plot::HeatMap map = pressure_map(*contact.patch, highest_MPa);
  if (contact.patch->method == PatchMethod::hertz && contact.zone.ellipse) {
    plot::Line edge = ellipse_line(*contact.zone.ellipse);
    map.edge_x = std::move(edge.x);
    map.edge_y = std::move(edge.y);
  }
  return map;
}

plot::HeatMap field_heat_map(const Contact& contact, const Field& field, plot::ColourMap colours,
                             const plot::Range& range, int steps) {
  plot::HeatMap map = pressure_map(contact, range.high);
  map.values = scalars_of(field);
  map.map = colours;
  map.range = range;
  map.empty_value.reset();
  map.inks = label_inks(field);
  // Outside the patch nothing is shown, whatever the field holds there.
  for (std::size_t k = 0; k < map.values.size() && k < contact.patch->pressure.values.size(); ++k)
    if (contact.patch->pressure.values[k] <= 0) map.values[k] = std::nan("");
  if (steps > 1 && map.inks.empty()) {
    for (double& v : map.values) {
      if (std::isnan(v)) continue;
      const double t = std::clamp((v - range.low) / range.span(), 0.0, 1.0);
      v = range.low + (std::min(steps - 1.0, std::floor(t * steps)) + 0.5) / steps * range.span();
    }
  }
  return map;
}

std::string detail_letter(const Contact& contact) {
  if (contact.on_bench) return "B";
  return contact.zone.side == Side::left ? "L" : "R";
}

std::string contact_label(const Contact& contact) {
  std::string name = contact_name(contact);
  std::transform(name.begin(), name.end(), name.begin(),
                 [](unsigned char c) { return static_cast<char>(std::toupper(c)); });
  return name;
}

plot::Line ellipse_line(const HertzEllipse& ellipse) {
  plot::Line line;
  constexpr int kPoints = 180;
  for (int k = 0; k < kPoints; ++k) {
    const double angle = 2 * std::numbers::pi * k / kPoints;
    line.x.push_back(ellipse.semi_axis_rolling_mm * std::cos(angle));
    line.y.push_back(ellipse.semi_axis_across_mm * std::sin(angle));
  }
  line.closed = true;
  line.weight = plot::Weight::fine;
  return line;
}

void draw_plate(const Plate& plate, const Solution& solution, const std::filesystem::path& out) {
  if (plate.kind == "scene") return draw_scene_plate(solution, plate, out);
  plot::picture_kind(out);
  if (plate.kind == "patch") {
    return plot::write_picture(out, picture_options(plate, solution.asked),
                               [&](plot::Canvas& canvas) { draw_patch_plate(solution, plate, canvas); });
  }
  if (plate.kind == "curve") {
    return plot::write_picture(out, picture_options(plate, solution.asked),
                               [&](plot::Canvas& canvas) { draw_curve_plate(solution, plate, canvas); });
  }
  if (plate.kind == "section") {
    if (solution.asked.bench)
      throw InputError(ErrorCode::conflicting_keys, "draw: a bench case has no profiles to draw a section of.",
                       "use --plate patch.");
    return plot::write_picture(out, picture_options(plate, solution.asked),
                               [&](plot::Canvas& canvas) { draw_section_plate(solution, plate, canvas); });
  }
  throw InputError(ErrorCode::unknown_name, "\"" + plate.kind + "\" is not a plate.",
                   "there are section, patch, curve, scene and traverse.");
}

void draw_plate(const Plate& plate, const Traverse& traverse, const std::filesystem::path& out) {
  plot::write_picture(out, picture_options(plate, traverse.asked),
                      [&](plot::Canvas& canvas) { draw_traverse_plate(traverse, plate, canvas); });
}

}  // namespace runband
