#include "viewer/desk/desk.h"

#include <algorithm>
#include <cmath>
#include <cstdio>
#include <numbers>

#include "core/base/error.h"
#include "core/base/text.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

constexpr double kKeepAfter_s = 3;
constexpr double kSay_s = 6;
constexpr double kPlayPeriod_s = 9, kPlayReach_mm = 6;
constexpr std::size_t kMostSteps = 4000;

bool is_profile_file(const std::filesystem::path& file) {
  std::string ending = file.extension().string();
  std::transform(ending.begin(), ending.end(), ending.begin(),
                 [](unsigned char c) { return static_cast<char>(std::tolower(c)); });
  return ending == ".csv" || ending == ".txt" || ending == ".dat" || ending == ".asc" || ending == ".prf";
}

}  // namespace

std::string short_state(const Case& c) {
  if (c.bench) return "bench, " + plot::number(c.bench->normal_force_N * 1e-3, 1) + "\u2009kN";
  return "lateral " + plot::number(c.state.lateral_mm.empty() ? 0.0 : c.state.lateral_mm.front(), 2) +
         "\u2009mm, yaw " + plot::number(c.state.yaw_mrad, 1) + "\u2009mrad";
}

Desk::Desk(DeskOptions options)
    : options_(std::move(options)),
      store_(options_.state_folder),
      solver_(std::make_unique<LiveSolver>(*options_.registry, options_.wake)) {
  add_actions();
  recoverable = store_.left_behind();
  if (!recoverable.empty()) prompt.kind = Prompt::Kind::recover;
}

Desk::~Desk() {
  for (int slot = 0; slot < kSlots; ++slot) store_.forget(slot);
}

// ---- Documents

void Desk::open(const std::filesystem::path& file, int slot) {
  Case opened = load_case(file);
  // A picture gives its case, but is not the place to save it to.
  open(std::move(opened), file.extension() == ".toml" ? file : std::filesystem::path{}, slot);
  store_.opened(file);
}

void Desk::open(Case opened, const std::filesystem::path& file, int slot) {
  // The window stands at one place; a traverse is what its strip shows.
  const double lateral = opened.state.lateral_mm.empty() ? 0.0 : opened.state.lateral_mm.front();
  opened.state.lateral_mm.assign(1, lateral);
  forget_steps_of(slot);
  solver_->cancel(slot);
  places_[slot] = {};
  places_[slot].document = Document(std::move(opened), file);
  places_[slot].used = true;
  active_ = slot;
  play(false);
  store_.forget(slot);
  kept_revision_[slot] = 0;
  ask_solver(slot);
}

void Desk::close_second() {
  if (!places_[1].used) return;
  solver_->cancel(1);
  forget_steps_of(1);
  places_[1] = {};
  store_.forget(1);
  active_ = 0;
}

void Desk::swap() {
  if (!two()) return;
  active_ = 1 - active_;
  say("Now: " + now().document.name());
}

void Desk::save(const std::filesystem::path& file) {
  Document& document = now().document;
  std::filesystem::path to = file.empty() ? document.file() : file;
  if (to.empty()) {
    ask(Prompt::Kind::save_as);
    return;
  }
  if (to.extension().empty()) to += ".toml";
  document.save_as(to);
  store_.opened(to);
  store_.forget(active_);
  say("Saved " + to.filename().string());
}

void Desk::dropped(const std::vector<std::string>& files) {
  for (const std::string& file : files) {
    if (is_profile_file(file)) {
      ask(Prompt::Kind::profile, file);
      continue;
    }
    guarded([this, file] {
      try {
        open(file, active_);
      } catch (const Error& problem) {
        say(problem.message() + " " + problem.cure(), true);
      }
    });
  }
}

// ---- Steps

void Desk::push(Step step) {
  steps_.resize(at_);
  steps_.push_back(std::move(step));
  if (steps_.size() > kMostSteps) steps_.erase(steps_.begin());
  at_ = steps_.size();
}

void Desk::edit(const std::string& what, const std::string& merge, const std::function<void(Case&)>& change) {
  Document& document = now().document;
  const bool joins = !gesture_over_ && !merge.empty() && at_ > 0 && at_ == steps_.size() &&
                     steps_[at_ - 1].slot == active_ && steps_[at_ - 1].merge == merge;
  if (!joins) document.end_gesture();
  if (!document.edit(what, merge, change)) return;
  ask_solver(active_);  // at once, not with the next frame
  if (!joins) push({active_, what, merge, {}, {}});
  gesture_over_ = merge.empty();
}

