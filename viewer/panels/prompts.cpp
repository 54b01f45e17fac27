// Questions to the user: files, unsaved work, recovery, the palette, the keys.
#include <imgui.h>

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/version.h"
#include "core/profile/profile.h"
#include "viewer/panels/frame.h"

namespace runband {

namespace {

std::filesystem::path home_of(std::string text) {
  if (text.starts_with("~/")) {
    if (const char* home = std::getenv("HOME")) text = std::string(home) + text.substr(1);
  }
  return text;
}

bool has_ending(const std::filesystem::path& file, const std::vector<std::string>& endings) {
  std::string ending = file.extension().string();
  std::transform(ending.begin(), ending.end(), ending.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return std::find(endings.begin(), endings.end(), ending) != endings.end();
}

}  // namespace

/// A folder's files, those of the wanted endings; folders first. A click takes one.
bool Frame::file_list(const std::string& id, const std::vector<std::string>& endings, double height,
                      std::string& text) {
  std::error_code none;
  if (prompt_folder_.empty()) prompt_folder_ = std::filesystem::current_path(none).string();
  const std::filesystem::path typed = home_of(text);
  if (std::filesystem::is_directory(typed, none))
    prompt_folder_ = std::filesystem::absolute(typed, none).lexically_normal().string();
  const plot::Theme& theme = desk_.theme();
  ui_.paragraph(prompt_folder_, ui_.note_font(), theme.quiet);
  ui_.space(6);
  std::vector<std::pair<bool, std::string>> entries;
  for (const auto& entry : std::filesystem::directory_iterator(
           prompt_folder_, std::filesystem::directory_options::skip_permission_denied, none)) {
    const std::string name = entry.path().filename().string();
    if (name.starts_with(".")) continue;
    const bool folder = entry.is_directory(none);
    if (folder || has_ending(entry.path(), endings)) entries.emplace_back(folder, name);
  }
  std::sort(entries.begin(), entries.end(),
            [](const auto& a, const auto& b) { return a.first != b.first ? a.first : a.second < b.second; });
  bool taken = false;
  const plot::Box area{ui_.column().x, ui_.y(), ui_.column().width, height};
  ui_.begin_area(id, area, 0, 0);
  if (ui_.button(id + "/up", "..", "The folder above"))
    prompt_folder_ = std::filesystem::path(prompt_folder_).parent_path().string();
  int shown = 0;
  for (const auto& [folder, name] : entries) {
    if (++shown > 400) break;
    if (!ui_.button(id + "/" + name, folder ? name + "/" : name, {}, true, false)) continue;
    const std::filesystem::path whole = std::filesystem::path(prompt_folder_) / name;
    if (folder) {
      prompt_folder_ = whole.string();
      text.clear();
    } else {
      text = whole.string();
      taken = true;
    }
  }
  if (entries.empty()) ui_.paragraph("Nothing to open in this folder.", ui_.note_font(), theme.quiet);
  ui_.end_area();
  ui_.set_y(area.bottom());
  return taken;
}

void Frame::draw_prompts() {
  Prompt& prompt = desk_.prompt;
  const bool fresh = prompt.kind != last_prompt_;
  last_prompt_ = prompt.kind;
  if (prompt.kind == Prompt::Kind::none) return;
  if (fresh) {
    palette_cursor_ = 0;
    prompt_folder_ = desk_.now().used ? desk_.now().document.current().folder.string() : "";
    ui_.set_focus("");
  }
  const plot::Theme& theme = desk_.theme();
  const auto close = [&] { prompt = {}; };
  // Runs what may fail; a failure stays in the sheet with its cure.
  const auto attempt = [&](const std::function<void()>& act) {
    try {
      act();
      return true;
    } catch (const Error& problem) {
      desk_.prompt.problem = problem.message() + " " + problem.cure();
    } catch (const std::exception& problem) {
      desk_.prompt.problem = problem.what();
    }
    return false;
  };
  const auto show_problem = [&] {
    if (!prompt.problem.empty()) ui_.caution({}, prompt.problem, true);
  };

  switch (prompt.kind) {
    case Prompt::Kind::none:
      return;
    case Prompt::Kind::palette: {
      ui_.begin_sheet("palette", 560, 460);
      if (ui_.text_field("palette/text", prompt.text, "What do you want to do?", fresh) == Change::changing)
        palette_cursor_ = 0;
      const auto found = desk_.actions().matching(prompt.text);
      std::vector<const Action*> able;
      for (const Action* action : found)
        if (!action->enabled || action->enabled()) able.push_back(action);
      for (const Event& key : screen_.keys()) {
        if (key.key == Key::down) ++palette_cursor_;
        if (key.key == Key::up) --palette_cursor_;
      }
      palette_cursor_ = std::clamp(palette_cursor_, 0, std::max(0, static_cast<int>(able.size()) - 1));
      bool run = false;
      for (const Event& key : screen_.keys()) run = run || key.key == Key::enter;
      const Action* chosen = run && !able.empty() ? able[static_cast<std::size_t>(palette_cursor_)] : nullptr;
      const plot::Box area{ui_.column().x, ui_.y(), ui_.column().width,
                           ui_.column().y + ui_.column().height - ui_.y() - ui_.px(20)};
      ui_.begin_area("palette/list", area, 0, 0);
      for (std::size_t k = 0; k < able.size(); ++k) {
        const plot::Box row{ui_.column().x, ui_.y(), ui_.column().width, ui_.px(27)};
        const Grip grip = ui_.grip("palette/" + able[k]->id, row);
        if (grip.hovered && (ImGui::GetIO().MouseDelta.x != 0 || ImGui::GetIO().MouseDelta.y != 0))
          palette_cursor_ = static_cast<int>(k);
        const bool here = static_cast<int>(k) == palette_cursor_;
        ScreenCanvas canvas = ui_.canvas();
        if (here) {
          canvas.polygon(plot::corners(row), plot::mix(theme.sheet, theme.rule, 0.5));
          if (row.bottom() > area.bottom() || row.y < area.y) ImGui::SetScrollHereY(0.5F);
        }
        canvas.text({row.x + ui_.px(8), row.y + ui_.px(18)}, able[k]->words, ui_.body_font(here), theme.ink,
                    plot::Anchor::start, 0);
        canvas.text({row.right() - ui_.px(8), row.y + ui_.px(18)},
                    able[k]->chord.words().empty() ? able[k]->group : able[k]->chord.words(), ui_.note_font(),
                    theme.quiet, plot::Anchor::end, 0);
        if (grip.released && grip.hovered) chosen = able[k];
        ui_.space(27);
      }
      if (able.empty()) ui_.paragraph("Nothing of this name.", ui_.body_font(), theme.quiet);
      ui_.end_area();
      ui_.end_sheet();
      if (chosen != nullptr) {
        const std::string id = chosen->id;
        close();
        if (!attempt([&] { desk_.actions().run(id); })) {
          desk_.say(desk_.prompt.problem, true);
          desk_.prompt.problem.clear();
        }
        return;
      }
      break;
    }
    case Prompt::Kind::shortcuts: {
      ui_.begin_sheet("keys", 760, 640);
      ui_.words("Keys", ui_.title_font(), theme.ink);
      ui_.space(6);
      std::vector<std::string> groups;
      for (const Action& action : desk_.actions().all())
        if (std::find(groups.begin(), groups.end(), action.group) == groups.end()) groups.push_back(action.group);
      const plot::Box area{ui_.column().x, ui_.y(), ui_.column().width,
                           ui_.column().y + ui_.column().height - ui_.y() - ui_.px(20)};
      ui_.begin_area("keys/list", area, 0, 0);
      const double half = (ui_.column().width - ui_.px(32)) / 2, x = ui_.column().x, top = ui_.y();
      double y[2] = {top, top};
      for (const std::string& group : groups) {
        const int k = y[1] < y[0] ? 1 : 0;
        ui_.set_column({x + k * (half + ui_.px(32)), area.y, half, area.height});
        ui_.set_y(y[k]);
        std::string capitals = group;
        std::transform(capitals.begin(), capitals.end(), capitals.begin(),
                       [](unsigned char c) { return static_cast<char>(std::toupper(c)); });
        ui_.heading(capitals);
        ui_.space(4);
        for (const Action& action : desk_.actions().all()) {
          if (action.group != group || action.chord.key.empty()) continue;
          ScreenCanvas canvas = ui_.canvas();
          canvas.text({ui_.column().x, ui_.y() + ui_.px(14)}, action.words, ui_.note_font(), theme.ink,
                      plot::Anchor::start, 0);
          canvas.text({ui_.column().x + half, ui_.y() + ui_.px(14)}, action.chord.words(), ui_.note_font(),
                      theme.accent, plot::Anchor::end, 0);
          ui_.space(20);
        }
        ui_.space(14);
        y[k] = ui_.y();
      }
      const std::pair<const char*, const char*> more[] = {{"Tab, Shift+Tab", "next, previous control"},
                                                          {"Left, Right", "change the focused slider"},
                                                          {"Enter", "type a value"},
                                                          {"Escape", "close, leave"}};
      const int k = y[1] < y[0] ? 1 : 0;
      ui_.set_column({x + k * (half + ui_.px(32)), area.y, half, area.height});
      ui_.set_y(y[k]);
      ui_.heading("CONTROLS");
      ui_.space(4);
      for (const auto& [keys, does] : more) {
        ScreenCanvas canvas = ui_.canvas();
        canvas.text({ui_.column().x, ui_.y() + ui_.px(14)}, does, ui_.note_font(), theme.ink, plot::Anchor::start, 0);
        canvas.text({ui_.column().x + half, ui_.y() + ui_.px(14)}, keys, ui_.note_font(), theme.accent,
                    plot::Anchor::end, 0);
        ui_.space(20);
      }
      ui_.set_y(std::max({y[0], y[1], ui_.y()}));
      ui_.end_area();
      ui_.end_sheet();
      break;
    }
    case Prompt::Kind::about: {
      ui_.begin_sheet("about", 520, 250);
      ui_.words(std::string("Runband ") + version(), ui_.title_font(), theme.ink);
      ui_.paragraph("Where a wheelset touches the track, how hard, and what the touch does.", ui_.body_font(),
                    theme.ink);
      ui_.space(10);
      ui_.paragraph(
          "Nothing here is a safety acceptance. Derailment, wear and fatigue are judged by the applicable national and "
          "operator standards and by licensed practice.",
          ui_.body_font(), theme.ink);
      ui_.space(10);
      ui_.paragraph("Free software under the GNU General Public License, version 3 or later; without any warranty.",
                    ui_.note_font(), theme.quiet);
      ui_.space(12);
      if (ui_.button("about/close", "Close", {}, true, true)) close();
      ui_.end_sheet();
      break;
    }
    case Prompt::Kind::open: {
      const bool second = prompt.wheel_or_rail == -1;
      ui_.begin_sheet("open", 640, 560);
      ui_.words(second ? "Open a case beside this one" : "Open a case", ui_.title_font(), theme.ink);
      ui_.space(4);
      std::string wanted;
      if (ui_.text_field("open/text", prompt.text, "a case file, a folder, or a picture that carries its case",
                         fresh) == Change::done)
        wanted = prompt.text;
      show_problem();
      if (!desk_.store().recent().empty() && prompt.text.empty()) {
        ui_.heading("RECENT");
        ui_.space(2);
        int shown = 0;
        for (const std::string& file : desk_.store().recent()) {
          if (++shown > 5) break;
          if (ui_.button("recent/" + std::to_string(shown), std::filesystem::path(file).filename().string(), file))
            wanted = file;
        }
        ui_.space(8);
      }
      const double height = ui_.column().y + ui_.column().height - ui_.y() - ui_.px(78);
      if (height > ui_.px(60) && file_list("open/list", {".toml", ".png", ".svg", ".pdf"}, height, prompt.text))
        wanted = prompt.text;
      ui_.space(8);
      const double baseline = ui_.y() + ui_.px(16);
      if (ui_.button_at("open/go", {ui_.column().x, baseline}, "Open", plot::Anchor::start, {}, !prompt.text.empty()))
        wanted = prompt.text;
      if (ui_.button_at("open/cancel", {ui_.column().x + ui_.px(70), baseline}, "Cancel", plot::Anchor::start, {}, true,
                        false, ui_.body_font())) {
        ui_.end_sheet();
        close();
        return;
      }
      ui_.end_sheet();
      std::error_code none;
      if (!wanted.empty() && !std::filesystem::is_directory(home_of(wanted), none)) {
        const int slot = second ? 1 : desk_.active();
        if (attempt([&] { desk_.open(home_of(wanted), slot); })) {
          if (second) {
            desk_.swap();
            desk_.edit_view("Compare", "", [](View& v) { v.sheet = Sheet::compare; });
          }
          desk_.prompt = {};
          return;
        }
      }
      break;
    }
    case Prompt::Kind::save_as:
    case Prompt::Kind::keep_picture: {
      const bool picture = prompt.kind == Prompt::Kind::keep_picture;
      ui_.begin_sheet("save", 560, prompt.problem.empty() ? 178 : 260);
      ui_.words(picture ? "Keep this picture" : "Save the case", ui_.title_font(), theme.ink);
      ui_.space(2);
      ui_.paragraph(picture ? "PNG. It carries the case, so that it can be opened again."
                            : "A text file (.toml) that every command reads.",
                    ui_.note_font(), theme.quiet);
      ui_.space(6);
      bool go = ui_.text_field("save/text", prompt.text, picture ? "name.png" : "name.toml", fresh) == Change::done;
      std::error_code none;
      const std::filesystem::path target = home_of(prompt.text);
      const bool there =
          !prompt.text.empty() && std::filesystem::exists(target, none) && !std::filesystem::is_directory(target, none);
      if (there && !(target == desk_.now().document.file()))
        ui_.paragraph("This file is there already; it will be replaced.", ui_.note_font(), theme.warning);
      show_problem();
      ui_.space(6);
      const double baseline = ui_.y() + ui_.px(16);
      go = ui_.button_at("save/go", {ui_.column().x, baseline}, picture ? "Keep" : "Save", plot::Anchor::start, {},
                         !prompt.text.empty()) ||
           go;
      const bool cancel = ui_.button_at("save/cancel", {ui_.column().x + ui_.px(70), baseline}, "Cancel",
                                        plot::Anchor::start, {}, true, false, ui_.body_font());
      ui_.end_sheet();
      if (cancel) {
        close();
        return;
      }
      if (go && !prompt.text.empty()) {
        const auto then = prompt.then;
        if (attempt([&] {
              if (picture)
                desk_.keep_picture(target);
              else
                desk_.save(target);
            })) {
          desk_.prompt = {};
          if (then) then();
          return;
        }
      }
      break;
    }
    case Prompt::Kind::unsaved: {
      ui_.begin_sheet("unsaved", 480, prompt.problem.empty() ? 138 : 210);
      ui_.words("The case is not saved", ui_.title_font(), theme.ink);
      ui_.paragraph("What was changed in \u201C" + desk_.now().document.name() + "\u201D would be lost.",
                    ui_.body_font(), theme.ink);
      show_problem();
      ui_.space(12);
      const double baseline = ui_.y() + ui_.px(16);
      const auto then = prompt.then;
      const bool save = ui_.button_at("unsaved/save", {ui_.column().x, baseline}, "Save", plot::Anchor::start);
      const bool discard = ui_.button_at("unsaved/discard", {ui_.column().x + ui_.px(70), baseline},
                                         "Go on without saving", plot::Anchor::start, {}, true, false, ui_.body_font());
      const bool cancel = ui_.button_at("unsaved/cancel", {ui_.column().x + ui_.px(240), baseline}, "Cancel",
                                        plot::Anchor::start, {}, true, false, ui_.body_font());
      ui_.end_sheet();
      if (cancel) {
        close();
        return;
      }
      if (discard) {
        close();
        attempt(then);
        return;
      }
      if (save) {
        if (desk_.now().document.file().empty()) {
          desk_.ask(Prompt::Kind::save_as);
          desk_.prompt.then = then;
          return;
        }
        if (attempt([&] { desk_.save(); })) {
          close();
          attempt(then);
          return;
        }
      }
      break;
    }
    case Prompt::Kind::recover: {
      ui_.begin_sheet("recover", 560, 320);
      ui_.words("Work that was not saved", ui_.title_font(), theme.ink);
      ui_.paragraph("The program ended last time before this was saved:", ui_.body_font(), theme.ink);
      ui_.space(8);
      std::optional<std::size_t> take, drop;
      for (std::size_t k = 0; k < desk_.recoverable.size() && k < 5; ++k) {
        const Store::Left& left = desk_.recoverable[k];
        const double baseline = ui_.y() + ui_.px(16);
        ui_.canvas().text({ui_.column().x, baseline},
                          (left.file.empty() ? std::string("a case without a file") : left.file.filename().string()) +
                              ", " + left.when,
                          ui_.body_font(), theme.ink, plot::Anchor::start, 0);
        if (ui_.button_at("recover/take/" + std::to_string(k),
                          {ui_.column().x + ui_.column().width - ui_.px(80), baseline}, "Recover", plot::Anchor::end))
          take = k;
        if (ui_.button_at("recover/drop/" + std::to_string(k), {ui_.column().x + ui_.column().width, baseline},
                          "Forget", plot::Anchor::end, {}, true, false, ui_.body_font()))
          drop = k;
        ui_.space(28);
      }
      show_problem();
      ui_.space(6);
      const bool later = ui_.button("recover/later", "Decide later", "It is asked again at the next start.");
      ui_.end_sheet();
      if (take) {
        const Store::Left left = desk_.recoverable[*take];
        if (attempt([&] {
              Case recovered =
                  parse_case(left.case_text, left.file.empty() ? "recovered case" : left.file.string(), left.folder);
              // As a change of the file it came from, so that it counts as unsaved.
              std::error_code none;
              if (!left.file.empty() && std::filesystem::exists(left.file, none)) {
                desk_.open(left.file, 0);
                desk_.edit("Recover", "", [&](Case& c) { c = recovered; });
              } else {
                desk_.open(Case(recovered), {}, 0);
              }
              desk_.store().discard(left);
              desk_.recoverable.erase(desk_.recoverable.begin() + static_cast<std::ptrdiff_t>(*take));
            }))
          desk_.prompt = {};
        return;
      }
      if (drop) {
        desk_.store().discard(desk_.recoverable[*drop]);
        desk_.recoverable.erase(desk_.recoverable.begin() + static_cast<std::ptrdiff_t>(*drop));
        if (desk_.recoverable.empty()) close();
        return;
      }
      if (later) {
        close();
        return;
      }
      break;
    }
    case Prompt::Kind::profile: {
      ui_.begin_sheet("profile", 640, 600);
      ui_.words("Choose a profile", ui_.title_font(), theme.ink);
      ui_.space(2);
      const std::vector<std::string> places{"Wheel left", "Wheel right", "Rail left",
                                            "Rail right", "Both wheels", "Both rails"};
      int place = std::clamp(prompt.wheel_or_rail, 0, 5);
      ui_.choice("profile/place", "For", places, place);
      prompt.wheel_or_rail = place;
      const bool wheel = place < 2 || place == 4;
      std::string wanted;
      if (ui_.text_field("profile/text", prompt.text, "a file of points, a definition, or standard:NAME", fresh) ==
          Change::done)
        wanted = prompt.text;
      show_problem();
      ui_.heading("STANDARDS");
      ui_.space(2);
      double x = ui_.column().x;
      for (const auto& [name, title] : standard_profiles()) {
        const bool is_wheel = name.starts_with("S") || name.starts_with("coned");
        if (is_wheel != wheel) continue;
        if (ui_.button_at("standard/" + name, {x, ui_.y() + ui_.px(16)}, name, plot::Anchor::start, title, true, false,
                          ui_.body_font()))
          wanted = "standard:" + name;
        x += ui_.canvas().measure(name, ui_.body_font()).width + ui_.px(18);
      }
      ui_.space(32);
      const double height = ui_.column().y + ui_.column().height - ui_.y() - ui_.px(78);
      if (height > ui_.px(60) &&
          file_list("profile/list", {".csv", ".txt", ".dat", ".toml", ".asc", ".prf"}, height, prompt.text))
        wanted = prompt.text;
      ui_.space(8);
      const double baseline = ui_.y() + ui_.px(16);
      if (ui_.button_at("profile/go", {ui_.column().x, baseline}, "Use it", plot::Anchor::start, {},
                        !prompt.text.empty()))
        wanted = prompt.text;
      const bool cancel = ui_.button_at("profile/cancel", {ui_.column().x + ui_.px(80), baseline}, "Cancel",
                                        plot::Anchor::start, {}, true, false, ui_.body_font());
      ui_.end_sheet();
      if (cancel) {
        close();
        return;
      }
      if (!wanted.empty()) {
        const std::string spec = wanted.starts_with("standard:") ? wanted : home_of(wanted).string();
        const Case& c = desk_.now().document.current();
        if (attempt([&] {
              // Read first: a profile that cannot be used does not become part of the case.
              (void)load_profile(spec, wheel ? ProfileKind::wheel : ProfileKind::rail, {}, c.folder);
              desk_.edit("Choose a profile", "", [&](Case& e) {
                for (int k = 0; k < 2; ++k) {
                  if (place == k || place == 4) e.wheels[k] = {spec, {}};
                  if (place == k + 2 || place == 5) e.rails[k] = {spec, {}};
                }
              });
            })) {
          desk_.prompt = {};
          return;
        }
      }
      break;
    }
  }
  if (ui_.escape_pressed()) close();
}

}  // namespace runband
