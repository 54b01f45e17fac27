// Every action of the desk, with its key.
#include <algorithm>
#include <array>
#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "viewer/desk/desk.h"
#include "viewer/scene/fields.h"

namespace runband {

void Desk::add_actions() {
  const auto none = std::function<bool()>{};
  const auto has_wheelset = [this] { return now().used && !now().document.current().bench; };
  const auto add = [this](const char* id, const char* words, const char* group, Chord chord, const char* help,
                          std::function<void()> run, std::function<bool()> enabled = {}, bool while_typing = false) {
    actions_.add({id, words, group, std::move(chord), help, std::move(run), std::move(enabled), while_typing});
  };
  // File
  add(
      "file.open", "Open a case", "File", {"O", true}, "Reads a case file, or a picture that carries its case.",
      [this] { guarded([this] { ask(Prompt::Kind::open); }); }, none, true);
  add("file.open_second", "Open a case beside this one", "File", {"O", true, true},
      "For comparing: the second case stands beside the first.", [this] {
        ask(Prompt::Kind::open);
        prompt.wheel_or_rail = -1;
      });
  add("file.demo", "Open the demo case", "File", {}, "Curve 12 of the Skerry Line, a railway that does not exist.",
      [this] { guarded([this] { open(data_folder() / "demo" / "curve12.toml", active_); }); });
  add(
      "file.save", "Save", "File", {"S", true}, "Writes the case to its file.", [this] { save(); }, none, true);
  add(
      "file.save_as", "Save under another name", "File", {"S", true, true}, "Writes the case to a new file.",
      [this] { ask(Prompt::Kind::save_as, now().document.file().string()); }, none, true);
  add(
      "file.keep_picture", "Keep this picture", "File", {"E", true},
      "Draws what is shown, with its numbers and pins, into a file that carries the case.",
      [this] { ask(Prompt::Kind::keep_picture, picture_name()); }, none, true);
  add(
      "file.quit", "Quit", "File", {"Q", true}, "Ends the program; unsaved work is asked about.",
      [this] { ask_to_quit(); }, none, true);
  // Case
  add(
      "case.undo", "Undo", "Case", {"Z", true}, "Takes back the last step.", [this] { undo(); },
      [this] { return can_undo(); });
  add(
      "case.redo", "Redo", "Case", {"Z", true, true}, "Does again what was taken back.", [this] { redo(); },
      [this] { return can_redo(); });
  add(
      "case.redo_too", "Redo (second key)", "Case", {"Y", true}, "Does again what was taken back.", [this] { redo(); },
      [this] { return can_redo(); });
  const auto move = [this](double by) {
    edit("Move the wheelset", "keys.lateral",
         [by](Case& c) { c.state.lateral_mm.assign(1, std::round((c.state.lateral_mm.front() + by) * 1000) / 1000); });
  };
  add(
      "case.left", "Move the wheelset to the left", "Case", {"Left"}, "By 0.1 mm.", [move] { move(0.1); },
      has_wheelset);
  add(
      "case.right", "Move the wheelset to the right", "Case", {"Right"}, "By 0.1 mm.", [move] { move(-0.1); },
      has_wheelset);
  add(
      "case.left_far", "Move the wheelset far to the left", "Case", {"Left", false, true}, "By 1 mm.",
      [move] { move(1); }, has_wheelset);
  add(
      "case.right_far", "Move the wheelset far to the right", "Case", {"Right", false, true}, "By 1 mm.",
      [move] { move(-1); }, has_wheelset);
  add(
      "case.centre", "Centre the wheelset", "Case", {"0"}, "Lateral displacement and yaw become zero.",
      [this] {
        edit("Centre the wheelset", "", [](Case& c) {
          c.state.lateral_mm.assign(1, 0);
          c.state.yaw_mrad = 0;
        });
      },
      has_wheelset);
  add(
      "case.play", "Play the movement", "Case", {"Space"}, "The wheelset sways across the track; again stops it.",
      [this] { play(!playing_); }, has_wheelset);
  add("case.method", "Switch between ellipse and half-space", "Case", {"H"},
      "Hertz's ellipse, or the elastic half-space that takes the profiles as they are.", [this] {
        edit("Switch the method", "", [](Case& c) {
          c.patch.method = c.patch.method == PatchMethod::hertz ? PatchMethod::half_space : PatchMethod::hertz;
        });
      });
  add("case.finer", "Finer grid on the patch", "Case", {"G", false, true}, "Twice the cells, up to 128.",
      [this] { edit("Finer grid", "", [](Case& c) { c.patch.cells = std::min(128, c.patch.cells * 2); }); });
  add("case.coarser", "Coarser grid on the patch", "Case", {"G"}, "Half the cells, down to 16.",
      [this] { edit("Coarser grid", "", [](Case& c) { c.patch.cells = std::max(16, c.patch.cells / 2); }); });
  add(
      "case.cancel", "Stop solving", "Case", {}, "Gives up the answer that is being worked on.",
      [this] {
        solver_->cancel(active_);
        now().question = now().shown;
        say("Stopped; what is shown is the state before");
      },
      [this] { return solver_->busy(active_); });
  // View
  const auto show = [this](Sheet sheet) {
    edit_view("Look at another sheet", "", [sheet](View& v) { v.sheet = sheet; });
  };
  const char* digits[] = {"1", "2", "3", "4", "5"};
  const char* ids[] = {"view.scene", "view.profiles", "view.curves", "view.analyses", "view.compare"};
  const char* words[] = {"Show the scene", "Show the profiles", "Show the curves", "Show the analyses",
                         "Show the comparison"};
  for (int k = 0; k < 5; ++k)
    add(ids[k], words[k], "View", {digits[k]}, "Changes what the middle of the window shows.",
        [show, k] { show(static_cast<Sheet>(k)); });
  const std::pair<NamedView, std::array<const char*, 3>> views[] = {
      {NamedView::home, {"view.home", "Look from home", "Home"}},
      {NamedView::front, {"view.front", "Look from the front", "F1"}},
      {NamedView::side, {"view.side", "Look from the side", "F2"}},
      {NamedView::top, {"view.top", "Look from above", "F3"}},
      {NamedView::along_rail, {"view.along_rail", "Look along the rail", "F4"}},
      {NamedView::left_contact, {"view.left_contact", "Look at the left contact", "F5"}},
      {NamedView::right_contact, {"view.right_contact", "Look at the right contact", "F6"}}};
  for (const auto& [named, names] : views) {
    add(names[0], names[1], "View", {names[2]}, "Places the camera.", [this, named = named] {
      if (named == NamedView::left_contact || named == NamedView::right_contact)
        edit_view("Look at a contact", "",
                  [&](View& v) { v.contact = named == NamedView::left_contact ? "left" : "right"; });
      if (look_from) look_from(named);
    });
  }
  add("view.other_contact", "Look at the other contact", "View", {"C"}, "Left, right, and every loaded zone in turn.",
      [this] {
        if (!now().solution) return;
        const Solution& solution = *now().solution;
        std::vector<std::string> names;
        for (const Contact& contact : solution.contacts)
          if (contact.patch)
            names.push_back(contact.on_bench ? "bench"
                                             : std::string(side_name(contact.zone.side)) + " " + contact.zone.zone);
        if (names.empty()) return;
        std::size_t next = 0;
        if (const auto index = contact_of(solution)) {
          const Contact& contact = solution.contacts[*index];
          const std::string name =
              contact.on_bench ? "bench" : std::string(side_name(contact.zone.side)) + " " + contact.zone.zone;
          next = (static_cast<std::size_t>(std::find(names.begin(), names.end(), name) - names.begin()) + 1) %
                 names.size();
        }
        edit_view("Look at the other contact", "", [&](View& v) { v.contact = names[next]; });
      });
  add("view.next_field", "Show the next field", "View", {"F"}, "Pressure, and every field that an analysis gives.",
      [this] {
        const auto all = fields();
        std::size_t at = 0;
        while (at < all.size() && all[at].first != view_.field) ++at;
        edit_view("Show another field", "", [&](View& v) { v.field = all[(at + 1) % all.size()].first; });
      });
  add("view.lock_range", "Lock the colour range", "View", {"L"},
      "Keeps the range of the colours while the state changes, so that states can be compared.", [this] {
        edit_view("Lock the range", "", [this](View& v) {
          if (v.locked_range) {
            v.locked_range.reset();
            return;
          }
          if (!now().solution) return;
          const auto index = contact_of(*now().solution);
          const Field* field = index ? field_named(now().solution->contacts[*index], v.field) : nullptr;
          if (field == nullptr) return;
          plot::Range range{0, 0};
          for (const double value : field->values) range.include(value);
          v.locked_range = range;
        });
      });
  add("view.detail", "Turn the detail view", "View", {"D"}, "Flat, as relief, or hidden.", [this] {
    edit_view("Turn the detail view", "",
              [](View& v) { v.detail = static_cast<DetailStyle>((static_cast<int>(v.detail) + 1) % 3); });
  });
  add("view.section", "Cut the scene", "View", {"X"}, "Takes away what lies ahead of the contact.",
      [this] { edit_view("Cut the scene", "", [](View& v) { v.section_cut = !v.section_cut; }); });
  add("view.glass", "Make the wheel glass or solid", "View", {"W"}, "The wheel over the looked-at contact.", [this] {
    edit_view("Change the wheel's glass", "", [](View& v) { v.wheel_opacity = v.wheel_opacity < 0.9 ? 1.0 : 0.34; });
  });
  add("view.steps", "Colours in steps or flowing", "View", {"S"},
      "Ten even steps are easier to name; flowing shows more.",
      [this] { edit_view("Colours in steps", "", [](View& v) { v.steps = v.steps == 0 ? 10 : 0; }); });
  add(
      "view.clear_pins", "Take away all pins", "View", {}, "Removes the values that were pinned.",
      [this] { edit_view("Take away all pins", "", [](View& v) { v.pins.clear(); }); },
      [this] { return !view_.pins.empty(); });
  add("view.theme", "Light or dark", "View", {"T"}, "Warm paper for a projector, dark for a dim room.", [this] {
    layout().theme = layout().theme == plot::ThemeName::dark ? plot::ThemeName::light : plot::ThemeName::dark;
  });
  const auto scale = [this](double by) {
    layout().text_scale = by == 0 ? 1.0 : std::clamp(layout().text_scale + by, 0.75, 2.0);
  };
  add(
      "view.larger", "Larger words", "View", {"+", true}, "Everything in the window grows.", [scale] { scale(0.125); },
      none, true);
  add(
      "view.smaller", "Smaller words", "View", {"-", true}, "Everything in the window shrinks.",
      [scale] { scale(-0.125); }, none, true);
  add(
      "view.plain_size", "Words in plain size", "View", {"0", true}, "Back to the ordinary size.",
      [scale] { scale(0); }, none, true);
  add("view.left_column", "Show or hide the left column", "View", {"[", true}, "State, profiles and analyses.",
      [this] { layout().show_left = !layout().show_left; });
  add("view.right_column", "Show or hide the right column", "View", {"]", true}, "The numbers.",
      [this] { layout().show_right = !layout().show_right; });
  add("view.strip", "Show or hide the strip", "View", {"B", true}, "The ruler along the bottom.",
      [this] { layout().show_strip = !layout().show_strip; });
  // Compare
  add(
      "compare.copy", "Set this state aside to compare", "Compare", {"K"},
      "A copy of the case becomes the second; go on with the first and see the difference.",
      [this] {
        Case copy = now().document.current();
        if (!copy.title.empty()) copy.title += " (set aside)";
        const int from = active_;
        open(std::move(copy), {}, 1);
        active_ = from == 1 ? 1 : 0;
      },
      [this] { return now().used && active_ == 0; });
  add(
      "compare.swap", "Swap A and B", "Compare", {"A"}, "The other case comes to the front.", [this] { swap(); },
      [this] { return two(); });
  add(
      "compare.overlay", "Overlay or side by side", "Compare", {"V"},
      "Both cases in one picture, or beside each other.",
      [this] { edit_view("Overlay", "", [](View& v) { v.compare_overlaid = !v.compare_overlaid; }); },
      [this] { return two(); });
  add(
      "compare.difference", "Show the difference", "Compare", {"M"}, "A map of B minus A.",
      [this] { edit_view("Difference", "", [](View& v) { v.compare_difference = !v.compare_difference; }); },
      [this] { return two(); });
  add(
      "compare.close", "Put the second case away", "Compare", {}, "Ends the comparison.",
      [this] {
        if (places_[1].document.unsaved() && !places_[1].document.file().empty())
          guarded([this] { close_second(); });
        else
          close_second();
      },
      [this] { return two(); });
  // Help
  add(
      "help.palette", "Find an action", "Help", {"K", true}, "Type what you want to do.",
      [this] { ask(Prompt::Kind::palette); }, none, true);
  add(
      "help.palette_too", "Find an action (second key)", "Help", {"P", true}, "Type what you want to do.",
      [this] { ask(Prompt::Kind::palette); }, none, true);
  add("help.shortcuts", "Show all keys", "Help", {"?"}, "Every action and its key.",
      [this] { ask(Prompt::Kind::shortcuts); });
  add("help.about", "About Runband", "Help", {}, "Version, licence, and what its numbers are not.",
      [this] { ask(Prompt::Kind::about); });
}

}  // namespace runband
