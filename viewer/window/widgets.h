// The few controls that every panel is made of: hair-line sliders with a ring, buttons that are words, rows of
// numbers. Each is known by an id, so that keys reach it and a test finds it.
#pragma once

#include <functional>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "viewer/plot/plot.h"
#include "viewer/window/screen.h"
#include "viewer/window/screen_canvas.h"

namespace runband {

enum class Change { none, changing, done };

/// What moved in a plain rectangle that takes the mouse.
struct Grip {
  bool hovered = false, pressed = false, held = false, released = false, double_clicked = false;
  double dx = 0, dy = 0;  ///< since the last frame, while held
  plot::Point at;         ///< the pointer
};

/// Takes the last letter (not byte) of UTF-8 words away.
void drop_last_letter(std::string& words);
/// The words, cut at a letter and ended by an ellipsis where they are wider than `room`.
std::string cut_to_fit(const plot::Canvas& canvas, std::string words, const plot::Font& font, double room);

/// Made once; lives as long as the screen. Panels lay out from top to bottom in a column.
class Ui {
 public:
  explicit Ui(Screen& screen) : screen_(screen) {}

  void begin_frame(const plot::Theme& theme);
  void end_frame();

  Screen& screen() { return screen_; }
  const plot::Theme& theme() const { return *theme_; }
  double px(double units) const { return units * screen_.scale(); }
  plot::Font label_font() const { return {px(kLabelSize), true, 0.07}; }
  plot::Font note_font() const { return {px(kNoteSize), false, 0}; }
  plot::Font body_font(bool strong = false) const { return {px(kBodySize), strong, 0}; }
  plot::Font title_font() const { return {px(kTitleSize), true, 0}; }

  // ---- Areas

  /// A region that panels draw in; scrolls if its content is higher. Everything until end_area() belongs to it.
  void begin_area(const std::string& id, const plot::Box& box, double padding_x, double padding_y);
  void end_area();
  /// A sheet over everything, with the rest dimmed. Escape asks to close it. @return box inside.
  bool begin_sheet(const std::string& id, double width, double height);
  void end_sheet();
  /// The rectangle left for content, in pixels; its x and width hold for the whole column.
  plot::Box column() const { return column_; }
  double y() const { return y_; }
  void set_y(double y_px) { y_ = y_px; }
  void space(double units) { y_ += px(units); }
  /// Narrows the column until the matching call with the earlier box.
  void set_column(const plot::Box& column) { column_ = column; }
  ScreenCanvas canvas();
  ImDrawList* list();

  // ---- Words

  void heading(const std::string& words);
  void rule();
  void words(const std::string& words, const plot::Font& font, const plot::Colour& colour);
  /// Wrapped to the column.
  void paragraph(const std::string& words, const plot::Font& font, const plot::Colour& colour);
  double paragraph_height(const std::string& words, const plot::Font& font, double width);
  /// Name at the left, number right-aligned, unit in quiet words beside it, a note below.
  void value(const std::string& id, const std::string& name, const std::string& number, const std::string& unit,
             const std::string& note = {}, const std::string& help = {});
  void caution(const std::string& title, const std::string& text, bool strong);

  // ---- Controls

  bool button(const std::string& id, const std::string& words, const std::string& help = {}, bool enabled = true,
              bool strong = false);
  /// At a place of its own; `anchor` says which end is at x. @return pressed
  bool button_at(const std::string& id, plot::Point baseline, const std::string& words, plot::Anchor anchor,
                 const std::string& help = {}, bool enabled = true, bool chosen = false,
                 std::optional<plot::Font> font = {});
  bool check(const std::string& id, const std::string& words, bool& on, const std::string& help = {},
             bool enabled = true);
  /// A row: name, number, unit, hair line with a ring. Double click or Enter types a number.
  Change slider(const std::string& id, const std::string& name, double& value, const plot::Range& range, int decimals,
                const std::string& unit, const std::string& help = {});
  /// Typed number in a row without a hair line.
  Change number(const std::string& id, const std::string& name, double& value, const plot::Range& range, int decimals,
                const std::string& unit, const std::string& help = {});
  /// A row of a name and the chosen words; a list drops down.
  bool choice(const std::string& id, const std::string& name, const std::vector<std::string>& choices, int& chosen,
              const std::string& help = {});
  /// Words that switch: the chosen one is underlined.
  bool tabs(const std::string& id, plot::Point baseline, const std::vector<std::string>& names, int& chosen);
  /// @return done on Enter or when left changed
  Change text_field(const std::string& id, std::string& text, const std::string& hint, bool focus = false);
  /// What is laid out over it later takes the pointer first.
  Grip grip(const std::string& id, const plot::Box& box, bool focusable = false);
  /// A divider that can be dragged; `size` is what stands before (or, if `inverse`, after) it in layout units.
  bool splitter(const std::string& id, const plot::Box& box, bool across, bool inverse, double& size, double least,
                double most);
  void tooltip(const std::string& words);
  /// Under the pointer now, whatever is beneath.
  bool hovers(const plot::Box& box) const;

  // ---- For keys and tests

  /// Where the control of this id was in the last frame.
  std::optional<plot::Box> where(const std::string& id) const;
  std::vector<std::string> ids() const;
  const std::string& focus() const { return focus_; }
  void set_focus(const std::string& id) { focus_ = id; }
  bool sheet_open() const { return sheet_; }
  bool escape_pressed() const { return escape_; }
  /// A value is being dragged or typed: a gesture that undo takes as one.
  bool busy() const;
  /// The focus was moved by keys: arrows and the space bar belong to the focused control.
  bool keys_to_focus() const { return show_focus_; }

 private:
  struct Item {
    bool hovered = false, pressed = false, clicked = false, held = false, entered = false, released = false;
    int step = 0;  ///< left and right keys while focused
  };
  Item item(const std::string& id, const plot::Box& box, bool focusable, bool beneath = false);
  void ring(const plot::Box& box);
  void help_for(const Item& it, const std::string& help);
  Change typed(const std::string& id, const plot::Box& box, double& value, const plot::Range& range, int decimals);

  Screen& screen_;
  const plot::Theme* theme_ = nullptr;
  plot::Box column_;
  double y_ = 0, top_ = 0;
  std::vector<std::tuple<plot::Box, double, double>> outer_;
  double padding_y_ = 0;
  std::map<std::string, plot::Box> places_, last_places_;
  std::vector<std::string> order_, last_order_;
  std::string focus_, typing_id_, typing_text_, open_choice_, held_;
  int choice_cursor_ = 0;
  bool typing_fresh_ = false, focus_seen_ = false, sheet_ = false, escape_ = false, was_held_ = false;
  bool show_focus_ = false;
  std::map<std::string, std::string> fields_;
};

}  // namespace runband
