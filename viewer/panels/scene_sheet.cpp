// The scene in true scale and place, with its detail view, colour bar and probe.
#include <imgui.h>

#include <algorithm>
#include <cmath>

#include "viewer/panels/detail.h"
#include "viewer/panels/frame.h"
#include "viewer/panels/overlay.h"
#include "viewer/plates/sheet.h"

namespace runband {

SceneLook scene_look(const Desk& desk, const Solution& solution, double line_px) {
  const View& view = desk.view();
  SceneLook look;
  look.theme = desk.layout().theme;
  look.wheel_opacity = view.wheel_opacity;
  look.section_cut = view.section_cut;
  look.field = view.field;
  look.steps = view.steps;
  look.line_px = line_px;
  look.contact = desk.contact_of(solution).value_or(0);
  const ShownField shown = shown_field(desk, solution);
  look.map = shown.map;
  look.range = shown.range;
  return look;
}

void Frame::draw_scene_sheet(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  const Desk::Place& place = desk_.now();
  const View& view = desk_.view();
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.scene);
  }
  if (!place.solution) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text(box.centre(), place.failure ? "There is no solution to show." : "Solving…", ui_.body_font(),
                theme.quiet, plot::Anchor::middle, 0);
    return;
  }
  const Solution& solution = *place.solution;
  const auto index = desk_.contact_of(solution);
  const bool wheelset = solution.locator != nullptr;
  const bool moving = screen_.seconds() - last_input_s_ < 0.15 || desk_.playing();
  if (wheelset) {
    if (!scene_) scene_ = std::make_unique<LiveScene>();
    scene_->show(place.solution, scene_look(desk_, solution, std::max(1.0, screen_.scale())));
    const unsigned int texture = scene_->draw(static_cast<int>(box.width), static_cast<int>(box.height), !moving);
    if (texture != 0) {
      ScreenCanvas canvas = ui_.canvas();
      canvas.texture(box, texture, true);
    }
  }

  // The pointer: drag turns, with shift or the middle button moves, the wheel comes nearer to what is under it.
  const Grip grip = ui_.grip("scene", box);
  const ImGuiIO& io = ImGui::GetIO();
  const plot::Point local{grip.at.x - box.x, grip.at.y - box.y};
  const SceneOverlay overlay = layout_overlay(desk_, solution, scene_.get(), box, ui_.px(1));
  const bool over_detail = overlay.detail && overlay.detail->contains(grip.at);
  if (wheelset) {
    if (grip.held && view.detail == DetailStyle::relief && detail_held_) {
      relief_turn_deg_ += grip.dx * 0.5;
      relief_tilt_deg_ = std::clamp(relief_tilt_deg_ + grip.dy * 0.4, 8.0, 88.0);
    } else if (grip.held && !detail_held_) {
      if (io.KeyShift)
        scene_->pan(grip.dx, grip.dy);
      else
        scene_->orbit(grip.dx, grip.dy);
      if (grip.dx != 0 || grip.dy != 0) needs_frame_ = true;
    }
    if (grip.hovered && (io.MouseDown[1] || io.MouseDown[2])) {
      scene_->pan(static_cast<double>(io.MouseDelta.x), static_cast<double>(io.MouseDelta.y));
      needs_frame_ = true;
    }
    if (grip.hovered && io.MouseWheel != 0 && !over_detail) {
      scene_->zoom_to(local.x, local.y, std::pow(1.15, static_cast<double>(io.MouseWheel)));
      needs_frame_ = true;
    }
    if (grip.double_clicked && !over_detail) scene_->look_from(NamedView::home);
  }
  if (grip.pressed) {
    detail_held_ = over_detail;
    pressed_at_ = grip.at;
  }

  // What lies over the scene.
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.push_clip(plot::corners(box));
    draw_overlay(desk_, solution, overlay, relief_turn_deg_, relief_tilt_deg_, canvas, theme,
                 screen_style(screen_.scale()));
    if (desk_.behind(desk_.active()) && screen_.seconds() - place.solved_at_s > 0.2) {
      // A stale part fades slightly, and says which state it shows.
      canvas.polygon(plot::corners(box), plot::with_opacity(theme.scene, 0.25));
      canvas.text({box.x + box.width / 2, box.y + ui_.px(28)}, "shows " + short_state(solution.asked), ui_.note_font(),
                  theme.warning, plot::Anchor::middle, 0);
    }
    canvas.pop_clip();
  }

  // Probe: on the detail view, or on a patch in the scene.
  if (index && grip.hovered) {
    std::optional<plot::Point> where;
    std::size_t contact_index = *index;
    if (over_detail && view.detail == DetailStyle::flat) {
      where = overlay.detail->value(grip.at);
    } else if (wheelset && !over_detail && !grip.held) {
      const Picked picked = scene_->pick_patch(local.x, local.y);
      if (picked.what == Picked::What::patch) {
        where = plot::Point{picked.x_mm, picked.s_mm};
        contact_index = picked.contact;
      }
    }
    if (where) {
      probed_ = probe(desk_, solution.contacts[contact_index], where->x, where->y);
      if (probed_) {
        probed_->at = grip.at;
        const bool clicked =
            grip.released && std::hypot(grip.at.x - pressed_at_.x, grip.at.y - pressed_at_.y) < ui_.px(4);
        if (clicked) {
          Pin pin{desk_.active(),       probed_->contact,           probed_->x_mm, probed_->s_mm, view.field,
                  probed_->field_words, short_state(solution.asked)};
          desk_.edit_view("Set a pin", "", [&](View& v) { v.pins.push_back(pin); });
        }
      }
    }
    if (probed_ && !grip.held) draw_probe(box);
  }

  // Words along the top right: views; and below the detail: what the patch shows.
  double x = box.right() - ui_.px(16);
  const std::pair<const char*, const char*> words[] = {
      {"view.right_contact", "Right"}, {"view.left_contact", "Left"}, {"view.along_rail", "Along"}, {"view.top", "Top"},
      {"view.side", "Side"},           {"view.front", "Front"},       {"view.home", "Home"}};
  if (wheelset && box.width > ui_.px(460)) {
    for (const auto& [id, name] : words) {
      const Action* action = desk_.actions().find(id);
      if (ui_.button_at(id, {x, box.y + ui_.px(24)}, name, plot::Anchor::end,
                        action->words + " (" + action->chord.words() + ")", true, false, ui_.note_font()))
        desk_.actions().run(id);
      x -= ui_.canvas().measure(name, ui_.note_font()).width + ui_.px(16);
    }
  }
  // Field: one choice at the foot, beside the colour bar.
  const plot::Box column = ui_.column();
  const double width = std::min(ui_.px(300), box.width - ui_.px(40));
  ui_.set_column({box.x + ui_.px(24), box.y, width, box.height});
  ui_.set_y(box.bottom() - ui_.px(96));
  const auto all = desk_.fields();
  std::vector<std::string> titles;
  int chosen = -1;
  for (std::size_t k = 0; k < all.size(); ++k) {
    titles.push_back(all[k].second);
    if (all[k].first == view.field) chosen = static_cast<int>(k);
  }
  if (ui_.choice("field", "Shows", titles, chosen, "What colours the patch (F).") && chosen >= 0)
    desk_.edit_view("Show another field", "", [&](View& v) {
      v.field = all[static_cast<std::size_t>(chosen)].first;
      v.locked_range.reset();
    });
  const double baseline = box.bottom() - ui_.px(14);
  double bx = box.right() - ui_.px(16);
  const auto word = [&](const char* id, const std::string& name, bool on) {
    const Action* action = desk_.actions().find(id);
    if (bx - ui_.canvas().measure(name, ui_.note_font()).width < box.x + width + ui_.px(60)) return;
    if (ui_.button_at(id, {bx, baseline}, name, plot::Anchor::end, action->words + " (" + action->chord.words() + ")",
                      true, on, ui_.note_font()))
      desk_.actions().run(id);
    bx -= ui_.canvas().measure(name, ui_.note_font()).width + ui_.px(16);
  };
  word("view.steps", "Steps", view.steps > 0);
  word("view.lock_range", "Lock range", view.locked_range.has_value());
  if (wheelset) {
    word("view.section", "Cut", view.section_cut);
    word("view.glass", "Glass", view.wheel_opacity < 0.9);
  }
  word("view.detail", view.detail == DetailStyle::relief ? "Relief" : "Detail", view.detail != DetailStyle::hidden);
  ui_.set_column(column);
}

