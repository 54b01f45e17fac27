// The wheelset on its rails in three dimensions, with the patch enlarged as a drawing's detail view.
#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "viewer/plates/sheet.h"
#include "viewer/scene/scene_picture.h"

namespace runband {

using plot::Anchor;
using plot::Box;
using plot::Point;

namespace {

void draw_detail(const Contact& contact, Point centre, double radius, double scale, double highest,
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
  p.x.range = plot::Range{-reach, reach};
  p.y.range = plot::Range{-reach, reach};
  p.maps.push_back(pressure_map(contact, highest));
  if (contact.zone.ellipse) {
    p.lines.push_back(ellipse_line(*contact.zone.ellipse));
    if (contact.patch->method == PatchMethod::half_space) p.lines.back().dash = plot::Dash::dashed;
  }
  // Only what is inside the ring: the axes of a plot would cross it.
  plot::draw_plot(p, {centre.x - radius * 1.5, centre.y - radius * 1.5, 3 * radius, 3 * radius}, canvas, theme, style,
                  plot::Margins{});
  const double disc = 5.0 * scale;
  const Point at{centre.x, centre.y + radius - disc - 2.5 * style.mm};
  if (at.y - disc > centre.y + (contact.zone.ellipse ? contact.zone.ellipse->semi_axis_across_mm : 3.0) * scale) {
    canvas.line(plot::circle(at, disc), {theme.quiet, style.fine, plot::Dash::dashed}, true);
    plot::draw_text(canvas, {at.x, at.y + 0.9 * style.mm}, "10\u2009mm", style.small(), theme.quiet, Anchor::middle);
  }
  canvas.pop_clip();
  canvas.line(ring, {theme.ink, style.bold, plot::Dash::solid}, true);
}

}  // namespace

void draw_scene_plate(const Solution& solution, const Plate& plate, const std::filesystem::path& out) {
  if (solution.asked.bench)
    throw InputError(ErrorCode::conflicting_keys, "draw: a bench case has no wheelset to show.", "use --plate patch.");
  const std::size_t index = hardest_contact(solution, plate.contact);
  if (out.extension() == ".glb") return write_scene_glb(solution, out);
  if (plot::picture_kind(out) != plot::PictureKind::png) {
    throw InputError(ErrorCode::bad_option, out.string() + ": a scene is drawn as .png or .glb.",
                     "name a file with one of these endings.");
  }
  const plot::PictureOptions options = picture_options(plate, solution.asked);
  const auto [width, height] = plot::pixels_of(options);
  const double px_per_mm = plate.dpi / 25.4;
  const Contact& contact = solution.contacts[index];
  const ScenePicture scene = draw_scene(solution, {width, height, px_per_mm, plate.theme, plate.transparent, index});
  const plot::Theme& theme = plot::theme(plate.theme);
  double highest = 0;
  for (const Contact& c : solution.contacts)
    if (c.patch) highest = std::max(highest, c.patch->peak_pressure_MPa);

  const std::string bytes = plot::picture_over(scene.image, options, [&](plot::Canvas& canvas) {
    const plot::Style style;
    const Box page = canvas.page();
    // The title block stands on paper, not on the scene.
    const double foot = 18.5 * style.mm;
    if (!plate.transparent)
      canvas.polygon(plot::corners({page.x - 1, page.bottom() - foot, page.width + 2, foot + 1}), theme.paper);
    const Box body = draw_title_block(title_block(solution.asked, plate, state_text(solution)), canvas, theme, style);
    const double radius = std::min(body.width * 0.19, body.height * 0.33);
    const Point centre{body.x + radius + 2 * style.mm, body.y + radius + 2 * style.mm};
    const Point at{scene.contact_px.x / px_per_mm, scene.contact_px.y / px_per_mm};
    const double half = contact.zone.ellipse ? std::max(contact.zone.ellipse->semi_axis_rolling_mm,
                                                        contact.zone.ellipse->semi_axis_across_mm)
                                             : 6.0;
    const double scale = plot::drawing_scale(radius / (1.35 * half));
    const double mark = std::max(4.0 * style.mm, 1.5 * half * scene.px_per_mm / px_per_mm);
    const double dx = centre.x - at.x, dy = centre.y - at.y, distance = std::hypot(dx, dy);
    canvas.line(plot::circle(at, mark), {theme.ink, style.bold, plot::Dash::solid}, true);
    plot::draw_line(canvas, {at.x + dx / distance * mark, at.y + dy / distance * mark},
                    {centre.x - dx / distance * radius, centre.y - dy / distance * radius},
                    {theme.ink, style.fine, plot::Dash::solid});
    draw_detail(contact, centre, radius, scale, highest, canvas, theme, style);
    const std::string mark_letter = detail_letter(contact);
    // Inside the ring, where nothing of the scene runs through the words.
    const std::string about = plot::scale_text(scale) + "   " + contact_label(contact);
    const double words = canvas.measure(mark_letter, style.normal(true)).width + 1.5 * style.mm +
                         canvas.measure(about, style.small()).width;
    const Point letter{centre.x - words / 2, centre.y - 0.62 * radius};
    plot::draw_text(canvas, letter, mark_letter, style.normal(true), theme.ink);
    plot::draw_text(canvas,
                    {letter.x + canvas.measure(mark_letter, style.normal(true)).width + 1.5 * style.mm, letter.y},
                    about, style.small(), theme.quiet);
    const Box bar{body.x, page.bottom() - foot - 12 * style.mm, std::min(70 * style.mm, body.width * 0.4),
                  9.5 * style.mm};
    plot::draw_colour_bar(bar, plot::ColourMap::ember, {0, highest}, "contact pressure", "MPa", canvas, theme, style);
  });
  write_file(out, bytes);
}

}  // namespace runband
