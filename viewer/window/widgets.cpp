#include "viewer/window/widgets.h"

#include <imgui.h>
#include <imgui_internal.h>

#include <algorithm>
#include <cmath>
#include <utility>

namespace runband {

namespace {

ImVec2 at(double x, double y) { return {static_cast<float>(x), static_cast<float>(y)}; }

constexpr ImGuiWindowFlags kPlain = ImGuiWindowFlags_NoDecoration | ImGuiWindowFlags_NoMove |
                                    ImGuiWindowFlags_NoSavedSettings | ImGuiWindowFlags_NoBackground |
                                    ImGuiWindowFlags_NoNav | ImGuiWindowFlags_NoBringToFrontOnFocus;

}  // namespace

void drop_last_letter(std::string& words) {
  while (!words.empty() && (static_cast<unsigned char>(words.back()) & 0xC0) == 0x80) words.pop_back();
  if (!words.empty()) words.pop_back();
}

std::string cut_to_fit(const plot::Canvas& canvas, std::string words, const plot::Font& font, double room) {
  if (canvas.measure(words, font).width <= room) return words;
  while (!words.empty() && canvas.measure(words + "…", font).width > room) drop_last_letter(words);
  return words.empty() ? words : words + "…";
}

void Ui::begin_frame(const plot::Theme& theme) {
  theme_ = &theme;
  last_places_ = std::exchange(places_, {});
  last_order_ = std::exchange(order_, {});
  sheet_ = false;
  escape_ = false;
  was_held_ = false;
  for (const Event& key : screen_.keys()) {
    if (key.key == Key::escape) {
      if (!open_choice_.empty())
        open_choice_.clear();
      else if (!typing_id_.empty())
        typing_id_.clear();
      else
        escape_ = true;
    }
    if (key.key == Key::tab && !key.modifiers.control && !last_order_.empty()) {
      const auto now = std::find(last_order_.begin(), last_order_.end(), focus_);
      if (now == last_order_.end()) {
        focus_ = key.modifiers.shift ? last_order_.back() : last_order_.front();
      } else if (key.modifiers.shift) {
        focus_ = now == last_order_.begin() ? last_order_.back() : *(now - 1);
      } else {
        focus_ = now + 1 == last_order_.end() ? last_order_.front() : *(now + 1);
      }
      show_focus_ = true;
    }
  }
  if (ImGui::IsMouseClicked(ImGuiMouseButton_Left)) show_focus_ = false;
}

void Ui::end_frame() {
  if (!was_held_) held_.clear();
}

bool Ui::busy() const { return !held_.empty() || !typing_id_.empty(); }

ImDrawList* Ui::list() { return ImGui::GetWindowDrawList(); }

ScreenCanvas Ui::canvas() { return {screen_, list(), screen_.page()}; }

// ---- Areas

void Ui::begin_area(const std::string& id, const plot::Box& box, double padding_x, double padding_y) {
  outer_.emplace_back(column_, y_, padding_y_);
  padding_y_ = px(padding_y);
  const bool nested = ImGui::GetCurrentContext()->CurrentWindowStack.Size > 1;
  if (nested) {
    ImGui::SetCursorScreenPos(at(box.x, box.y));
    ImGui::BeginChild(id.c_str(), at(box.width, box.height), false,
                      ImGuiWindowFlags_NoBackground | ImGuiWindowFlags_NoNav);
  } else {
    ImGui::SetNextWindowPos(at(box.x, box.y));
    ImGui::SetNextWindowSize(at(std::max(1.0, box.width), std::max(1.0, box.height)));
    ImGui::Begin(id.c_str(), nullptr, kPlain & ~(ImGuiWindowFlags_NoScrollbar));
  }
  const ImVec2 start = ImGui::GetCursorScreenPos();
  // Content never lies under the scroll bar.
  const double right = std::max(px(padding_x), px(14));
  column_ = {box.x + px(padding_x), box.y,
             std::max(px(20), box.width - px(padding_x) - (nested || padding_x > 0 ? right : 0)), box.height};
  y_ = static_cast<double>(start.y) + padding_y_;
  top_ = y_;
}

void Ui::end_area() {
  // Tells the window how high its content is.
  ImGui::SetCursorScreenPos(at(column_.x, y_ + padding_y_));
  ImGui::Dummy({1, 1});
  const bool nested = (ImGui::GetCurrentWindow()->Flags & ImGuiWindowFlags_ChildWindow) != 0;
  if (nested)
    ImGui::EndChild();
  else
    ImGui::End();
  std::tie(column_, y_, padding_y_) = outer_.back();
  outer_.pop_back();
}

bool Ui::begin_sheet(const std::string& id, double width, double height) {
  const plot::Box page = screen_.page();
  const plot::Colour shade =
      plot::with_opacity(theme_->name == plot::ThemeName::dark ? plot::Colour{0, 0, 0, 1} : theme_->ink, 0.32);
  ImGui::SetNextWindowPos({0, 0});
  ImGui::SetNextWindowSize(at(page.width, page.height));
  ImGui::SetNextWindowFocus();
  ImGui::Begin((id + "/ground").c_str(), nullptr, kPlain & ~ImGuiWindowFlags_NoBringToFrontOnFocus);
  canvas().polygon(plot::corners(page), shade);
  // Takes what the pointer does, so that nothing beneath does.
  ImGui::SetCursorScreenPos({0, 0});
  ImGui::InvisibleButton((id + "/veil").c_str(), at(page.width, page.height));
  ImGui::SetItemAllowOverlap();
  const double w = std::min(px(width), page.width - px(24)), h = std::min(px(height), page.height - px(24));
  const plot::Box box{std::round((page.width - w) / 2), std::round(std::max(px(12), (page.height - h) * 0.38)), w, h};
  {
    ScreenCanvas c = canvas();
    c.polygon(plot::corners(box), theme_->sheet);
    c.line(plot::corners(box), {theme_->rule, 1, plot::Dash::solid}, true);
  }
  // What was focused beneath cannot be reached from here.
  order_.clear();
  places_.clear();
  sheet_ = true;
  begin_area(id, box, 24, 20);
  return true;
}

void Ui::end_sheet() {
  end_area();
  ImGui::End();
}

bool Ui::hovers(const plot::Box& box) const {
  const ImVec2 p = ImGui::GetIO().MousePos;
  return box.contains({static_cast<double>(p.x), static_cast<double>(p.y)}) &&
         ImGui::IsWindowHovered(ImGuiHoveredFlags_ChildWindows | ImGuiHoveredFlags_AllowWhenBlockedByActiveItem);
}

// ---- The one thing every control is

Ui::Item Ui::item(const std::string& id, const plot::Box& box, bool focusable, bool beneath) {
  Item it;
  places_[id] = box;
  if (focusable) order_.push_back(id);
  ImGui::SetCursorScreenPos(at(box.x, box.y));
  it.clicked = ImGui::InvisibleButton(id.c_str(), at(std::max(1.0, box.width), std::max(1.0, box.height)),
                                      beneath ? static_cast<ImGuiButtonFlags>(ImGuiButtonFlags_AllowItemOverlap) : 0);
  if (beneath) ImGui::SetItemAllowOverlap();
  it.hovered = ImGui::IsItemHovered();
  it.held = ImGui::IsItemActive();
  it.pressed = ImGui::IsItemActivated();
  it.released = ImGui::IsItemDeactivated();
  if (it.pressed && focusable) focus_ = id;
  if (it.held) {
    held_ = id;
    was_held_ = true;
  }
  if (focusable && focus_ == id && typing_id_.empty() && open_choice_.empty()) {
    for (const Event& key : screen_.keys()) {
      if (key.modifiers.control || key.modifiers.alt) continue;
      if (key.key == Key::enter || (key.key == Key::space && show_focus_)) it.entered = true;
      if (show_focus_ && key.key == Key::left) it.step -= key.modifiers.shift ? 10 : 1;
      if (show_focus_ && key.key == Key::right) it.step += key.modifiers.shift ? 10 : 1;
    }
    if (show_focus_) {
      ring(box);
      // A focused control below the edge comes into view.
      if (box.bottom() > column_.y + column_.height || box.y < column_.y) ImGui::SetScrollHereY(0.5F);
    }
  }
  return it;
}

void Ui::ring(const plot::Box& box) {
  canvas().line(plot::corners(box.grown(px(3))), {theme_->accent, std::max(1.0, px(1)), plot::Dash::solid}, true);
}

void Ui::tooltip(const std::string& words) {
  if (words.empty()) return;
  const double width = std::min(px(300), screen_.page().width - px(40));
  const double height = paragraph_height(words, note_font(), width) + px(16);
  const ImVec2 mouse = ImGui::GetIO().MousePos;
  double measured = 0;
  {
    ScreenCanvas c = canvas();
    measured = std::min(width, c.measure(words, note_font()).width + 1);
  }
  plot::Box box{static_cast<double>(mouse.x) + px(14), static_cast<double>(mouse.y) + px(18), measured + px(20),
                height};
  box.x = std::clamp(box.x, px(4), std::max(px(4), screen_.page().width - box.width - px(4)));
  if (box.bottom() > screen_.page().height - px(4)) box.y = static_cast<double>(mouse.y) - box.height - px(10);
  ScreenCanvas c{screen_, ImGui::GetForegroundDrawList(), screen_.page()};
  c.polygon(plot::corners(box), theme_->ink);
  const plot::Box column = column_;
  const double y = y_;
  // Wrapped by the same rule as a paragraph, on the foreground.
  const std::vector<std::string> none;
  double line_y = box.y + px(8) + px(kNoteSize);
  std::string row;
  std::size_t from = 0;
  const auto flush = [&] {
    c.text({box.x + px(10), line_y}, row, note_font(), theme_->paper, plot::Anchor::start, 0);
    line_y += px(kNoteSize * 1.45);
    row.clear();
  };
  while (from <= words.size()) {
    const std::size_t to = std::min(words.find(' ', from), words.size());
    const std::string word = words.substr(from, to - from);
    const std::string longer = row.empty() ? word : row + " " + word;
    if (!row.empty() && c.measure(longer, note_font()).width > measured) {
      flush();
      row = word;
    } else {
      row = longer;
    }
    from = to + 1;
  }
  if (!row.empty()) flush();
  column_ = column;
  y_ = y;
}

void Ui::help_for(const Item& it, const std::string& help) {
  if (it.hovered && !it.held && !help.empty() && ImGui::GetCurrentContext()->HoveredIdTimer > 0.45F) tooltip(help);
}

// ---- Words

void Ui::heading(const std::string& words) {
  y_ += px(kLabelSize);
  canvas().text({column_.x, y_}, words, label_font(), theme_->quiet, plot::Anchor::start, 0);
  y_ += px(9);
}

void Ui::rule() {
  y_ += px(12);
  const plot::Point points[] = {{column_.x, std::floor(y_) + 0.5}, {column_.x + column_.width, std::floor(y_) + 0.5}};
  canvas().line(points, {theme_->rule, 1, plot::Dash::solid}, false);
  y_ += px(14);
}

void Ui::words(const std::string& words, const plot::Font& font, const plot::Colour& colour) {
  y_ += font.size;
  canvas().text({column_.x, y_}, words, font, colour, plot::Anchor::start, 0);
  y_ += font.size * 0.5;
}

double Ui::paragraph_height(const std::string& words, const plot::Font& font, double width) {
  ScreenCanvas c = canvas();
  double lines = 0;
  std::size_t from = 0;
  std::string row;
  while (from <= words.size()) {
    const std::size_t to = std::min(words.find(' ', from), words.size());
    const std::string longer = row.empty() ? words.substr(from, to - from) : row + " " + words.substr(from, to - from);
    if (!row.empty() && c.measure(longer, font).width > width) {
      ++lines;
      row = words.substr(from, to - from);
    } else {
      row = longer;
    }
    from = to + 1;
  }
  if (!row.empty()) ++lines;
  return lines * font.size * 1.45;
}

void Ui::paragraph(const std::string& words, const plot::Font& font, const plot::Colour& colour) {
  ScreenCanvas c = canvas();
  std::size_t from = 0;
  std::string row;
  const auto flush = [&] {
    y_ += font.size * 1.45;
    c.text({column_.x, y_ - font.size * 0.35}, row, font, colour, plot::Anchor::start, 0);
  };
  while (from <= words.size()) {
    const std::size_t to = std::min(words.find(' ', from), words.size());
    const std::string word = words.substr(from, to - from);
    const std::string longer = row.empty() ? word : row + " " + word;
    if (!row.empty() && c.measure(longer, font).width > column_.width) {
      flush();
      row = word;
    } else {
      row = longer;
    }
    from = to + 1;
  }
  if (!row.empty()) flush();
}

void Ui::value(const std::string& id, const std::string& name, const std::string& number, const std::string& unit,
               const std::string& note, const std::string& help) {
  const double unit_room = px(46);
  const plot::Box box{column_.x, y_, column_.width, px(note.empty() ? 27 : 38)};
  const Item it = item(id, {box.x, box.y, box.width, px(24)}, false);
  ScreenCanvas c = canvas();
  const double baseline = y_ + px(17);
  const double number_x = column_.x + column_.width - unit_room;
  // A name longer than its room is cut at a letter, never run into the number.
  const double room = column_.width - unit_room - c.number_width(number, body_font(true)) - px(10);
  const std::string shown = cut_to_fit(c, name, body_font(), room);
  c.text({column_.x, baseline}, shown, body_font(), theme_->ink, plot::Anchor::start, 0);
  c.number({number_x, baseline}, number, body_font(true), theme_->ink, plot::Anchor::end);
  c.text({number_x + px(7), baseline}, unit, note_font(), theme_->quiet, plot::Anchor::start, 0);
  if (!note.empty())
    c.number({number_x, baseline + px(14)}, note, {px(kLabelSize), false, 0}, theme_->quiet, plot::Anchor::end);
  const std::string full = shown == name ? help : help.empty() ? name : name + ". " + help;
  help_for(it, full);
  y_ += box.height;
}

void Ui::caution(const std::string& title, const std::string& text, bool strong) {
  const double inner = column_.width - px(24);
  const double height = px(16) + (title.empty() ? 0 : px(18)) + paragraph_height(text, note_font(), inner);
  const plot::Box box{column_.x, y_, column_.width, height};
  {
    ScreenCanvas c = canvas();
    if (strong) {
      c.polygon(plot::corners(box), theme_->warning_ground);
      c.polygon(plot::corners({box.x, box.y, px(2), box.height}), theme_->warning);
    } else {
      c.polygon(plot::corners({box.x, box.y, px(1), box.height}), theme_->rule);
    }
    if (!title.empty())
      c.text({box.x + px(12), box.y + px(21)}, title, body_font(true), strong ? theme_->warning : theme_->ink,
             plot::Anchor::start, 0);
  }
  const plot::Box column = column_;
  column_ = {column.x + px(12), column.y, inner, column.height};
  y_ += px(8) + (title.empty() ? 0 : px(18));
  paragraph(text, note_font(), strong ? theme_->ink : theme_->quiet);
  column_ = column;
  y_ = box.bottom() + px(8);
}

// ---- For keys and tests

std::optional<plot::Box> Ui::where(const std::string& id) const {
  const auto found = places_.find(id);
  if (found != places_.end()) return found->second;
  const auto last = last_places_.find(id);
  if (last != last_places_.end()) return last->second;
  return std::nullopt;
}

std::vector<std::string> Ui::ids() const {
  std::vector<std::string> all;
  for (const auto& [id, box] : places_) all.push_back(id);
  return all;
}

}  // namespace runband
