#include "viewer/plates/profile_plate.h"

#include <algorithm>

#include "core/base/version.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

plot::Line outline_of(const Profile& profile) {
  plot::Line line;
  for (const CurvePoint& p : sample_curve(*profile.curve, 0.01)) {
    line.x.push_back(p.y());
    line.y.push_back(p.z());
  }
  return line;
}

}  // namespace

void draw_profile(const Profile& profile, const Profile* reference, const std::filesystem::path& out) {
  const plot::Theme& theme = plot::theme(plot::ThemeName::paper);
  const plot::Style style;
  plot::PictureOptions options;
  options.ground = theme.paper;
  options.title = profile.title;
  plot::Plot shape;
  shape.title = profile.kind == ProfileKind::wheel ? "Wheel profile" : "Rail profile";
  shape.x.title = profile.kind == ProfileKind::wheel ? "from the running circle, towards the field side"
                                                     : "from the head's centre, towards the field side";
  shape.x.unit = shape.y.unit = "mm";
  shape.y.title = "height";
  shape.equal_aspect = true;
  if (reference != nullptr) {
    plot::Line line = outline_of(*reference);
    line.paint = {plot::Ink::steel, 1, {}};
    line.dash = plot::Dash::dashed;
    line.weight = plot::Weight::fine;
    shape.lines.push_back(std::move(line));
  }
  shape.lines.push_back(outline_of(profile));
  plot::Range y_range = plot::empty_range();
  for (const double y : shape.lines.back().x) y_range.include(y);

  plot::Plot below;
  below.x.title = shape.x.title;
  below.x.unit = "mm";
  below.x.range = y_range;
  plot::Line line;
  line.paint = {plot::Ink::accent, 1, {}};
  if (reference != nullptr) {
    below.title = "Wear against " + reference->title;
    below.y.unit = "mm";
    const Curve wear = wear_against(profile, *reference);
    line.x = wear.x;
    line.y = wear.y;
  } else {
    below.title = "Curvature, positive convex";
    below.y.unit = "1/m";
    const double convex = profile.kind == ProfileKind::wheel ? 1.0 : -1.0;
    for (const CurvePoint& p : sample_curve(*profile.curve, 0.001, 0.25)) {
      line.x.push_back(p.y());
      line.y.push_back(std::clamp(convex * p.curvature() * 1e3, -120.0, 120.0));
    }
  }
  below.lines.push_back(std::move(line));
  plot::write_picture(out, options, [&](plot::Canvas& canvas) {
    TitleBlock block;
    block.title = profile.title;
    block.left = {profile.source.empty() ? profile.origin : profile.source};
    block.right = {profile.origin, std::string("Runband ") + version() + ", file " + profile.checksum.substr(0, 10)};
    const plot::Box body = draw_title_block(block, canvas, theme, style);
    plot::draw_plot(shape, {body.x, body.y, body.width, body.height * 0.6}, canvas, theme, style);
    plot::draw_plot(below, {body.x, body.y + body.height * 0.64, body.width, body.height * 0.36}, canvas, theme, style);
  });
}

}  // namespace runband
