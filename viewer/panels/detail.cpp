#include "viewer/panels/detail.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "viewer/plates/sheet.h"

namespace runband {

using plot::Point;

bool DetailPlace::contains(Point p) const { return std::hypot(p.x - centre.x, p.y - centre.y) <= radius; }

plot::HeatMap field_map(const Contact& contact, const Field& field, const DetailSubject& subject) {
  return field_heat_map(contact, field, subject.map, subject.range, subject.steps);
}

namespace {

/// The border between stick and slip as pieces of cell edges.
void draw_states(const Contact& contact, const DetailPlace& place, plot::Canvas& canvas, const plot::Theme& theme,
                 const plot::Style& style) {
  const Field* state = field_named(contact, "slip_bands.adhesion");
  if (state == nullptr) return;
  const Grid& g = state->grid;
  int stick = 1, slip = 2;
  for (std::size_t k = 0; k < state->labels.size(); ++k) {
    if (state->labels[k] == "stick") stick = static_cast<int>(k);
    if (state->labels[k] == "slip") slip = static_cast<int>(k);
  }
  const auto at = [&](int i, int j) {
    return i < 0 || j < 0 || i >= g.nx || j >= g.ns
               ? -1
               : static_cast<int>(state->values[static_cast<std::size_t>(j * g.nx + i)]);
  };
  const plot::Stroke stroke{theme.name == plot::ThemeName::dark ? plot::Colour{0.06, 0.08, 0.09, 1} : theme.ink,
                            style.bold, plot::Dash::solid};
  // Joined into runs, so that the line is one line.
  double sx[2] = {0, 0}, ss[2] = {0, 0};
  int count[2] = {0, 0};
  for (int j = 0; j < g.ns; ++j) {
    std::optional<double> from;
    for (int i = 0; i <= g.nx; ++i) {
      const bool border =
          i < g.nx && ((at(i, j) == stick && at(i, j + 1) == slip) || (at(i, j) == slip && at(i, j + 1) == stick));
      const double s = g.s(j) + g.ds_mm / 2;
      if (border && !from) from = g.x(i) - g.dx_mm / 2;
      if (!border && from) {
        plot::draw_line(canvas, place.at(*from, s), place.at(g.x(i) - g.dx_mm / 2, s), stroke);
        from.reset();
      }
      if (i < g.nx) {
        const int which = at(i, j) == stick ? 0 : at(i, j) == slip ? 1 : -1;
        if (which >= 0) {
          sx[which] += g.x(i);
          ss[which] += g.s(j);
          ++count[which];
        }
      }
    }
  }
  for (int i = 0; i < g.nx; ++i) {
    std::optional<double> from;
    for (int j = 0; j <= g.ns; ++j) {
      const bool border =
          j < g.ns && ((at(i, j) == stick && at(i + 1, j) == slip) || (at(i, j) == slip && at(i + 1, j) == stick));
      const double x = g.x(i) + g.dx_mm / 2;
      if (border && !from) from = g.s(j) - g.ds_mm / 2;
      if (!border && from) {
        plot::draw_line(canvas, place.at(x, *from), place.at(x, g.s(j) - g.ds_mm / 2), stroke);
        from.reset();
      }
    }
  }
  // The words stand outside the patch, toward the area they name.
  const char* names[2] = {"stick", "slip"};
  plot::Places places;
  const plot::Box ring{place.centre.x - place.radius, place.centre.y - place.radius, 2 * place.radius,
                       2 * place.radius};
  for (int which = 0; which < 2; ++which) {
    if (count[which] == 0) continue;
    const double x = sx[which] / count[which], s = ss[which] / count[which];
    // From the area's middle upward (stick) or downward (slip) to beyond the edge.
    double edge = s;
    for (int j = 0; j < g.ns; ++j) {
      const int i = std::clamp(static_cast<int>(std::lround((x - g.x0_mm) / g.dx_mm)), 0, g.nx - 1);
      if (at(i, j) > 0) edge = which == 0 ? std::max(edge, g.s(j)) : (edge == s ? g.s(j) : std::min(edge, g.s(j)));
    }
    const double sign = which == 0 ? 1 : -1;
    const Point words = place.at(x, edge + sign * 0.5);
    const double down = which == 0 ? -1.2 * style.mm : 1.2 * style.mm + style.small_text * 0.72;
    const std::pair<Point, plot::Anchor> candidates[] = {{{words.x, words.y + down}, plot::Anchor::middle}};
    places.set(canvas, ring, candidates, names[which], style.small(true), theme.ink);
  }
}

void draw_arrows(const Contact& contact, const DetailPlace& place, plot::Canvas& canvas, const plot::Theme& theme,
                 const plot::Style& style) {
  const Field* traction = field_named(contact, "slip_bands.traction");
  if (traction == nullptr || traction->components != 2) return;
  const Grid& g = traction->grid;
  double most = 0;
  for (const double v : scalars_of(*traction)) most = std::max(most, v);
  if (!(most > 0)) return;
  const double room = 5.2 * style.mm;
  const int step_i = std::max(1, static_cast<int>(std::lround(room / (g.dx_mm * place.scale))));
  const int step_j = std::max(1, static_cast<int>(std::lround(room / (g.ds_mm * place.scale))));
  const plot::Stroke stroke{theme.name == plot::ThemeName::dark ? plot::Colour{0.06, 0.08, 0.09, 1} : theme.ink,
                            style.fine, plot::Dash::solid};
  for (int j = g.ns / 2 % step_j; j < g.ns; j += step_j) {
    for (int i = g.nx / 2 % step_i; i < g.nx; i += step_i) {
      const auto k = static_cast<std::size_t>(j * g.nx + i);
      if (contact.patch->pressure.values[k] <= 0) continue;
      const double tx = traction->values[2 * k], ts = traction->values[2 * k + 1];
      const double length = std::hypot(tx, ts) / most * room * 0.92;
      if (length < 0.7 * style.mm) continue;
      const double angle = std::atan2(ts, tx);
      const Point from = place.at(g.x(i), g.s(j));
      const Point to{from.x + length * std::cos(angle), from.y - length * std::sin(angle)};
      plot::draw_arrow(canvas, from, to, stroke, std::min(0.5 * length, 1.2 * style.mm));
    }
  }
}

}  // namespace

DetailPlace draw_detail_view(const DetailSubject& subject, Point centre, double radius, double scale,
                             plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  const Contact& contact = *subject.contact;
  const DetailPlace place{centre, radius, scale};
  const std::vector<Point> ring = plot::circle(centre, radius);
  canvas.polygon(ring, theme.sheet);
  const Field* field = field_named(contact, subject.field);
  canvas.push_clip(ring);
  if (field != nullptr) {
    const plot::HeatMap map = field_map(contact, *field, subject);
    const Point a = place.at(map.x0, map.y0 + map.ny * map.dy);
    const plot::Box box{a.x, a.y, map.nx * map.dx * scale, map.ny * map.dy * scale};
    if (!map.edge_x.empty()) {
      std::vector<Point> edge;
      for (std::size_t k = 0; k < map.edge_x.size(); ++k) edge.push_back(place.at(map.edge_x[k], map.edge_y[k]));
      canvas.push_clip(edge);
      canvas.image(box, plot::image_of(map), false);
      canvas.pop_clip();
      canvas.line(edge, {theme.ink, style.fine, plot::Dash::solid}, true);
    } else {
      canvas.image(box, plot::image_of(map), false);
      if (contact.zone.ellipse) {
        std::vector<Point> edge;
        const plot::Line ellipse = ellipse_line(*contact.zone.ellipse);
        for (std::size_t k = 0; k < ellipse.x.size(); ++k) edge.push_back(place.at(ellipse.x[k], ellipse.y[k]));
        canvas.line(edge, {theme.quiet, style.fine, plot::Dash::dashed}, true);
      }
    }
  }
  if (subject.states && subject.field != "slip_bands.adhesion") draw_states(contact, place, canvas, theme, style);
  if (subject.arrows) draw_arrows(contact, place, canvas, theme, style);
  if (subject.pure_rolling) {
    const auto creepage = contact.analyses.find("creepage");
    bool named = false;
    if (creepage != contact.analyses.end()) {
      for (const Mark& mark : creepage->second.marks) {
        std::vector<Point> line;
        for (std::size_t k = 0; k < mark.x_mm.size(); ++k) line.push_back(place.at(mark.x_mm[k], mark.s_mm[k]));
        if (line.empty()) continue;
        if (mark.is_line)
          canvas.line(line, {theme.accent, style.bold, plot::Dash::dashed}, false);
        else
          for (const Point& p : line)
            canvas.line(plot::circle(p, 0.9 * style.mm), {theme.accent, style.bold, plot::Dash::solid}, true);
        if (!named) {
          // Outside the patch, where the line ends.
          const Point end = line.front().x > line.back().x ? line.front() : line.back();
          const double width = canvas.measure("rolling", style.small()).width;
          if (place.contains({end.x + width + 1.5 * style.mm, end.y + style.small_text})) {
            canvas.text({end.x + 1.2 * style.mm, end.y - 0.2 * style.mm}, "pure", style.small(), theme.accent,
                        plot::Anchor::start, 0);
            canvas.text({end.x + 1.2 * style.mm, end.y + style.small_text}, "rolling", style.small(), theme.accent,
                        plot::Anchor::start, 0);
          }
        }
        named = true;
      }
    }
  }
  if (subject.scale_disc) {
    const double disc = 5 * scale;
    double low = contact.zone.ellipse ? contact.zone.ellipse->semi_axis_across_mm : 0;
    const Grid& g = contact.patch->grid;
    low = std::max(low, -g.s0_mm);
    const Point at{centre.x, centre.y + radius - disc - 2.2 * style.mm};
    if (at.y - disc > centre.y + low * scale && disc > 2.6 * style.mm) {
      canvas.line(plot::circle(at, disc), {theme.quiet, style.fine, plot::Dash::dashed}, true);
      canvas.text({at.x, at.y + style.small_text * 0.36}, "10\u2009mm", style.small(), theme.quiet,
                  plot::Anchor::middle, 0);
    }
  }
  canvas.pop_clip();
  canvas.line(ring, {theme.ink, style.bold, plot::Dash::solid}, true);
  return place;
}

void draw_relief(const DetailSubject& subject, Point centre, double radius, double turn_deg, double tilt_deg,
                 plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  const Contact& contact = *subject.contact;
  const std::vector<Point> ring = plot::circle(centre, radius);
  canvas.polygon(ring, theme.sheet);
  const Field* field = field_named(contact, subject.field);
  canvas.push_clip(ring);
  if (field != nullptr) {
    const plot::HeatMap map = field_map(contact, *field, subject);
    const Grid& g = field->grid;
    double half = 1;
    for (int j = 0; j < g.ns; ++j)
      for (int i = 0; i < g.nx; ++i)
        if (contact.patch->pressure.values[static_cast<std::size_t>(j * g.nx + i)] > 0)
          half = std::max({half, std::abs(g.x(i)), std::abs(g.s(j))});
    const double scale = 0.74 * radius / half, height = 0.62 * radius;
    const double turn = turn_deg * std::numbers::pi / 180, tilt = tilt_deg * std::numbers::pi / 180;
    const double ct = std::cos(turn), st = std::sin(turn), ci = std::cos(tilt), si = std::sin(tilt);
    const std::vector<double> value = scalars_of(*field);
    const auto level = [&](int i, int j) {
      if (i < 0 || j < 0 || i >= g.nx || j >= g.ns) return 0.0;
      const auto k = static_cast<std::size_t>(j * g.nx + i);
      return contact.patch->pressure.values[k] > 0
                 ? std::clamp((value[k] - subject.range.low) / subject.range.span(), 0.0, 1.2)
                 : 0.0;
    };
    const auto project = [&](double x, double s, double z) {
      const double u = ct * x - st * s, v = st * x + ct * s;
      return Point{centre.x + u * scale, centre.y + 0.22 * radius - v * scale * si - z * height * ci};
    };
    // A surface through the cells' middles; around the patch it reaches the ground. At most some 48 pieces along a
    // side: finer is not seen.
    const int stride = std::max(1, std::max(g.nx, g.ns) / 48);
    struct Piece {
      double far;
      int i, j;
    };
    std::vector<Piece> pieces;
    for (int j = -stride; j < g.ns; j += stride)
      for (int i = -stride; i < g.nx; i += stride)
        if (level(i, j) > 0 || level(i + stride, j) > 0 || level(i, j + stride) > 0 ||
            level(i + stride, j + stride) > 0)
          pieces.push_back({st * g.x(i) + ct * g.s(j), i, j});
    std::sort(pieces.begin(), pieces.end(), [](const Piece& a, const Piece& b) { return a.far > b.far; });
    const auto colour_at_cell = [&](int i, int j) -> std::optional<plot::Colour> {
      if (i < 0 || j < 0 || i >= g.nx || j >= g.ns) return std::nullopt;
      const double v = map.values[static_cast<std::size_t>(j * g.nx + i)];
      if (std::isnan(v)) return std::nullopt;
      if (!map.inks.empty()) return map.inks[static_cast<std::size_t>(std::max(0.0, v)) % map.inks.size()];
      return plot::colour_at(map.map, (v - map.range.low) / map.range.span());
    };
    for (const Piece& piece : pieces) {
      const int i = piece.i, j = piece.j;
      const double z00 = level(i, j), z10 = level(i + stride, j), z11 = level(i + stride, j + stride),
                   z01 = level(i, j + stride);
      const Point quad[] = {project(g.x(i), g.s(j), z00), project(g.x(i + stride), g.s(j), z10),
                            project(g.x(i + stride), g.s(j + stride), z11), project(g.x(i), g.s(j + stride), z01)};
      std::optional<plot::Colour> colour;
      for (const auto& [a, b] : {std::pair{i, j}, {i + stride, j}, {i + stride, j + stride}, {i, j + stride}})
        if (!colour) colour = colour_at_cell(a, b);
      if (!colour) continue;
      // Light from the upper left: slopes that face it are a little brighter.
      const double slope = (z10 - z00) * ct - (z01 - z00) * st;
      canvas.polygon(quad, plot::mix(*colour, slope < 0 ? plot::Colour{0, 0, 0, 1} : plot::Colour{1, 1, 1, 1},
                                     std::min(0.18, std::abs(slope) * 1.6)));
    }
    // The rolling direction lies on the ground.
    const Point a = project(-half * 1.1, 0, 0), b = project(half * 1.22, 0, 0);
    plot::draw_arrow(canvas, a, b, {theme.accent, style.fine, plot::Dash::solid}, 1.4 * style.mm);
  }
  canvas.pop_clip();
  canvas.line(ring, {theme.ink, style.bold, plot::Dash::solid}, true);
}

}  // namespace runband
