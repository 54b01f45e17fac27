// The ruler along the bottom: the pointer is the wheelset.
#include <imgui.h>

#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"

namespace runband {

namespace {

struct Shown {
  const char* key;
  const char* words;
  const char* unit;
};
constexpr Shown kShown[] = {{"rolling_radius_difference", "rolling radius difference", "mm"},
                            {"contact_angle", "contact angle", "°"},
                            {"wheel_y", "contact on the wheel", "mm"},
                            {"rail_y", "contact on the rail", "mm"},
                            {"roll", "roll", "mrad"}};

plot::Line broken(const Traverse& t, const std::vector<double>& y, const Side* side, const plot::Paint& paint,
                  const std::string& label) {
  plot::Line line;
  line.paint = paint;
  line.label = label;
  for (std::size_t i = 0; i < y.size(); ++i) {
    if (i > 0)
      for (const ContactJump& jump : t.jumps)
        if ((side == nullptr || jump.side == *side) && jump.lateral_mm > t.lateral_mm[i - 1] &&
            jump.lateral_mm <= t.lateral_mm[i]) {
          line.x.push_back(jump.lateral_mm);
          line.y.push_back(std::nan(""));
          break;
        }
    line.x.push_back(t.lateral_mm[i]);
    line.y.push_back(y[i]);
  }
  return line;
}

void add_lines(plot::Plot& p, const Traverse& t, const std::string& key, double opacity, plot::Dash dash, bool labels) {
  static const Side kLeft = Side::left, kRight = Side::right;
  const std::size_t first = p.lines.size();
  const plot::Paint blue{plot::Ink::accent, opacity, {}}, ink{plot::Ink::ink, opacity, {}};
  const auto pair = [&](const std::vector<double>& left, const std::vector<double>& right) {
    p.lines.push_back(broken(t, left, &kLeft, blue, labels ? "left" : ""));
    p.lines.push_back(broken(t, right, &kRight, ink, labels ? "right" : ""));
  };
  if (key == "contact_angle")
    pair(t.left.contact_angle_deg, t.right.contact_angle_deg);
  else if (key == "wheel_y")
    pair(t.left.wheel_y_mm, t.right.wheel_y_mm);
  else if (key == "rail_y")
    pair(t.left.rail_y_mm, t.right.rail_y_mm);
  else if (key == "roll")
    p.lines.push_back(broken(t, t.roll_mrad, nullptr, blue, ""));
  else
    p.lines.push_back(broken(t, t.rolling_radius_difference_mm, nullptr, blue, ""));
  for (std::size_t k = first; k < p.lines.size(); ++k) p.lines[k].dash = dash;
}

}  // namespace

void Frame::draw_strip(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  const plot::Style style = screen_style(screen_.scale());
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.sheet);
  }
  const Desk::Place& place = desk_.now();
  double size = desk_.layout().strip;
  const auto divider = [&] {
    if (ui_.splitter("split/strip", {box.x, box.y - ui_.px(3), box.width, ui_.px(6)}, false, true, size, 110, 700))
      desk_.layout().strip = size;
  };
  if (!place.traverse || place.traverse->lateral_mm.size() < 2) {
    ScreenCanvas canvas = ui_.canvas();
    const bool bench = place.used && place.document.current().bench.has_value();
    canvas.text(box.centre(),
                bench           ? "One contact on the bench: there is no wheelset to move."
                : place.failure ? ""
                                : "Looking for contact across the track…",
                ui_.body_font(), theme.quiet, plot::Anchor::middle, 0);
    divider();
    return;
  }
  const Traverse& t = *place.traverse;
  const Case& c = place.document.current();
  const double y_now = c.state.lateral_mm.front();

  // Words at the left of the strip: what the curve is; play; A and B.
  const double left_room = ui_.px(196);
  ui_.set_column({box.x + ui_.px(24), box.y, left_room - ui_.px(34), box.height});
  ui_.set_y(box.y + ui_.px(16));
  ui_.heading("ACROSS THE TRACK");
  ui_.space(3);
  for (const Shown& shown : kShown) {
    const bool chosen = desk_.view().curve == shown.key;
    if (ui_.y() + ui_.px(24) > box.bottom() - ui_.px(30)) break;
    if (ui_.button_at(std::string("strip/") + shown.key, {ui_.column().x, ui_.y() + ui_.px(16)},
                      capitalised(shown.words), plot::Anchor::start, {}, true, chosen, ui_.body_font(chosen)))
      desk_.edit_view("Show another curve", "", [&](View& v) { v.curve = shown.key; });
    ui_.space(24);
  }
  if (ui_.button_at("play", {ui_.column().x, box.bottom() - ui_.px(16)}, desk_.playing() ? "Stop" : "Play",
                    plot::Anchor::start, "The wheelset sways across the track (space bar).", true, false,
                    ui_.body_font(true)))
    desk_.play(!desk_.playing());
  if (ui_.button_at("centre", {ui_.column().x + ui_.px(52), box.bottom() - ui_.px(16)}, "Centre", plot::Anchor::start,
                    "Lateral displacement and yaw become zero (0).", true, false, ui_.body_font()))
    desk_.actions().run("case.centre");

  const Shown* shown = &kShown[0];
  for (const Shown& each : kShown)
    if (desk_.view().curve == each.key) shown = &each;
  plot::Plot p;
  p.x.title = "lateral displacement at ";
  p.x.title += t.asked.state.reference == LateralReference::axle ? "the axle" : "rail level";
  p.x.unit = "mm";
  p.y.title = shown->words;
  p.y.unit = shown->unit;
  const double reach = std::ceil(std::max(-t.lateral_mm.front(), t.lateral_mm.back()));
  p.x.range = plot::Range{-reach, reach};
  if (desk_.two()) {
    const auto& other = desk_.place(1 - desk_.active()).traverse;
    if (other) add_lines(p, *other, shown->key, 0.55, plot::Dash::dashed, false);
  }
  add_lines(p, t, shown->key, 1, plot::Dash::solid, true);
  for (const ContactJump& jump : t.jumps) p.posts.push_back({jump.lateral_mm, "", {plot::Ink::warning, 1, {}}});
  p.pointer = plot::Pointer{std::clamp(y_now, -reach, reach), plot::number(y_now, 2)};

  const plot::Box area{box.x + left_room, box.y + ui_.px(14), box.width - left_room - ui_.px(28),
                       box.height - ui_.px(20)};
  const Grip grip = ui_.grip("strip", {area.x, box.y, area.width, box.height});
  plot::Frame frame;
  {
    ScreenCanvas canvas = ui_.canvas();
    frame = plot::draw_plot(p, area, canvas, theme, style);
    if (!t.jumps.empty())
      canvas.text({frame.data.x, area.bottom() - ui_.px(2)}, "red: the contact jumps", {ui_.px(kLabelSize), false, 0},
                  theme.warning, plot::Anchor::start, 0);
  }
  if (grip.hovered || grip.held) ImGui::SetMouseCursor(ImGuiMouseCursor_Hand);
  if (grip.held) {
    desk_.play(false);
    const double wanted = std::clamp(frame.value(grip.at).x, -reach, reach);
    const double rounded = std::round(wanted * 100) / 100;
    desk_.edit("Move the wheelset", "state.lateral", [&](Case& e) { e.state.lateral_mm.assign(1, rounded); });
  }
  if (grip.hovered && ImGui::GetIO().MouseWheel != 0) {
    const double step = ImGui::GetIO().KeyShift ? 0.01 : 0.1;
    const double wanted = std::clamp(
        std::round((y_now + step * static_cast<double>(ImGui::GetIO().MouseWheel)) / step) * step, -reach, reach);
    desk_.edit("Move the wheelset", "wheel.lateral", [&](Case& e) { e.state.lateral_mm.assign(1, wanted); });
  }
  if (grip.hovered && !grip.held && frame.data.contains(grip.at)) {
    // What the curve says here, without going there.
    const double x = frame.value(grip.at).x;
    std::string words = plot::number(x, 2) + "\u2009mm";
    for (const plot::Line& line : p.lines) {
      for (std::size_t i = 0; i + 1 < line.x.size(); ++i) {
        if (line.x[i] > x || line.x[i + 1] <= x || std::isnan(line.y[i]) || std::isnan(line.y[i + 1])) continue;
        const double y = std::lerp(line.y[i], line.y[i + 1], (x - line.x[i]) / (line.x[i + 1] - line.x[i]));
        words += (line.label.empty() ? std::string("   ") : "   " + line.label + " ") + plot::number(y, 3);
      }
    }
    words += std::string(" ") + shown->unit;
    ScreenCanvas canvas = ui_.canvas();
    canvas.number({frame.data.right(), frame.data.y - ui_.px(1)}, words, ui_.note_font(), theme.quiet,
                  plot::Anchor::end);
    const plot::Point post[] = {{grip.at.x, frame.data.y + ui_.px(4)}, {grip.at.x, frame.data.bottom()}};
    canvas.line(post, {plot::with_opacity(theme.steel, 0.5), 1, plot::Dash::dotted}, false);
  }
  divider();
}

}  // namespace runband