void Desk::edit_view(const std::string& what, const std::string& merge, const std::function<void(View&)>& change) {
  const View before = view_;
  change(view_);
  const bool joins = !gesture_over_ && !merge.empty() && at_ > 0 && at_ == steps_.size() &&
                     steps_[at_ - 1].slot == -1 && steps_[at_ - 1].merge == merge;
  if (joins) {
    steps_[at_ - 1].after = view_;
  } else {
    now().document.end_gesture();
    push({-1, what, merge, before, view_});
  }
  gesture_over_ = merge.empty();
}

void Desk::end_gesture() {
  gesture_over_ = true;
  for (Place& place : places_) place.document.end_gesture();
}

void Desk::undo() {
  if (!can_undo()) return;
  play(false);
  const Step& step = steps_[--at_];
  if (step.slot < 0) {
    view_ = step.before;
  } else {
    places_[step.slot].document.undo();
    active_ = step.slot;
  }
  gesture_over_ = true;
  say("Undone: " + step.what);
}

void Desk::redo() {
  if (!can_redo()) return;
  play(false);
  const Step& step = steps_[at_++];
  if (step.slot < 0) {
    view_ = step.after;
  } else {
    places_[step.slot].document.redo();
    active_ = step.slot;
  }
  gesture_over_ = true;
  say("Done again: " + step.what);
}

void Desk::forget_steps_of(int slot) {
  std::vector<Step> kept;
  std::size_t at = 0;
  for (std::size_t i = 0; i < steps_.size(); ++i) {
    if (steps_[i].slot == slot) continue;
    if (i < at_) ++at;
    kept.push_back(std::move(steps_[i]));
  }
  steps_ = std::move(kept);
  at_ = at;
}

// ---- What is looked at

std::optional<std::size_t> Desk::contact_of(const Solution& solution) const {
  std::optional<std::size_t> hardest;
  double highest = -1;
  std::optional<std::size_t> wanted;
  for (std::size_t i = 0; i < solution.contacts.size(); ++i) {
    const Contact& contact = solution.contacts[i];
    if (!contact.patch) continue;
    const std::string name = contact_name(contact);
    if (!view_.contact.empty() && (name == view_.contact || name.starts_with(view_.contact + " "))) {
      if (!wanted || contact.patch->peak_pressure_MPa > solution.contacts[*wanted].patch->peak_pressure_MPa) wanted = i;
    }
    if (contact.patch->peak_pressure_MPa > highest) {
      highest = contact.patch->peak_pressure_MPa;
      hardest = i;
    }
  }
  if (wanted) return wanted;
  // The zone is gone, its side is not.
  const std::string side = view_.contact.substr(0, view_.contact.find(' '));
  for (std::size_t i = 0; i < solution.contacts.size(); ++i)
    if (!side.empty() && solution.contacts[i].patch && contact_name(solution.contacts[i]).starts_with(side)) return i;
  return hardest;
}

std::vector<std::pair<std::string, std::string>> Desk::fields() const {
  std::vector<std::pair<std::string, std::string>> all{{"pressure", "Contact pressure"}};
  const auto& solution = now().solution;
  if (!solution) return all;
  const auto index = contact_of(*solution);
  if (!index) return all;
  for (const auto& [id, result] : solution->contacts[*index].analyses)
    for (const Field& field : result.fields) all.emplace_back(id + "." + field.name, field.title);
  for (const auto& [id, result] : solution->contacts[*index].analyses)
    for (const Volume& volume : result.volumes) all.emplace_back(id + "." + volume.name, volume.title + ", below");
  return all;
}

// ---- Time

void Desk::ask_solver(int slot) {
  Place& place = places_[slot];
  place.asked = place.document.revision();
  place.question = solver_->ask(slot, place.document.current());
}

