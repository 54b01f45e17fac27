// The controls: buttons that are words, hair-line sliders, choices, fields of text.
#include <imgui.h>
#include <imgui_internal.h>
#include <imgui_stdlib.h>

#include <algorithm>
#include <charconv>
#include <cmath>

#include "viewer/window/widgets.h"

namespace runband {

namespace {

ImVec2 at(double x, double y) { return {static_cast<float>(x), static_cast<float>(y)}; }

constexpr ImGuiWindowFlags kDropDown =
    ImGuiWindowFlags_NoTitleBar | ImGuiWindowFlags_NoResize | ImGuiWindowFlags_NoCollapse | ImGuiWindowFlags_NoMove |
    ImGuiWindowFlags_NoSavedSettings | ImGuiWindowFlags_NoBackground | ImGuiWindowFlags_NoNav;

}  // namespace

bool Ui::button_at(const std::string& id, plot::Point baseline, const std::string& words, plot::Anchor anchor,
                   const std::string& help, bool enabled, bool chosen, std::optional<plot::Font> font) {
  const plot::Font face = font.value_or(body_font(true));
  double width = 0;
  { width = canvas().measure(words, face).width; }
  double x = baseline.x;
  if (anchor == plot::Anchor::middle) x -= width / 2;
  if (anchor == plot::Anchor::end) x -= width;
  const plot::Box box{x - px(4), baseline.y - face.size - px(4), width + px(8), face.size + px(12)};
  const Item it = item(id, box, enabled);
  const plot::Colour colour = !enabled     ? plot::mix(theme_->quiet, theme_->paper, 0.45)
                              : it.hovered ? theme_->ink
                              : chosen     ? theme_->ink
                                           : theme_->accent;
  ScreenCanvas c = canvas();
  c.text({x, baseline.y}, words, face, colour, plot::Anchor::start, 0);
  if (chosen || (it.hovered && enabled)) {
    const double line_y = std::round(baseline.y + px(5));
    const plot::Point line[] = {{x, line_y}, {x + width, line_y}};
    c.line(line, {chosen ? theme_->accent : theme_->rule, chosen ? px(1.6) : px(1), plot::Dash::solid}, false);
  }
  if (it.hovered && enabled) ImGui::SetMouseCursor(ImGuiMouseCursor_Hand);
  help_for(it, help);
  return enabled && (it.clicked || it.entered);
}

bool Ui::button(const std::string& id, const std::string& words, const std::string& help, bool enabled, bool strong) {
  const bool pressed =
      button_at(id, {column_.x, y_ + px(16)}, words, plot::Anchor::start, help, enabled, false, body_font(strong));
  y_ += px(26);
  return pressed;
}

bool Ui::check(const std::string& id, const std::string& words, bool& on, const std::string& help, bool enabled) {
  const double size = px(11);
  double width = 0;
  width = canvas().measure(words, body_font()).width;
  const plot::Box row{column_.x, y_, std::min(column_.width, width + size + px(16)), px(24)};
  const Item it = item(id, row, enabled);
  const plot::Box box{std::round(column_.x), std::round(y_ + px(7)), size, size};
  ScreenCanvas c = canvas();
  if (on && enabled) {
    c.polygon(plot::corners(box), theme_->accent);
    const plot::Point tick[] = {{box.x + size * 0.22, box.y + size * 0.52},
                                {box.x + size * 0.43, box.y + size * 0.74},
                                {box.x + size * 0.80, box.y + size * 0.26}};
    c.line(tick, {theme_->paper, px(1.4), plot::Dash::solid}, false);
  } else {
    c.line(plot::corners(box), {it.hovered ? theme_->ink : theme_->steel, 1, plot::Dash::solid}, true);
  }
  c.text({box.right() + px(10), y_ + px(17)}, words, body_font(), on && enabled ? theme_->ink : theme_->quiet,
         plot::Anchor::start, 0);
  if (it.hovered && enabled) ImGui::SetMouseCursor(ImGuiMouseCursor_Hand);
  help_for(it, help);
  y_ += px(24);
  if (!enabled || !(it.clicked || it.entered)) return false;
  on = !on;
  return true;
}

Change Ui::typed(const std::string& id, const plot::Box& box, double& value, const plot::Range& range, int decimals) {
  (void)decimals;
  ImGui::SetCursorScreenPos(at(box.x, box.y));
  ImGui::SetNextItemWidth(static_cast<float>(box.width));
  ImGui::PushFont(screen_.font(px(kBodySize), false));
  {
    ScreenCanvas c = canvas();
    c.polygon(plot::corners(box), theme_->sheet);
    const plot::Point under[] = {{box.x, box.bottom()}, {box.right(), box.bottom()}};
    c.line(under, {theme_->accent, px(1), plot::Dash::solid}, false);
  }
  if (typing_fresh_) ImGui::SetKeyboardFocusHere();
  const bool entered = ImGui::InputText((id + "/typed").c_str(), &typing_text_,
                                        ImGuiInputTextFlags_EnterReturnsTrue | ImGuiInputTextFlags_AutoSelectAll);
  const bool left = !typing_fresh_ && ImGui::IsItemDeactivated();
  ImGui::PopFont();
  typing_fresh_ = false;
  if (!entered && !left) return Change::none;
  typing_id_.clear();
  // Comma or point, true minus or hyphen, blanks between groups.
  std::string text;
  for (std::size_t i = 0; i < typing_text_.size(); ++i) {
    const char ch = typing_text_[i];
    if (typing_text_.compare(i, 3, "\u2212") == 0) {
      text += '-';
      i += 2;
    } else if (ch == ',') {
      text += '.';
    } else if (ch != ' ' && static_cast<unsigned char>(ch) < 0x80) {
      text += ch;
    }
  }
  const char* first = text.data() + (text.starts_with('+') ? 1 : 0);
  double read = 0;
  const auto [end, error] = std::from_chars(first, text.data() + text.size(), read);
  if (error != std::errc() || end != text.data() + text.size() || !std::isfinite(read)) return Change::none;
  value = std::clamp(read, range.low, range.high);
  return Change::done;
}

Change Ui::slider(const std::string& id, const std::string& name, double& value, const plot::Range& range, int decimals,
                  const std::string& unit, const std::string& help) {
  const double unit_room = px(36);
  const double baseline = y_ + px(14);
  const plot::Box number_box{column_.x + column_.width - unit_room - px(86), y_, px(86), px(19)};
  const double line_y = std::round(y_ + px(28));
  const plot::Box track{column_.x, line_y - px(8), column_.width, px(16)};
  Change change = Change::none;

  if (typing_id_ == id) {
    change = typed(id, number_box, value, range, decimals);
  } else {
    const Item number_item = item(id + "/number", number_box, false);
    if (number_item.hovered) ImGui::SetMouseCursor(ImGuiMouseCursor_TextInput);
    if (number_item.clicked) {
      typing_id_ = id;
      typing_fresh_ = true;
      typing_text_ = plot::number(value, decimals);
    }
  }
  const Item it = item(id, track, true);
  if (it.entered && change == Change::none && typing_id_.empty()) {
    typing_id_ = id;
    typing_fresh_ = true;
    typing_text_ = plot::number(value, decimals);
  }
  const double grain = std::pow(10.0, -decimals);
  if (it.held) {
    const double t = (static_cast<double>(ImGui::GetIO().MousePos.x) - track.x) / track.width;
    const double wanted =
        std::round(std::clamp(std::lerp(range.low, range.high, t), range.low, range.high) / grain) * grain;
    if (wanted != value) {
      value = wanted;
      change = Change::changing;
    }
  }
  if (it.released) change = Change::done;
  if (it.step != 0) {
    const double step = std::max(grain, std::pow(10.0, std::floor(std::log10(range.span() / 100))));
    value = std::clamp(value + it.step * step, range.low, range.high);
    change = Change::done;
  }
  if (it.hovered || it.held) ImGui::SetMouseCursor(ImGuiMouseCursor_Hand);

  ScreenCanvas c = canvas();
  c.text({column_.x, baseline}, name, body_font(), theme_->ink, plot::Anchor::start, 0);
  if (typing_id_ != id)
    c.number({column_.x + column_.width - unit_room, baseline}, plot::number(value, decimals), body_font(true),
             theme_->ink, plot::Anchor::end);
  c.text({column_.x + column_.width - unit_room + px(7), baseline}, unit, note_font(), theme_->quiet,
         plot::Anchor::start, 0);
  const double shown = std::clamp(value, range.low, range.high);
  const double x = track.x + (shown - range.low) / range.span() * track.width;
  // Signed ranges are measured from their zero.
  const double zero = range.low < 0 && range.high > 0 ? track.x - range.low / range.span() * track.width : track.x;
  const plot::Point whole[] = {{track.x, line_y}, {track.x + track.width, line_y}};
  const plot::Point part[] = {{zero, line_y}, {x, line_y}};
  c.line(whole, {theme_->rule, px(1.4), plot::Dash::solid}, false);
  if (std::abs(x - zero) > 0.5) c.line(part, {theme_->accent, px(1.8), plot::Dash::solid}, false);
  const double radius = px(it.held || it.hovered ? 5.6 : 5);
  const ImU32 sheet =
      ImGui::GetColorU32(ImVec4(static_cast<float>(theme_->sheet.r), static_cast<float>(theme_->sheet.g),
                                static_cast<float>(theme_->sheet.b), 1));
  list()->AddCircleFilled(at(x, line_y), static_cast<float>(radius), sheet, 32);
  c.line(plot::circle({x, line_y}, radius), {theme_->accent, px(1.8), plot::Dash::solid}, true);
  help_for(it, help);
  y_ += px(43);
  return change;
}

Change Ui::number(const std::string& id, const std::string& name, double& value, const plot::Range& range, int decimals,
                  const std::string& unit, const std::string& help) {
  const double unit_room = px(46);
  const plot::Box number_box{column_.x + column_.width - unit_room - px(86), y_ + px(2), px(86), px(20)};
  const plot::Box row{column_.x, y_, column_.width, px(24)};
  Change change = Change::none;
  Item it;
  if (typing_id_ == id) {
    places_[id] = row;
    change = typed(id, number_box, value, range, decimals);
  } else {
    it = item(id, row, true);
    if (it.hovered) ImGui::SetMouseCursor(ImGuiMouseCursor_TextInput);
    if (it.clicked || it.entered) {
      typing_id_ = id;
      typing_fresh_ = true;
      typing_text_ = decimals >= 0 ? plot::number(value, decimals) : plot::number_with_digits(value, 6);
    }
  }
  ScreenCanvas c = canvas();
  c.text({column_.x, y_ + px(16)}, name, body_font(), theme_->ink, plot::Anchor::start, 0);
  if (typing_id_ != id) {
    const std::string words = decimals >= 0 ? plot::number(value, decimals) : plot::number_with_digits(value, 4);
    const double width = c.number_width(words, body_font());
    c.number({column_.x + column_.width - unit_room, y_ + px(16)}, words, body_font(), theme_->accent,
             plot::Anchor::end);
    if (it.hovered) {
      const double end = column_.x + column_.width - unit_room;
      const plot::Point under[] = {{end - width, y_ + px(20)}, {end, y_ + px(20)}};
      c.line(under, {theme_->rule, px(1), plot::Dash::solid}, false);
    }
  }
  c.text({column_.x + column_.width - unit_room + px(7), y_ + px(16)}, unit, note_font(), theme_->quiet,
         plot::Anchor::start, 0);
  help_for(it, help);
  y_ += px(26);
  return change;
}

bool Ui::choice(const std::string& id, const std::string& name, const std::vector<std::string>& choices, int& chosen,
                const std::string& help) {
  const plot::Box row{column_.x, y_, column_.width, px(24)};
  const Item it = item(id, row, true);
  if (it.hovered) ImGui::SetMouseCursor(ImGuiMouseCursor_Hand);
  bool changed = false;
  const int count = static_cast<int>(choices.size());
  if ((it.clicked || it.entered) && open_choice_ != id && count > 0) {
    open_choice_ = id;
    choice_cursor_ = std::clamp(chosen, 0, count - 1);
  } else if (it.clicked && open_choice_ == id) {
    open_choice_.clear();
  } else if (open_choice_ == id) {
    for (const Event& key : screen_.keys()) {
      if (key.key == Key::down) choice_cursor_ = std::min(count - 1, choice_cursor_ + 1);
      if (key.key == Key::up) choice_cursor_ = std::max(0, choice_cursor_ - 1);
      if (key.key == Key::enter) {
        changed = chosen != choice_cursor_;
        chosen = choice_cursor_;
        open_choice_.clear();
        break;
      }
    }
  }
  ScreenCanvas c = canvas();
  c.text({column_.x, y_ + px(16)}, name, body_font(), theme_->ink, plot::Anchor::start, 0);
  const std::string now = chosen >= 0 && chosen < count ? choices[static_cast<std::size_t>(chosen)] : "–";
  const double room = column_.width - c.measure(name, body_font()).width - px(26);
  const std::string shown = cut_to_fit(c, now, body_font(), room);
  const double right = column_.x + column_.width;
  c.text({right - px(14), y_ + px(16)}, shown, body_font(), it.hovered ? theme_->ink : theme_->accent,
         plot::Anchor::end, 0);
  const plot::Point mark[] = {{right - px(9), y_ + px(10)}, {right - px(5), y_ + px(14)}, {right - px(1), y_ + px(10)}};
  c.line(mark, {theme_->quiet, px(1.2), plot::Dash::solid}, false);
  y_ += px(27);

  if (open_choice_ == id) {
    double width = 0;
    for (const std::string& each : choices) width = std::max(width, c.measure(each, body_font()).width);
    const double row_height = px(25);
    plot::Box box{0, 0, width + px(28), row_height * count + px(10)};
    box.x = std::max(px(4), right - box.width);
    box.y = row.bottom();
    const plot::Box page = screen_.page();
    if (box.bottom() > page.height - px(4)) box.y = std::max(px(4), row.y - box.height);
    box.height = std::min(box.height, page.height - box.y - px(4));
    ImGui::SetNextWindowPos(at(box.x, box.y));
    ImGui::SetNextWindowSize(at(box.width, box.height));
    ImGui::SetNextWindowFocus();
    ImGui::Begin("##choices", nullptr, kDropDown);
    ScreenCanvas over = canvas();
    over.polygon(plot::corners(box), theme_->sheet);
    over.line(plot::corners({box.x + 0.5, box.y + 0.5, box.width - 1, box.height - 1}),
              {theme_->rule, 1, plot::Dash::solid}, true);
    double row_y = static_cast<double>(ImGui::GetCursorScreenPos().y) + px(5);
    for (int k = 0; k < count; ++k) {
      const plot::Box each{box.x + 1, row_y, box.width - 2, row_height};
      const Item choice_item = item(id + "/" + std::to_string(k), each, false);
      if (choice_item.hovered) choice_cursor_ = k;
      if (k == choice_cursor_) over.polygon(plot::corners(each), plot::mix(theme_->sheet, theme_->rule, 0.45));
      over.text({each.x + px(13), row_y + px(17)}, choices[static_cast<std::size_t>(k)], body_font(k == chosen),
                theme_->ink, plot::Anchor::start, 0);
      if (choice_item.clicked) {
        changed = chosen != k;
        chosen = k;
        open_choice_.clear();
      }
      row_y += row_height;
    }
    ImGui::SetCursorScreenPos(at(box.x, row_y + px(5)));
    const ImVec2 mouse = ImGui::GetIO().MousePos;
    const bool outside = ImGui::IsMouseClicked(ImGuiMouseButton_Left) && !it.hovered &&
                         !box.contains({static_cast<double>(mouse.x), static_cast<double>(mouse.y)});
    ImGui::End();
    if (outside) open_choice_.clear();
  } else {
    help_for(it, help);
  }
  return changed;
}

bool Ui::tabs(const std::string& id, plot::Point baseline, const std::vector<std::string>& names, int& chosen) {
  bool changed = false;
  double x = baseline.x;
  for (std::size_t k = 0; k < names.size(); ++k) {
    const bool now = static_cast<int>(k) == chosen;
    if (button_at(id + "/" + std::to_string(k), {x, baseline.y}, names[k], plot::Anchor::start, {}, true, now,
                  body_font(now)) &&
        !now) {
      chosen = static_cast<int>(k);
      changed = true;
    }
    x += canvas().measure(names[k], body_font(true)).width + px(20);
  }
  return changed;
}

Change Ui::text_field(const std::string& id, std::string& text, const std::string& hint, bool focus) {
  const plot::Box box{column_.x, y_, column_.width, px(26)};
  places_[id] = box;
  order_.push_back(id);
  {
    ScreenCanvas c = canvas();
    const plot::Point under[] = {{box.x, box.bottom()}, {box.right(), box.bottom()}};
    c.line(under, {focus_ == id ? theme_->accent : theme_->rule, px(1), plot::Dash::solid}, false);
  }
  ImGui::SetCursorScreenPos(at(box.x, box.y + px(5)));
  ImGui::SetNextItemWidth(static_cast<float>(box.width));
  ImGui::PushFont(screen_.font(px(kBodySize), false));
  const bool tabbed = focus_ == id && show_focus_ && !fields_.contains(id);
  if (focus || tabbed) ImGui::SetKeyboardFocusHere();
  if (focus) focus_ = id;
  const std::string before = text;
  const bool entered = ImGui::InputTextWithHint(id.c_str(), hint.c_str(), &text, ImGuiInputTextFlags_EnterReturnsTrue);
  const bool active = ImGui::IsItemActive();
  if (active) {
    focus_ = id;
    fields_[id] = text;
  } else if (focus_ != id) {
    fields_.erase(id);
  }
  ImGui::PopFont();
  y_ += px(34);
  if (entered) return Change::done;
  return text != before ? Change::changing : Change::none;
}

Grip Ui::grip(const std::string& id, const plot::Box& box, bool focusable) {
  const Item it = item(id, box, focusable, true);
  const ImGuiIO& io = ImGui::GetIO();
  Grip grip;
  grip.hovered = it.hovered;
  grip.pressed = it.pressed;
  grip.held = it.held;
  grip.released = it.released;
  grip.double_clicked = it.hovered && ImGui::IsMouseDoubleClicked(ImGuiMouseButton_Left);
  grip.at = {static_cast<double>(io.MousePos.x), static_cast<double>(io.MousePos.y)};
  if (it.held && !it.pressed) {
    grip.dx = static_cast<double>(io.MouseDelta.x);
    grip.dy = static_cast<double>(io.MouseDelta.y);
  }
  return grip;
}

bool Ui::splitter(const std::string& id, const plot::Box& box, bool across, bool inverse, double& size, double least,
                  double most) {
  const Item it = item(id, box, false);
  if (it.hovered || it.held) ImGui::SetMouseCursor(across ? ImGuiMouseCursor_ResizeEW : ImGuiMouseCursor_ResizeNS);
  const plot::Colour colour = it.held || it.hovered ? theme_->accent : theme_->rule;
  const plot::Point middle = box.centre();
  const plot::Point line[] = {
      across ? plot::Point{std::round(middle.x), box.y} : plot::Point{box.x, std::round(middle.y)},
      across ? plot::Point{std::round(middle.x), box.bottom()} : plot::Point{box.right(), std::round(middle.y)}};
  canvas().line(line, {colour, 1, plot::Dash::solid}, false);
  if (!it.held || it.pressed) return false;
  const ImGuiIO& io = ImGui::GetIO();
  const double moved = static_cast<double>(across ? io.MouseDelta.x : io.MouseDelta.y) / screen_.scale();
  size = std::clamp(size + (inverse ? -moved : moved), least, most);
  return moved != 0;
}

}  // namespace runband
