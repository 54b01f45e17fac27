#include "viewer/panels/frame.h"

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

constexpr double kSettleAfter_s = 0.15;
constexpr double kIdle_s = 0.5;  // how often an idle window looks at the clock

/// The window's host with the reader's own text size on top.
struct Sizes {
  double left, right, strip, header;
};

Chord chord_of(const Event& e) {
  Chord chord;
  chord.control = e.modifiers.control;
  chord.shift = e.modifiers.shift;
  chord.alt = e.modifiers.alt;
  const int k = static_cast<int>(e.key);
  if (e.key >= Key::a && e.key <= Key::z)
    chord.key = std::string(1, static_cast<char>('A' + k - static_cast<int>(Key::a)));
  else if (e.key >= Key::n0 && e.key <= Key::n9)
    chord.key = std::string(1, static_cast<char>('0' + k - static_cast<int>(Key::n0)));
  else if (e.key >= Key::f1 && e.key <= Key::f12)
    chord.key = "F" + std::to_string(k - static_cast<int>(Key::f1) + 1);
  else
    switch (e.key) {
      case Key::left:
        chord.key = "Left";
        break;
      case Key::right:
        chord.key = "Right";
        break;
      case Key::home:
        chord.key = "Home";
        break;
      case Key::space:
        chord.key = "Space";
        break;
      case Key::plus:
        chord.key = "+";
        chord.shift = false;
        break;
      case Key::minus:
        chord.key = "-";
        break;
      case Key::bracket_left:
        chord.key = "[";
        break;
      case Key::bracket_right:
        chord.key = "]";
        break;
      case Key::slash:
      case Key::question:
        chord.key = chord.shift || e.key == Key::question ? "?" : "/";
        chord.shift = false;
        break;
      default:
        break;
    }
  return chord;
}

}  // namespace

std::string contact_title(const Contact& contact) { return contact_name(contact); }

std::string capitalised(std::string words) {
  if (!words.empty()) words[0] = static_cast<char>(std::toupper(static_cast<unsigned char>(words[0])));
  return words;
}

Frame::Frame(Host& host, Desk& desk) : screen_(host), ui_(screen_), desk_(desk) {
  desk_.draw_picture = [this](const std::filesystem::path& file) { draw_picture(file); };
  desk_.look_from = [this](NamedView view) {
    if (scene_) scene_->look_from(view);
  };
}

Frame::~Frame() {
  desk_.draw_picture = nullptr;
  desk_.look_from = nullptr;
}

void Frame::handle_keys() {
  if (desk_.prompt.kind != Prompt::Kind::none) return;
  for (const Event& key : screen_.keys()) {
    const Chord chord = chord_of(key);
    if (chord.key.empty()) continue;
    // A focused control takes the arrows and the space bar.
    const bool own = !ui_.focus().empty() && ui_.where(ui_.focus()).has_value() && ui_.keys_to_focus();
    if (own && !chord.control && (chord.key == "Left" || chord.key == "Right" || chord.key == "Space")) continue;
    const Action* action = desk_.actions().of(chord);
    if (action == nullptr || (screen_.typing() && !action->while_typing)) continue;
    if (action->enabled && !action->enabled()) continue;
    try {
      action->run();
    } catch (const Error& problem) {
      desk_.say(problem.message() + " " + problem.cure(), true);
    }
    if (desk_.prompt.kind != Prompt::Kind::none) return;
  }
}

void Frame::set_title() {
  const std::string title = desk_.title();
  if (title == title_) return;
  title_ = title;
  screen_.host().set_title(title);
}

