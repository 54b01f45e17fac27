#include "viewer/panels/overlay.h"

#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"
#include "viewer/panels/volume_cut.h"
#include "viewer/plates/sheet.h"

namespace runband {

using plot::Point;

ShownField shown_field(const Desk& desk, const Solution& solution) {
  ShownField shown;
  const View& view = desk.view();
  const auto index = desk.contact_of(solution);
  if (!index) return shown;
  if (const Volume* volume = volume_named(solution.contacts[*index], view.field)) {
    shown.volume = volume;
    shown.title = volume->title;
    shown.unit = volume->unit == "1" ? "" : volume->unit;
    shown.map = view.map;
    shown.range = {0, 0};
    for (const double v : volume->values) shown.range.include(v);
    if (view.locked_range) shown.range = *view.locked_range;
    return shown;
  }
  shown.field = field_named(solution.contacts[*index], view.field);
  if (shown.field == nullptr) shown.field = field_named(solution.contacts[*index], "pressure");
  if (shown.field == nullptr) return shown;
  shown.title = view.field == "pressure" ? "contact pressure" : shown.field->title;
  shown.unit = shown.field->unit == "1" ? "" : shown.field->unit;
  shown.map = map_for(*shown.field, view.map);
  shown.range = range_of(*shown.field, shown.map);
  for (const Contact& contact : solution.contacts) {
    const Field* field = field_named(contact, view.field);
    if (field == nullptr) continue;
    const plot::Range range = range_of(*field, shown.map);
    shown.range.include(range.low);
    // Cells hold averages; the peak is what the numbers beside say.
    shown.range.include(view.field == "pressure" ? contact.patch->peak_pressure_MPa : range.high);
  }
  if (view.locked_range) shown.range = *view.locked_range;
  return shown;
}

DetailSubject detail_subject(const Desk& desk, const Contact& contact, const ShownField& shown) {
  const View& view = desk.view();
  DetailSubject subject;
  subject.contact = &contact;
  subject.field = field_named(contact, view.field) != nullptr ? view.field : "pressure";
  subject.map = shown.map;
  subject.steps = view.steps;
  subject.range = shown.range;
  subject.states = view.states;
  subject.arrows = view.arrows;
  subject.pure_rolling = view.pure_rolling;
  subject.scale_disc = view.scale_disc;
  return subject;
}

SceneOverlay layout_overlay(const Desk& desk, const Solution& solution, const LiveScene* scene, const plot::Box& box,
                            double unit) {
  SceneOverlay overlay;
  overlay.box = box;
  const auto index = desk.contact_of(solution);
  if (!index) return overlay;
  overlay.contact = *index;
  const Contact& contact = solution.contacts[*index];
  double half = 1;
  const Grid& g = contact.patch->grid;
  for (int j = 0; j < g.ns; ++j)
    for (int i = 0; i < g.nx; ++i)
      if (contact.patch->pressure.values[static_cast<std::size_t>(j * g.nx + i)] > 0)
        half = std::max({half, std::abs(g.x(i)) + g.dx_mm, std::abs(g.s(j)) + g.ds_mm});
  const bool wheelset = scene != nullptr && solution.locator != nullptr;
  if (wheelset) {
    const auto at = scene->project(contact.zone.track_mm);
    if (at) {
      overlay.mark = Point{box.x + at->x, box.y + at->y};
      overlay.mark_radius = std::max(14 * unit, 1.5 * half * scene->px_per_mm(contact.zone.track_mm));
    }
  }
  if (desk.view().detail == DetailStyle::hidden) return overlay;
  double radius = std::min({box.width * 0.27, (box.height - 150 * unit) * 0.44, 230 * unit});
  Point centre{box.x + radius + 30 * unit, box.y + radius + 52 * unit};
  if (!wheelset) {
    radius = std::min(box.width * 0.42, (box.height - 170 * unit) * 0.47);
    centre = {box.centre().x, box.y + radius + 52 * unit};
  }
  if (radius < 40 * unit) return overlay;
  // Millimetres on this screen do not matter: the scale is told against the scene, as a drawing's detail is.
  DetailPlace place;
  place.centre = centre;
  place.radius = radius;
  place.scale = radius / (1.30 * half);
  overlay.detail = place;
  // Come so near that the patch is as large in the scene, the ring would only cover it.
  if (wheelset && overlay.mark && overlay.mark_radius > radius * 0.9) overlay.detail.reset();
  return overlay;
}

namespace {

void draw_pins(const Desk& desk, const Contact& contact, const DetailPlace& place, plot::Canvas& canvas,
               const plot::Theme& theme, const plot::Style& style) {
  const std::string name = contact_name(contact);
  int number = 0;
  plot::Places places;
  for (const Pin& pin : desk.view().pins) {
    ++number;
    if (pin.slot != desk.active() || pin.side != name) continue;
    const Point at = place.at(pin.x_mm, pin.s_mm);
    if (!place.contains(at)) continue;
    canvas.polygon(plot::circle(at, 0.9 * style.mm), theme.accent);
    canvas.line(plot::circle(at, 1.5 * style.mm), {theme.paper, style.fine, plot::Dash::solid}, true);
    const std::string words = std::to_string(number);
    canvas.text({at.x + 1.9 * style.mm, at.y - 0.8 * style.mm}, words, style.small(true), theme.accent,
                plot::Anchor::start, 0);
  }
}

/// The pinned values, as a list: they stay when the state changes, with the state they were read in.
void draw_pin_list(const Desk& desk, const plot::Box& box, plot::Canvas& canvas, const plot::Theme& theme,
                   const plot::Style& style) {
  const auto& pins = desk.view().pins;
  if (pins.empty()) return;
  const double line = style.small_text * 1.5;
  double y = box.y + 48 * style.mm / 3.6;
  int number = 0;
  for (const Pin& pin : pins) {
    ++number;
    if (y > box.bottom() - 120 * style.mm / 3.6) break;
    const std::string words = std::to_string(number) + "   " + pin.words + ", " + pin.side + ", " + pin.state;
    canvas.text({box.right() - 16 * style.mm / 3.6, y}, words, style.small(), theme.accent, plot::Anchor::end, 0);
    y += line;
  }
}

}  // namespace

void draw_overlay(const Desk& desk, const Solution& solution, const SceneOverlay& overlay, double relief_turn_deg,
                  double relief_tilt_deg, plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  if (overlay.contact >= solution.contacts.size() || !solution.contacts[overlay.contact].patch) return;
  const Contact& contact = solution.contacts[overlay.contact];
  const ShownField shown = shown_field(desk, solution);
  const DetailSubject subject = detail_subject(desk, contact, shown);
  const double unit = style.mm / 3.6;
  if (overlay.detail) {
    const DetailPlace& place = *overlay.detail;
    if (overlay.mark) {
      const double dx = place.centre.x - overlay.mark->x, dy = place.centre.y - overlay.mark->y,
                   distance = std::hypot(dx, dy);
      if (overlay.box.contains(*overlay.mark) && distance > place.radius + overlay.mark_radius) {
        canvas.line(plot::circle(*overlay.mark, overlay.mark_radius), {theme.ink, style.fine, plot::Dash::solid}, true);
        plot::draw_line(canvas,
                        {overlay.mark->x + dx / distance * overlay.mark_radius,
                         overlay.mark->y + dy / distance * overlay.mark_radius},
                        {place.centre.x - dx / distance * place.radius, place.centre.y - dy / distance * place.radius},
                        {theme.ink, style.fine, plot::Dash::solid});
      }
    }
    if (shown.volume != nullptr) {
      DetailSubject below = subject;
      below.range = shown.range;
      below.map = shown.map;
      draw_volume_cut(*shown.volume, below, place.centre, place.radius, place.scale, canvas, theme, style);
    } else if (desk.view().detail == DetailStyle::relief) {
      draw_relief(subject, place.centre, place.radius, relief_turn_deg, relief_tilt_deg, canvas, theme, style);
    } else {
      draw_detail_view(subject, place.centre, place.radius, place.scale, canvas, theme, style);
      draw_pins(desk, contact, place, canvas, theme, style);
    }
    // Letter and scale above the ring.
    const Point letter{place.centre.x - place.radius * 0.98, place.centre.y - place.radius * 0.90};
    const plot::Font large{style.text * 1.35, true, 0};
    canvas.text(letter, detail_letter(contact), large, theme.ink, plot::Anchor::start, 0);
    const double after = canvas.measure(detail_letter(contact), large).width + 7 * unit;
    const std::string words = contact_name(contact);
    canvas.text({letter.x + after, letter.y}, words, style.small(), theme.quiet, plot::Anchor::start, 0);
    // Rolls this way.
    if (desk.view().detail == DetailStyle::flat || shown.volume != nullptr) {
      const Point a{place.centre.x + place.radius * 0.36, place.centre.y - place.radius * 0.80};
      plot::draw_arrow(canvas, a, {a.x + 9 * unit * 2.2, a.y}, {theme.accent, style.fine, plot::Dash::solid}, 6 * unit);
      canvas.text({a.x - 4 * unit, a.y + style.small_text * 0.35}, "rolls", style.small(), theme.accent,
                  plot::Anchor::end, 0);
    }
  }
  draw_pin_list(desk, overlay.box, canvas, theme, style);
  if (shown.field != nullptr || shown.volume != nullptr) {
    const double width = std::min(300 * unit, overlay.box.width - 48 * unit);
    const plot::Box bar{overlay.box.x + 24 * unit, overlay.box.bottom() - 60 * unit, width, 40 * unit};
    if (shown.field != nullptr && shown.field->kind == Field::Kind::label) {
      double x = bar.x;
      for (const std::string& label : shown.field->labels) {
        const plot::Colour ink = plot::state_colour(label == "stick"  ? plot::StateInk::stick
                                                    : label == "slip" ? plot::StateInk::slip
                                                                      : plot::StateInk::open);
        canvas.polygon(plot::corners({x, bar.y, 14 * unit, 10 * unit}), ink);
        canvas.text({x + 20 * unit, bar.y + 10 * unit}, label, style.small(), theme.ink, plot::Anchor::start, 0);
        x += canvas.measure(label, style.small()).width + 44 * unit;
      }
    } else {
      std::string title = shown.title;
      if (!title.empty()) title[0] = static_cast<char>(std::tolower(static_cast<unsigned char>(title[0])));
      if (desk.view().locked_range) title += " (range locked)";
      plot::draw_colour_bar(bar, shown.map, shown.range, title, shown.unit, canvas, theme, style);
    }
  }
}

std::optional<Probed> probe(const Desk& desk, const Contact& contact, double x_mm, double s_mm) {
  const Grid& g = contact.patch->grid;
  const int i = static_cast<int>(std::lround((x_mm - g.x0_mm) / g.dx_mm)),
            j = static_cast<int>(std::lround((s_mm - g.s0_mm) / g.ds_mm));
  if (i < 0 || j < 0 || i >= g.nx || j >= g.ns) return std::nullopt;
  const auto cell = static_cast<std::size_t>(j * g.nx + i);
  if (contact.patch->pressure.values[cell] <= 0) return std::nullopt;
  Probed probed;
  probed.contact = contact_name(contact);
  probed.x_mm = x_mm;
  probed.s_mm = s_mm;
  probed.rows.push_back({"x, s", plot::number(x_mm, 2) + ", " + plot::number(s_mm, 2), "mm"});
  const auto add = [&](const std::string& key, const Field& field) {
    if (!(field.grid == g)) return;
    const std::string unit = field.unit == "1" ? "" : field.unit;
    if (field.kind == Field::Kind::label) {
      const auto k = static_cast<std::size_t>(std::max(0.0, field.values[cell]));
      probed.rows.push_back({field.title, k < field.labels.size() ? field.labels[k] : "–", ""});
    } else if (field.components == 1) {
      probed.rows.push_back({field.title, plot::number_with_digits(field.values[cell], 4), unit});
    } else {
      double sum = 0;
      for (int c = 0; c < field.components; ++c) {
        const double v = field.values[cell * static_cast<std::size_t>(field.components) + static_cast<std::size_t>(c)];
        sum += v * v;
      }
      probed.rows.push_back({field.title, plot::number_with_digits(std::sqrt(sum), 4), unit});
    }
    if (key == desk.view().field) probed.field_words = probed.rows.back()[1] + (unit.empty() ? "" : "\u2009" + unit);
  };
  add("pressure", contact.patch->pressure);
  if (probed.rows.back()[0].empty()) probed.rows.back()[0] = "Contact pressure";
  for (const auto& [id, result] : contact.analyses)
    for (const Field& field : result.fields) add(id + "." + field.name, field);
  return probed;
}

}  // namespace runband
