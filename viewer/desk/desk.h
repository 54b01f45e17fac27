// The desk: one or two documents, their latest answers, what is looked at, and everything that can be done.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "viewer/desk/actions.h"
#include "viewer/desk/document.h"
#include "viewer/desk/live_solver.h"
#include "viewer/desk/store.h"
#include "viewer/desk/view.h"

namespace runband {

struct DeskOptions {
  std::filesystem::path state_folder;  ///< empty: nothing outlives the program
  const AnalysisRegistry* registry = &installed_analyses();
  std::function<void()> wake;  ///< called from another thread when there is something new
};

/// A question to the user; the window shows it and calls back.
struct Prompt {
  enum class Kind { none, open, save_as, keep_picture, unsaved, recover, profile, palette, shortcuts, about };
  Kind kind = Kind::none;
  std::string text;            ///< typed so far
  int wheel_or_rail = 0;       ///< profile: 0 left wheel, 1 right wheel, 2 left rail, 3 right rail, +4 for both sides
  std::function<void()> then;  ///< unsaved: what was wanted
  std::string problem;         ///< why the last try failed
};

class Desk {
 public:
  explicit Desk(DeskOptions options);
  ~Desk();

  // ---- Documents

  struct Place {
    Document document;
    std::shared_ptr<const Solution> solution;  ///< the latest; of an earlier state while behind
    std::shared_ptr<const Traverse> traverse;
    std::optional<Failure> failure;         ///< why the state asked for has no solution
    std::uint64_t asked = 0;                ///< document revision last asked of the solver
    std::uint64_t question = 0, shown = 0;  ///< solver revision asked, and that of `solution`
    bool whole = false;                     ///< `solution` has every analysis
    double latency_ms = 0, solved_at_s = 0;
    bool used = false;
  };
  Place& place(int slot) { return places_[slot]; }
  const Place& place(int slot) const { return places_[slot]; }
  Place& now() { return places_[active_]; }
  const Place& now() const { return places_[active_]; }
  int active() const { return active_; }
  void swap();  ///< the other document comes to the front
  bool two() const { return places_[0].used && places_[1].used; }
  bool behind(int slot) const { return places_[slot].shown != places_[slot].question; }

  /// @throws Error; the desk stays as it was.
  void open(const std::filesystem::path& file, int slot = 0);
  void open(Case opened, const std::filesystem::path& file, int slot = 0);
  void close_second();
  void save(const std::filesystem::path& file = {});
  /// Files dropped on the window: a case is opened, a profile asks where it belongs, a picture gives its case.
  void dropped(const std::vector<std::string>& files);

  /// One edit of the active case.
  void edit(const std::string& what, const std::string& merge, const std::function<void(Case&)>& change);
  void edit_view(const std::string& what, const std::string& merge, const std::function<void(View&)>& change);
  void end_gesture();
  bool can_undo() const { return at_ > 0; }
  bool can_redo() const { return at_ < steps_.size(); }
  void undo();
  void redo();
  std::string undo_words() const { return can_undo() ? steps_[at_ - 1].what : ""; }
  std::string redo_words() const { return can_redo() ? steps_[at_].what : ""; }
  bool unsaved() const { return places_[0].document.unsaved() || (places_[1].used && places_[1].document.unsaved()); }

  // ---- What is looked at

  const View& view() const { return view_; }
  Layout& layout() { return store_.layout; }
  const Layout& layout() const { return store_.layout; }
  const plot::Theme& theme() const { return plot::theme(store_.layout.theme); }
  /// Index of the looked-at contact in a solution; the hardest pressed if the chosen one is not there.
  std::optional<std::size_t> contact_of(const Solution&) const;
  /// Every field and volume that the looked-at contact has: "pressure" first, then "analysis.name" with its title.
  std::vector<std::pair<std::string, std::string>> fields() const;

  // ---- Time

  /// Takes answers, asks what changed, plays, keeps safe. @return true if something to be shown changed
  bool tick(double now_s);
  double now_s() const { return now_s_; }
  /// Solves and waits (pictures, tests).
  void settle();
  LiveSolver& solver() { return *solver_; }
  const AnalysisRegistry& registry() const { return *options_.registry; }

  bool playing() const { return playing_; }
  void play(bool on);

  // ---- Doing

  Actions& actions() { return actions_; }
  Prompt prompt;
  void ask(Prompt::Kind kind, std::string text = {});
  /// Runs `then` at once, or after the question about unsaved work.
  void guarded(std::function<void()> then);
  bool quit_asked() const { return quit_; }
  void quit() { quit_ = true; }
  void ask_to_quit();
  /// A sentence that stays in the status line for a while.
  void say(const std::string& words, bool warning = false);
  const std::string& said() const { return said_; }
  bool said_warning() const { return said_warning_; }
  Store& store() { return store_; }
  std::vector<Store::Left> recoverable;
  /// Draws what is shown into a file; set by the window. @throws Error
  std::function<void(const std::filesystem::path&)> draw_picture;
  /// Where the camera goes; set by the window.
  std::function<void(NamedView)> look_from;
  void keep_picture(const std::filesystem::path& file);
  /// A name for the picture of what is shown.
  std::string picture_name() const;

  /// What the title and the status line say.
  std::string title() const;
  std::string status() const;

 private:
  void add_actions();
  void ask_solver(int slot);
  /// One step of the desk's history: of a document or of the view.
  struct Step {
    int slot = -1;  ///< -1: the view
    std::string what, merge;
    View before, after;
  };
  void push(Step step);
  void forget_steps_of(int slot);

  DeskOptions options_;
  Store store_;
  std::unique_ptr<LiveSolver> solver_;
  Place places_[kSlots];
  int active_ = 0;
  View view_;
  std::vector<Step> steps_;
  std::size_t at_ = 0;
  bool gesture_over_ = true;
  Actions actions_;
  bool playing_ = false, quit_ = false;
  double now_s_ = 0, played_from_s_ = 0, play_from_mm_ = 0, kept_at_s_ = 0, said_at_s_ = -100;
  std::uint64_t kept_revision_[kSlots] = {0, 0};
  std::string said_;
  bool said_warning_ = false;
};

/// "lateral 3.25 mm, yaw 0.0 mrad".
std::string short_state(const Case&);

}  // namespace runband