double Frame::step() {
  Host& host = screen_.host();
  const double now = host.seconds();
  double wait = 0;
  if (!needs_frame_ && !screen_.pending()) {
    wait = kIdle_s;
    if (!settled_) wait = std::clamp(last_input_s_ + kSettleAfter_s - now, 0.0, kIdle_s);
  }
  std::vector<Event> events = host.events(wait);
  const bool input = !events.empty() || screen_.pending();
  const bool changed = desk_.tick(host.seconds());
  const double after = host.seconds();
  if (input) last_input_s_ = after;
  const bool settle_now = !settled_ && after - last_input_s_ >= kSettleAfter_s && desk_.solver().idle();
  if (!input && !changed && !needs_frame_ && !settle_now && after - last_drawn_s_ < 1.0) return 0;

  // Two frames after the last cause: a control may show what it did only in the next.
  const bool cause = input || changed || desk_.playing() || !desk_.solver().idle();
  settled_ = !cause && after - last_input_s_ >= kSettleAfter_s;
  needs_frame_ = cause;
  if (!screen_.begin(std::move(events), desk_.theme())) {
    if (screen_.close_asked()) desk_.ask_to_quit();
    return kIdle_s;
  }
  desk_.layout().width = static_cast<int>(host.width_px() / host.scale());
  desk_.layout().height = static_cast<int>(host.height_px() / host.scale());
  if (screen_.close_asked() && desk_.prompt.kind != Prompt::Kind::unsaved) desk_.ask_to_quit();
  if (!screen_.dropped().empty()) desk_.dropped(screen_.dropped());
  ui_.begin_frame(desk_.theme());
  probed_.reset();
  handle_keys();

  const plot::Box page = screen_.page();
  Layout& layout = desk_.layout();
  // On a small screen the columns give way before the scene does.
  const double unit = screen_.scale();
  const double wide = page.width / unit, high = page.height / unit;
  const double left = layout.show_left ? std::clamp(layout.left, 200.0, std::max(200.0, wide * 0.30)) : 0;
  const double right = layout.show_right ? std::clamp(layout.right, 220.0, std::max(220.0, wide * 0.32)) : 0;
  const double strip =
      layout.show_strip ? std::clamp(layout.strip, 110.0, std::max(110.0, high * (high < 800 ? 0.26 : 0.42))) : 0;
  const double header = 56;
  const auto px = [unit](double units) { return std::round(units * unit); };
  const double top = px(header), middle_height = page.height - top - px(strip);

  ui_.begin_area("header", {0, 0, page.width, top}, 24, 0);
  draw_header({0, 0, page.width, top});
  ui_.end_area();
  if (left > 0) {
    ui_.begin_area("left", {0, top, px(left), middle_height}, 24, 16);
    draw_left_column({0, top, px(left), middle_height});
    ui_.end_area();
  }
  if (right > 0) {
    ui_.begin_area("right", {page.width - px(right), top, px(right), middle_height}, 24, 16);
    draw_right_column({page.width - px(right), top, px(right), middle_height});
    ui_.end_area();
  }
  const plot::Box middle{px(left), top, page.width - px(left) - px(right), middle_height};
  if (middle.width > px(40) && middle.height > px(40)) {
    ui_.begin_area("middle", middle, 0, 0);
    switch (desk_.view().sheet) {
      case Sheet::scene:
        draw_scene_sheet(middle);
        break;
      case Sheet::profiles:
        draw_profiles_sheet(middle);
        break;
      case Sheet::curves:
        draw_curves_sheet(middle);
        break;
      case Sheet::analyses:
        draw_analyses_sheet(middle);
        break;
      case Sheet::compare:
        draw_compare_sheet(middle);
        break;
    }
    ui_.end_area();
  }
  if (strip > 0) {
    const plot::Box box{0, page.height - px(strip), page.width, px(strip)};
    ui_.begin_area("strip", box, 0, 0);
    draw_strip(box);
    ui_.end_area();
  }
  // Dividers last, over the areas' edges.
  ui_.begin_area("dividers", {0, 0, 1, 1}, 0, 0);
  ui_.end_area();
  draw_prompts();
  ui_.end_frame();
  const bool busy = ui_.busy();
  if (was_busy_ && !busy) desk_.end_gesture();
  was_busy_ = busy;
  screen_.end();
  set_title();
  ++frames_;
  last_drawn_s_ = host.seconds();
  return 0;
}

void Frame::settle(int most) {
  refresh();
  for (int i = 0; i < most; ++i) {
    if (!screen_.pending()) desk_.solver().wait();
    step();
    if (settled_ && !screen_.pending() && desk_.solver().idle()) return;
  }
}

}  // namespace runband