void Frame::draw_probe(const plot::Box& within) {
  const Probed& probed = *probed_;
  ScreenCanvas canvas{screen_, ImGui::GetForegroundDrawList(), screen_.page()};
  const plot::Theme& theme = desk_.theme();
  const plot::Font note = ui_.note_font();
  double name_width = 0, number_width = 0, unit_width = 0;
  for (const auto& row : probed.rows) {
    name_width = std::max(name_width, canvas.measure(row[0], note).width);
    number_width = std::max(number_width, canvas.number_width(row[1], note));
    unit_width = std::max(unit_width, canvas.measure(row[2], note).width);
  }
  const double line = ui_.px(18);
  const double width = name_width + number_width + unit_width + ui_.px(46);
  plot::Box note_box{probed.at.x + ui_.px(16), probed.at.y + ui_.px(16), width,
                     line * static_cast<double>(probed.rows.size() + 1) + ui_.px(16)};
  if (note_box.right() > within.right()) note_box.x = probed.at.x - ui_.px(12) - width;
  if (note_box.bottom() > within.bottom())
    note_box.y = std::max(within.y + ui_.px(4), within.bottom() - note_box.height - ui_.px(4));
  canvas.polygon(plot::corners(note_box), plot::with_opacity(theme.sheet, 0.97));
  canvas.line(plot::corners(note_box), {theme.rule, 1, plot::Dash::solid}, true);
  double y = note_box.y + ui_.px(18);
  for (const auto& row : probed.rows) {
    canvas.text({note_box.x + ui_.px(10), y}, row[0], note, theme.ink, plot::Anchor::start, 0);
    canvas.number({note_box.right() - unit_width - ui_.px(17), y}, row[1], note, theme.ink, plot::Anchor::end);
    canvas.text({note_box.right() - unit_width - ui_.px(10), y}, row[2], note, theme.quiet, plot::Anchor::start, 0);
    y += line;
  }
  canvas.text({note_box.x + ui_.px(10), y + ui_.px(2)}, "click to pin", {ui_.px(kLabelSize), false, 0}, theme.quiet,
              plot::Anchor::start, 0);
}

}  // namespace runband
