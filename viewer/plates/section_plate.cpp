// Both profiles where they touch, true to scale, with a detail view of the contact.
#include <Eigen/Geometry>
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/surface/outline.h"
#include "viewer/plates/sheet.h"

namespace runband {

using plot::Anchor;
using plot::Box;
using plot::Point;

namespace {

constexpr double kWideAngle = 30;  // degrees, from which the contact angle's words stand outside its arc
constexpr double kChord = 0.002;   // mm, of drawn outlines

/// Wheel and rail section at one contact in (distance from the track centre line, height above the running surface).
struct Section {
  std::vector<Vec2> wheel, rail;
  Vec2 contact;
  Vec2 normal;  ///< into the wheel
};

Section section_of(const Solution& solution, const ContactZone& zone, double chord_error = kChord) {
  const Pairing& pairing = solution.locator->pairing();
  const double sign = side_sign(zone.side);
  Section section;
  section.contact = {sign * zone.track_mm.y(), zone.track_mm.z()};
  section.normal = Vec2(sign * zone.frame(1, 2), zone.frame(2, 2)).normalized();
  for (const Vec2& p : rail_outline(pairing.rail(zone.side), chord_error, 1e9))
    section.rail.push_back(pairing.mount(zone.side).outward(p));
  // The wheel is turned by the roll and put so that its touching point meets the contact (or stands off by the gap).
  const double roll = sign * solution.pose.roll_rad;
  const Eigen::Rotation2Dd turn(roll);
  const double radius = pairing.rolling_radius_mm(zone.side);
  const Vec2 touching = turn * Vec2(zone.wheel_y_mm, zone.wheel_z_mm);
  const Vec2 shift = section.contact + zone.gap_mm * section.normal - touching;
  for (const Vec2& p : wheel_outline(pairing.wheel(zone.side), radius, chord_error, 1e9))
    section.wheel.push_back(turn * Vec2(p.x(), p.y() + radius) + shift);
  return section;
}

std::pair<std::vector<double>, std::vector<double>> columns(const std::vector<Vec2>& points) {
  std::pair<std::vector<double>, std::vector<double>> c;
  for (const Vec2& p : points) {
    c.first.push_back(p.x());
    c.second.push_back(p.y());
  }
  return c;
}

void add_bodies(plot::Plot& p, const Section& section, const plot::Theme& theme) {
  const auto body = [&](const std::vector<Vec2>& outline, const plot::Colour& fill, double hatch) {
    const auto [x, y] = columns(outline);
    p.areas.push_back({x, y, plot::Paint{plot::Ink::steel, 1, fill}, hatch, {plot::Ink::steel, 0.55, {}}});
    plot::Line line;
    line.x = x;
    line.y = y;
    line.closed = true;
    p.lines.push_back(std::move(line));
  };
  body(section.rail, theme.rail_fill, 45);
  body(section.wheel, theme.wheel_fill, -45);
}

// Words on a ground of their own, so that no hatch runs through them.
void words_on_ground(plot::Canvas& canvas, Point at, const std::string& words, const plot::Font& font,
                     const plot::Colour& ink, const plot::Colour& ground, Anchor anchor) {
  canvas.polygon(plot::corners(plot::text_box(canvas, at, words, font, anchor).grown(font.size * 0.25)), ground);
  plot::draw_text(canvas, at, words, font, ink, anchor);
}

// The contact angle between the upright and the normal, in the wheel; the width of the patch as a dimension, in the
// rail.
void mark_angle_and_width(const Section& section, const ContactZone& zone, Point centre, double radius, double scale,
                          plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  const plot::Stroke fine{theme.accent, style.fine, plot::Dash::solid};
  const double normal_deg = std::atan2(section.normal.y(), section.normal.x()) * 180 / std::numbers::pi;
  const double arm = 0.55 * radius;
  const double rise = canvas.measure("0", style.small()).ascent;
  plot::draw_line(canvas, centre, {centre.x, centre.y - arm - 2 * style.mm}, fine);
  canvas.line(plot::arc(centre, arm, 90, normal_deg), fine, false);
  // The words stand on the side away from the normal.
  const bool leans_right = section.normal.x() > 0;
  const std::string angle = "δ " + plot::number(zone.contact_angle_rad * 180 / std::numbers::pi, 2) + "°";
  const double turn = normal_deg - 90;
  if (std::abs(turn) > kWideAngle) {
    // A wide angle has its words outside the middle of its arc.
    const Point middle = plot::arc(centre, arm + 2 * style.mm, 90 + turn / 2, 90 + turn / 2).front();
    words_on_ground(canvas, middle, angle, style.small(), theme.accent, theme.wheel_fill,
                    leans_right ? Anchor::start : Anchor::end);
  } else if (canvas.measure(angle, style.small()).width < 0.7 * radius) {
    words_on_ground(canvas, {centre.x + (leans_right ? -1.5 : 1.5) * style.mm, centre.y - arm + rise}, angle,
                    style.small(), theme.accent, theme.wheel_fill, leans_right ? Anchor::end : Anchor::start);
  }
  if (!zone.ellipse) return;
  const double half = zone.ellipse->semi_axis_across_mm * scale, away = 0.34 * radius;
  // On the canvas y runs down: tangent and inward normal of the rail.
  const Point tangent{section.normal.y(), section.normal.x()}, inward{-section.normal.x(), section.normal.y()};
  const auto at = [&](double along, double in) {
    return Point{centre.x + tangent.x * along + inward.x * in, centre.y + tangent.y * along + inward.y * in};
  };
  for (const double end : {-half, half})
    plot::draw_line(canvas, at(end, style.mm), at(end, away + style.mm), {theme.ink, style.fine, plot::Dash::solid});
  plot::draw_arrow(canvas, at(0, away), at(half, away), {theme.ink, style.fine, plot::Dash::solid}, 2 * style.mm);
  plot::draw_arrow(canvas, at(0, away), at(-half, away), {theme.ink, style.fine, plot::Dash::solid}, 2 * style.mm);
  const std::string width = plot::number(2 * zone.ellipse->semi_axis_across_mm, 2) + "\u2009mm";
  const Point words = at(0, away + 2.2 * style.mm);
  if (canvas.measure(width, style.small()).width < radius)
    words_on_ground(canvas, {words.x, words.y + rise}, width, style.small(), theme.ink, theme.rail_fill,
                    Anchor::middle);
}

void draw_detail(const Section& section, const Contact& contact, Point centre, double radius, double scale,
                 plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  const std::vector<Point> ring = plot::circle(centre, radius);
  canvas.polygon(ring, theme.sheet);
  canvas.push_clip(ring);
  plot::Plot p;
  p.equal_aspect = true;
  p.scale = scale;
  p.grid = false;
  p.x.numbers = p.y.numbers = false;
  const double reach = radius / scale;
  p.x.range = plot::Range{section.contact.x() - reach, section.contact.x() + reach};
  p.y.range = plot::Range{section.contact.y() - reach, section.contact.y() + reach};
  add_bodies(p, section, theme);
  if (contact.zone.ellipse) {
    // The width of the patch along the rail's tangent.
    const Vec2 tangent(section.normal.y(), -section.normal.x());
    const double b = contact.zone.ellipse->semi_axis_across_mm;
    const Vec2 from = section.contact - b * tangent, to = section.contact + b * tangent;
    plot::Line width;
    width.x = {from.x(), to.x()};
    width.y = {from.y(), to.y()};
    width.paint = {plot::Ink::warning, 1, {}};
    p.lines.push_back(width);
  }
  const Vec2 tip = section.contact + 0.6 * reach * section.normal;
  plot::Line normal;
  normal.x = {section.contact.x() - 0.45 * reach * section.normal.x(), tip.x()};
  normal.y = {section.contact.y() - 0.45 * reach * section.normal.y(), tip.y()};
  normal.dash = plot::Dash::chain;
  normal.weight = plot::Weight::fine;
  normal.paint = {plot::Ink::accent, 1, {}};
  p.lines.push_back(normal);
  plot::draw_plot(p, {centre.x - radius, centre.y - radius, 2 * radius, 2 * radius}, canvas, theme, style,
                  plot::Margins{});
  mark_angle_and_width(section, contact.zone, centre, radius, scale, canvas, theme, style);
  canvas.pop_clip();
  canvas.line(ring, {theme.ink, style.bold, plot::Dash::solid}, true);
}

}  // namespace

plot::Plot section_plot(const Solution& solution, const ContactZone& zone, const plot::Theme& theme,
                        double chord_error_mm) {
  plot::Plot p;
  add_bodies(p, section_of(solution, zone, chord_error_mm), theme);
  return p;
}

void draw_section_plate(const Solution& solution, const Plate& plate, plot::Canvas& canvas) {
  const plot::Theme& theme = plot::theme(plate.theme);
  const plot::Style style;
  const Box body = draw_title_block(title_block(solution.asked, plate, state_text(solution)), canvas, theme, style);
  const Contact& contact = solution.contacts[hardest_contact(solution, plate.contact)];
  const Section section = section_of(solution, contact.zone);

  // True to scale in one of the scales of technical drawings; the detail beside or below.
  const bool wide = body.width >= body.height;
  const double side =
      wide ? std::min(body.width * 0.36, body.height * 0.62) : std::min(body.width * 0.5, body.height * 0.34);
  const Box main = wide ? Box{body.x, body.y, body.width - side - 5 * style.mm, body.height}
                        : Box{body.x, body.y, body.width, body.height - side - 12 * style.mm};

  plot::Plot p;
  p.equal_aspect = true;
  p.grid = false;
  p.x.title = "distance from the track centre";
  p.x.unit = "mm";
  p.y.title = "height above the running surface";
  p.y.unit = "mm";
  add_bodies(p, section, theme);
  const plot::Margins m = plot::margins_of(p, canvas, style, main.width * 0.9, main.height * 0.8);
  const double width = main.width - m.left - m.right, height = main.height - m.top - m.bottom;
  constexpr double kWidth = 150, kHeight = 96;  // mm of track that should be seen: wheel rim and rail head
  const double scale = plot::drawing_scale(std::min(width / kWidth, height / kHeight));
  p.scale = scale;
  // Wheel and rail head in the middle: the wheel from the back of its flange to its field side.
  double inner = section.contact.x(), outer = inner;
  for (const Vec2& q : section.wheel) {
    inner = std::min(inner, q.x());
    outer = std::max(outer, q.x());
  }
  const double middle = (inner + outer) / 2, level = section.contact.y() + 4.0;
  p.x.range = plot::Range{middle - width / scale / 2, middle + width / scale / 2};
  p.y.range = plot::Range{level - height / scale / 2, level + height / scale / 2};
  const plot::Frame frame = plot::draw_plot(p, main, canvas, theme, style, m);

  const std::string section_scale = "section " + plot::scale_text(scale);
  if (canvas.measure(p.y.title + p.y.unit + section_scale, style.small()).width + 5 * style.mm < main.width)
    plot::draw_text(canvas, {frame.data.right(), frame.data.y - 1.44 * style.mm}, section_scale, style.small(),
                    theme.quiet, Anchor::end);

  const double radius = side / 2;
  const Point centre = wide ? Point{body.right() - radius, body.y + 7 * style.mm + radius}
                            : Point{body.x + radius, body.bottom() - radius};
  const double half_width = contact.zone.ellipse ? contact.zone.ellipse->semi_axis_across_mm : 4.0;
  const double detail = plot::drawing_scale(radius / (1.6 * half_width));
  const double mark = std::max(2.2 * style.mm, std::min(6 * style.mm, radius / detail * scale));
  const Point at = frame.at(section.contact.x(), section.contact.y());
  // The leader runs from ring to ring.
  const double dx = centre.x - at.x, dy = centre.y - at.y, distance = std::hypot(dx, dy);
  plot::draw_line(canvas, {at.x + dx / distance * mark, at.y + dy / distance * mark},
                  {centre.x - dx / distance * radius, centre.y - dy / distance * radius},
                  {theme.ink, style.fine, plot::Dash::solid});
  canvas.line(plot::circle(at, mark), {theme.ink, style.fine, plot::Dash::solid}, true);
  draw_detail(section, contact, centre, radius, detail, canvas, theme, style);
  const Point letter = wide ? Point{centre.x - radius, body.y + 3.2 * style.mm}
                            : Point{centre.x + radius + 4 * style.mm, centre.y - radius + 3 * style.mm};
  const std::string mark_letter = detail_letter(contact);
  const double letter_width = canvas.measure(mark_letter, style.normal(true)).width;
  plot::draw_text(canvas, letter, mark_letter, style.normal(true), theme.ink);
  plot::draw_text(canvas, {letter.x + letter_width + 1.5 * style.mm, letter.y},
                  plot::scale_text(detail) + "   " + contact_label(contact), style.small(), theme.quiet);
  const ContactZone& z = contact.zone;
  std::vector<std::array<std::string, 3>> rows{
      {"Contact angle", plot::number(z.contact_angle_rad * 180 / std::numbers::pi, 2), "°"},
      {"Rolling radius", plot::number(z.rolling_radius_mm, 2), "mm"},
      {"On the wheel", plot::number(z.wheel_y_mm, 2), "mm"},
      {"On the rail", plot::number(z.rail_y_mm, 2), "mm"},
      {"Normal force", plot::number(z.normal_force_N * 1e-3, 1), "kN"},
      {"Peak pressure", plot::number(contact.patch->peak_pressure_MPa, 0), "MPa"},
      {"Patch width", plot::number(2 * half_width, 2), "mm"}};
  const double left = wide ? centre.x - radius : centre.x + radius + 4 * style.mm;
  const double right = body.right();
  double y = wide ? centre.y + radius + 5.5 * style.mm : letter.y + 5 * style.mm;
  for (const auto& row : rows) {
    if (y > body.bottom()) break;
    // A narrow page keeps the picture and leaves out what it has no room to say.
    const double words =
        canvas.measure(row[0], style.small()).width + canvas.measure(row[1], style.small(true)).width + 9 * style.mm;
    if (words > right - left) continue;
    plot::draw_text(canvas, {left, y}, row[0], style.small(), theme.ink);
    plot::draw_text(canvas, {right - 7 * style.mm, y}, row[1], style.small(true), theme.ink, Anchor::end);
    plot::draw_text(canvas, {right - 6 * style.mm, y}, row[2], style.small(), theme.quiet);
    y += 3.7 * style.mm;
  }
}

}  // namespace runband
