// The window's one step: events in, panels laid out, a frame drawn.
#pragma once

#include <map>
#include <memory>
#include <optional>
#include <string>

#include "viewer/desk/desk.h"
#include "viewer/scene/live_scene.h"
#include "viewer/window/widgets.h"

namespace runband {

/// Part of a plot that is looked at, and what is under the pointer.
struct PlotView {
  std::optional<plot::Range> x, y;  ///< empty: all
  bool log_x = false, log_y = false;
};

/// What was read under the pointer, for the probe's read-out.
struct Probed {
  std::string contact;
  double x_mm = 0, s_mm = 0;
  plot::Point at;
  std::vector<std::array<std::string, 3>> rows;  ///< title, number, unit
  std::string field_words;                       ///< of the field shown
};

/// Everything the panels share. Lives as long as the window.
class Frame {
 public:
  Frame(Host& host, Desk& desk);
  ~Frame();
  Frame(const Frame&) = delete;
  Frame& operator=(const Frame&) = delete;

  /// One turn of the loop. @return seconds that the loop may sleep until the next
  double step();
  /// Something changed that came neither by an event nor from the solver.
  void refresh() { needs_frame_ = true; }
  /// Steps until nothing waits: no events, no answers to come, the settled picture drawn.
  void settle(int most = 2000);

  Desk& desk() { return desk_; }
  Ui& ui() { return ui_; }
  Screen& screen() { return screen_; }
  LiveScene* scene() { return scene_.get(); }
  PlotView& plot_view(const std::string& id) { return plot_views_[id]; }
  const std::optional<Probed>& probed() const { return probed_; }
  /// Number of frames drawn.
  long frames() const { return frames_; }

  // Parts, each in its file. Boxes in pixels.
  void draw_header(const plot::Box& box);
  void draw_left_column(const plot::Box& box);
  void draw_right_column(const plot::Box& box);
  void draw_strip(const plot::Box& box);
  void draw_scene_sheet(const plot::Box& box);
  void draw_profiles_sheet(const plot::Box& box);
  void draw_curves_sheet(const plot::Box& box);
  void draw_analyses_sheet(const plot::Box& box);
  void draw_compare_sheet(const plot::Box& box);
  void draw_prompts();
  /// What is shown, as a picture of paper size. @throws Error
  void draw_picture(const std::filesystem::path& file);

  /// A plot in the window: hover read-out, wheel zooms, drag pans, double click resets, Ctrl+C copies the values.
  plot::Frame draw_live_plot(const std::string& id, plot::Plot plot, const plot::Box& box,
                             const std::optional<plot::Margins>& margins = std::nullopt);
  bool file_list(const std::string& id, const std::vector<std::string>& endings, double height, std::string& text);
  const Profile* reference_for(ProfileKind kind);
  void draw_probe(const plot::Box& within);
  void say_copied(const std::string& what) { desk_.say("Copied " + what); }

 private:
  void handle_keys();
  void set_title();

  Screen screen_;
  Ui ui_;
  Desk& desk_;
  std::unique_ptr<LiveScene> scene_;
  std::map<std::string, PlotView> plot_views_;
  std::optional<Probed> probed_;
  std::string title_, hovered_plot_;
  double last_input_s_ = -10, last_drawn_s_ = -10;
  bool needs_frame_ = true, settled_ = false;
  long frames_ = 0;
  bool was_busy_ = false;

  // Of single panels.
  int palette_cursor_ = 0;
  bool prompt_fresh_ = false;
  Prompt::Kind last_prompt_ = Prompt::Kind::none;
  std::string prompt_folder_;
  std::string chosen_analysis_;
  int profile_side_ = 0;
  int profile_plot_ = 0;
  int curve_group_ = 0;
  std::pair<bool, std::shared_ptr<const Profile>> references_[2];
  plot::Point pressed_at_{0, 0};
  bool detail_held_ = false;
  double relief_turn_deg_ = 30, relief_tilt_deg_ = 40;
};

/// Every field of the contact at a place of its patch; empty outside it.
std::optional<Probed> probe(const Desk& desk, const Contact& contact, double x_mm, double s_mm);

/// The title of a contact as a tab: "left tread".
std::string contact_title(const Contact& contact);
/// First letter large.
std::string capitalised(std::string words);

}  // namespace runband
