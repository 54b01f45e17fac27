// Both pairs of profiles where they touch; below, curvature, wear, or the figures that the trade reads off a profile.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "viewer/panels/frame.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

plot::Line curvature_line(const Profile& profile, const plot::Paint& paint, const std::string& label) {
  plot::Line line;
  line.paint = paint;
  line.label = label;
  const double convex = profile.kind == ProfileKind::wheel ? 1.0 : -1.0;
  for (const CurvePoint& p : sample_curve(*profile.curve, 0.002, 0.25)) {
    line.x.push_back(p.y());
    line.y.push_back(std::clamp(convex * p.curvature() * 1e3, -100.0, 100.0));
  }
  return line;
}

}  // namespace

void Frame::draw_profiles_sheet(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  const Desk::Place& place = desk_.now();
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.paper);
  }
  if (!place.solution || place.solution->locator == nullptr) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text(box.centre(), place.solution ? "One contact on the bench has no profiles." : "Solving…",
                ui_.body_font(), theme.quiet, plot::Anchor::middle, 0);
    return;
  }
  const Solution& solution = *place.solution;
  const Pairing& pairing = solution.locator->pairing();
  const double pad = ui_.px(20), gap = ui_.px(24);
  const std::vector<std::string> kinds{"Curvature", "Wear against S1002 and 60E1", "Readings"};
  ui_.tabs("profiles", {box.x + pad, box.y + ui_.px(26)}, kinds, profile_plot_);
  const double top = box.y + ui_.px(42), width = (box.width - 2 * pad - gap) / 2, height = box.height - ui_.px(54);
  const double upper = height * 0.56;
  for (const Side side : {Side::left, Side::right}) {
    const auto k = side == Side::left ? 0 : 1;
    const plot::Box column{box.x + pad + k * (width + gap), top, width, height};
    const std::string name = side_name(side);
    const Contact* contact = nullptr;
    for (const Contact& each : solution.contacts)
      if (each.zone.side == side && (contact == nullptr || each.zone.normal_force_N > contact->zone.normal_force_N))
        contact = &each;
    if (contact == nullptr) continue;
    plot::Plot section = section_plot(solution, contact->zone, theme);
    // Hatching is for paper; on a screen it would run through the words.
    for (plot::Area& area : section.areas) area.hatch_deg.reset();
    section.title = capitalised(name) + " wheel on " + name + " rail";
    section.equal_aspect = true;
    section.x.title = "from the track's centre line";
    section.y.title = "above the running surface";
    section.x.unit = section.y.unit = "mm";
    const double centre = pairing.track().gauge_mm / 2 + 32;
    section.x.range = plot::Range{centre - 72, centre + 72};
    section.y.range = plot::Range{-44, 44};
    for (const Contact& each : solution.contacts) {
      if (each.zone.side != side) continue;
      plot::Points dot;
      dot.x = {std::abs(each.zone.track_mm.y())};
      dot.y = {each.zone.track_mm.z()};
      dot.shape = each.zone.carries_load ? plot::Shape::dot : plot::Shape::ring;
      dot.paint = {plot::Ink::warning, 1, {}};
      dot.size = 1.8;
      section.points.push_back(std::move(dot));
      if (each.zone.carries_load)
        section.caption += (section.caption.empty() ? "" : "; ") + each.zone.zone + ", " +
                           plot::number(each.zone.normal_force_N * 1e-3, 0) + "\u2009kN, " +
                           plot::number(each.zone.contact_angle_rad * 180 / std::numbers::pi, 1) + "°";
    }
    // Where a profile has a problem, the place is marked on the drawing.
    const auto findings = [&](const Profile& profile) {
      for (const Finding& finding : profile.findings) {
        if (finding.first_row <= 0 && finding.at.isZero()) continue;
        const Vec2 p = profile.kind == ProfileKind::rail
                           ? pairing.mount(side).outward(finding.at)
                           : Vec2(finding.at.x() + std::abs(contact->zone.track_mm.y()) - contact->zone.wheel_y_mm,
                                  finding.at.y() + contact->zone.track_mm.z() - contact->zone.wheel_z_mm);
        plot::Points cross;
        cross.x = {p.x()};
        cross.y = {p.y()};
        cross.shape = plot::Shape::cross;
        cross.paint = {plot::Ink::warning, 1, {}};
        cross.size = 2;
        section.points.push_back(std::move(cross));
      }
    };
    findings(pairing.wheel(side));
    findings(pairing.rail(side));
    draw_live_plot("section/" + name, section, {column.x, column.y, column.width, upper});

    const plot::Box below{column.x, column.y + upper + ui_.px(8), column.width, height - upper - ui_.px(8)};
    if (profile_plot_ == 2) {
      // Figures of wheel and rail, with what was found.
      ui_.begin_area("readings/" + name, below, 0, 0);
      for (const Profile* profile : {&pairing.wheel(side), &pairing.rail(side)}) {
        ui_.heading(profile->kind == ProfileKind::wheel ? "WHEEL" : "RAIL");
        ui_.space(2);
        ui_.words(profile->title.empty() ? profile->origin : profile->title, ui_.note_font(), theme.quiet);
        for (const Quantity& q : describe_profile(*profile))
          ui_.value(name + "/" + (profile->kind == ProfileKind::wheel ? "wheel." : "rail.") + q.name, q.title,
                    plot::number(q.value, q.unit == "mm" ? 2 : 3), q.unit == "1" ? "" : q.unit, {}, q.from);
        if (profile->fit)
          ui_.value(name + (profile->kind == ProfileKind::wheel ? "/wheel" : "/rail") + ".residual",
                    "Points off the fitted curve, rms", plot::number(profile->fit->residual_rms_mm * 1e3, 1), "µm", {},
                    "Root mean square distance of the measured points from the curve.");
        for (const Finding& finding : profile->findings) ui_.caution({}, finding.text, false);
        ui_.space(10);
      }
      ui_.end_area();
      continue;
    }
    plot::Plot curve;
    curve.x.title = "profile ordinate, towards the field side";
    curve.x.unit = "mm";
    curve.x.range = plot::Range{-60, 60};
    if (profile_plot_ == 0) {
      curve.title = "Curvature, positive convex";
      curve.y.title = "curvature";
      curve.y.unit = "1/m";
      curve.lines.push_back(curvature_line(pairing.wheel(side), {plot::Ink::accent, 1, {}}, "wheel"));
      curve.lines.push_back(curvature_line(pairing.rail(side), {plot::Ink::ink, 1, {}}, "rail"));
      for (const Contact& each : solution.contacts)
        if (each.zone.side == side && each.zone.carries_load) {
          curve.posts.push_back({each.zone.wheel_y_mm, "on the wheel", {plot::Ink::accent, 1, {}}});
          curve.posts.push_back({each.zone.rail_y_mm, "on the rail", {plot::Ink::steel, 1, {}}});
        }
    } else {
      curve.title = "Missing against the reference profile";
      curve.y.title = "missing";
      curve.y.unit = "mm";
      const auto wear = [&](const Profile& profile, const Profile* reference, const plot::Paint& paint,
                            const std::string& label) {
        if (reference == nullptr) return;
        try {
          const Curve c = wear_against(profile, *reference);
          plot::Line line;
          line.x = c.x;
          line.y = c.y;
          line.paint = paint;
          line.label = label;
          curve.lines.push_back(std::move(line));
        } catch (const Error&) {
          // Profiles that do not overlap have no wear to show.
        }
      };
      wear(pairing.wheel(side), reference_for(ProfileKind::wheel), {plot::Ink::accent, 1, {}}, "wheel");
      wear(pairing.rail(side), reference_for(ProfileKind::rail), {plot::Ink::ink, 1, {}}, "rail");
      if (curve.lines.empty()) {
        ScreenCanvas canvas = ui_.canvas();
        canvas.text(below.centre(), "No reference profile could be read.", ui_.body_font(), theme.quiet,
                    plot::Anchor::middle, 0);
        continue;
      }
    }
    draw_live_plot("below/" + std::to_string(profile_plot_) + "/" + name, curve, below);
  }
}

const Profile* Frame::reference_for(ProfileKind kind) {
  auto& kept = references_[kind == ProfileKind::wheel ? 0 : 1];
  if (!kept.first) {
    kept.first = true;
    try {
      kept.second = load_profile(kind == ProfileKind::wheel ? "standard:S1002" : "standard:60E1", kind);
    } catch (const Error& problem) {
      desk_.say(problem.message(), true);
    }
  }
  return kept.second.get();
}

}  // namespace runband