bool Desk::tick(double now_s) {
  now_s_ = now_s;
  bool changed = false;
  if (playing_) {
    const double phase = 2 * std::numbers::pi * (now_s - played_from_s_) / kPlayPeriod_s;
    double reach = kPlayReach_mm;
    if (const auto& t = now().traverse; t && !t->lateral_mm.empty())
      reach = std::min({reach, -t->lateral_mm.front(), t->lateral_mm.back()});
    const double y = std::clamp(play_from_mm_ * std::cos(phase) + (reach - std::abs(play_from_mm_)) * std::sin(phase),
                                -reach, reach);
    edit("Play", "play", [&](Case& c) { c.state.lateral_mm.assign(1, std::round(y * 1000) / 1000); });
  }
  for (int slot = 0; slot < kSlots; ++slot) {
    Place& place = places_[slot];
    if (place.used && place.asked != place.document.revision()) ask_solver(slot);
  }
  for (Answer& answer : solver_->take()) {
    Place& place = places_[answer.slot];
    if (!place.used || answer.revision < place.shown) continue;
    changed = true;
    if (answer.traverse) {
      place.traverse = std::move(answer.traverse);
      continue;
    }
    place.shown = answer.revision;
    place.failure = answer.failure;
    if (answer.solution) {
      // A first answer to the very state whose whole answer is shown already would take analyses away.
      place.solution = std::move(answer.solution);
      place.whole = answer.stage == Answer::Stage::whole;
      if (answer.stage == Answer::Stage::first) place.latency_ms = answer.latency_ms();
      place.solved_at_s = now_s;
    }
  }
  if (now_s - kept_at_s_ >= kKeepAfter_s) {
    kept_at_s_ = now_s;
    for (int slot = 0; slot < kSlots; ++slot) {
      Place& place = places_[slot];
      if (!place.used || kept_revision_[slot] == place.document.revision()) continue;
      kept_revision_[slot] = place.document.revision();
      if (place.document.unsaved())
        store_.keep(slot, write_case(place.document.current()), place.document.current().folder, place.document.file());
      else
        store_.forget(slot);
    }
  }
  if (!said_.empty() && now_s - said_at_s_ > kSay_s) {
    said_.clear();
    changed = true;
  }
  return changed || playing_;
}

void Desk::settle() {
  tick(now_s_);
  solver_->wait();
  tick(now_s_);
}

void Desk::play(bool on) {
  if (on == playing_) return;
  if (on && (!now().used || now().document.current().bench)) return;
  playing_ = on;
  played_from_s_ = now_s_;
  play_from_mm_ = now().used ? now().document.current().state.lateral_mm.front() : 0;
  end_gesture();
}

// ---- Doing

void Desk::ask(Prompt::Kind kind, std::string text) {
  prompt = {};
  prompt.kind = kind;
  prompt.text = std::move(text);
}

void Desk::guarded(std::function<void()> then) {
  if (!unsaved()) {
    then();
    return;
  }
  prompt = {};
  prompt.kind = Prompt::Kind::unsaved;
  prompt.then = std::move(then);
}

void Desk::ask_to_quit() {
  guarded([this] { quit(); });
}

void Desk::say(const std::string& words, bool warning) {
  said_ = words;
  said_warning_ = warning;
  said_at_s_ = now_s_;
}

void Desk::keep_picture(const std::filesystem::path& file) {
  if (!draw_picture) return;
  std::filesystem::path to = file;
  if (to.extension().empty()) to += ".png";
  draw_picture(to);
  say("Kept " + to.string());
}

std::string Desk::picture_name() const {
  const Case& c = now().document.current();
  std::string stem = now().document.file().empty() ? "picture" : now().document.file().stem().string();
  if (!c.bench) {
    char lateral[32];
    std::snprintf(lateral, sizeof lateral, "_y%+.2f", c.state.lateral_mm.front());
    stem += lateral;
  }
  stem += std::string("_") + (view_.sheet == Sheet::scene      ? "scene"
                              : view_.sheet == Sheet::profiles ? "profiles"
                              : view_.sheet == Sheet::curves   ? "curves"
                              : view_.sheet == Sheet::compare  ? "compare"
                                                               : "scene");
  std::string name = stem + ".png";
  std::error_code none;
  for (int k = 2; std::filesystem::exists(name, none) && k < 1000; ++k) name = stem + "_" + std::to_string(k) + ".png";
  return name;
}

std::string Desk::title() const {
  const Place& place = now();
  return std::string(place.document.unsaved() ? "• " : "") + place.document.name() + " – Runband";
}

std::string Desk::status() const {
  const Place& place = now();
  if (place.failure && !behind(active_)) return "no solution for this state";
  if (!place.solution) return "solving…";
  const Case& asked = place.solution->asked;
  std::string words = asked.patch.method == PatchMethod::hertz ? "Hertz's ellipse" : "elastic half-space";
  words += ", " + std::to_string(asked.patch.cells) + " cells across";
  if (behind(active_)) return "shows " + short_state(asked) + "; solving the next";
  const double age = now_s_ - place.solved_at_s;
  words += ", solved in " + plot::number(place.latency_ms, place.latency_ms < 10 ? 1 : 0) + "\u2009ms";
  if (age >= 60)
    words += ", " + plot::number(std::floor(age / 60), 0) + "\u2009min ago";
  else if (age >= 2)
    words += ", " + plot::number(std::floor(age), 0) + "\u2009s ago";
  if (!place.whole && !solver_->idle()) words += "; analyses to come";
  return words;
}

}  // namespace runband
