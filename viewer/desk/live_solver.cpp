#include "viewer/desk/live_solver.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/base/error.h"

namespace runband {

namespace {

constexpr double kReach_mm = 12, kStep_mm = 0.1;
constexpr std::chrono::milliseconds kStill{60};  // so long a state must stand before its analyses begin

/// What prepare() depends on, as one text.
std::string geometry_key(const Case& c) {
  Case bare;
  bare.track = c.track;
  bare.wheelset = c.wheelset;
  for (int k = 0; k < 2; ++k) {
    bare.wheels[k] = c.wheels[k];
    bare.rails[k] = c.rails[k];
  }
  bare.bench = c.bench ? std::optional(BenchRequest{}) : std::nullopt;
  // Files may change under their names.
  std::string key = write_case(bare) + "\n" + c.folder.string();
  for (int k = 0; k < 2; ++k) {
    for (const ProfileRequest* request : {&c.wheels[k], &c.rails[k]}) {
      std::error_code none;
      const auto time = std::filesystem::last_write_time(c.folder / request->profile, none);
      if (!none) key += "\n" + std::to_string(time.time_since_epoch().count());
    }
  }
  return key;
}

std::string traverse_key(const Case& c) {
  return std::to_string(c.state.yaw_mrad) + (c.state.reference == LateralReference::axle ? "a" : "r");
}

Failure failure_of(const std::exception& problem) {
  if (const auto* error = dynamic_cast<const Error*>(&problem))
    return {error->message(), error->cure(), error->exit_status()};
  return {std::string("unexpected: ") + problem.what(), "please report it with the case that shows it.", 70};
}

}  // namespace

std::vector<double> traverse_positions(const Locator& locator, double yaw_rad, LateralReference reference,
                                       double reach_mm, double step_mm) {
  const auto touches = [&](double y) {
    try {
      (void)locator.rigid(y, yaw_rad, reference);
      return true;
    } catch (const Error&) {
      return false;
    }
  };
  const auto furthest = [&](double sign) {
    if (touches(sign * reach_mm)) return reach_mm;
    double good = 0, bad = reach_mm;
    while (bad - good > step_mm / 2) {
      const double middle = (good + bad) / 2;
      (touches(sign * middle) ? good : bad) = middle;
    }
    return good;
  };
  std::vector<double> positions;
  const int from = static_cast<int>(std::floor(furthest(-1) / step_mm)),
            to = static_cast<int>(std::floor(furthest(1) / step_mm));
  for (int i = -from; i <= to; ++i) positions.push_back(i * step_mm);
  return positions;
}

struct LiveSolver::Prepared {
  std::string key;
  std::shared_ptr<const Locator> locator;
  std::string traverse_key;
};

LiveSolver::LiveSolver(const AnalysisRegistry& registry, std::function<void()> wake)
    : registry_(registry),
      wake_(std::move(wake)),
      worker_([this](const std::stop_token& stop) { work(stop); }),
      later_worker_([this](const std::stop_token& stop) { work_later(stop); }) {}

LiveSolver::~LiveSolver() {
  {
    const std::lock_guard lock(mutex_);
    all_.request_stop();
    later_.request_stop();
  }
  worker_.request_stop();
  later_worker_.request_stop();
  changed_.notify_all();
}

std::uint64_t LiveSolver::ask(int slot, Case asked, std::vector<std::string> with) {
  const std::lock_guard lock(mutex_);
  Question question{std::move(asked), std::move(with), ++revisions_, std::chrono::steady_clock::now()};
  // A question that was not begun yet keeps its place in time: the wait counts from the first move not yet answered.
  if (waiting_[slot]) question.asked_at = waiting_[slot]->asked_at;
  waiting_[slot] = std::move(question);
  postponed_[slot].reset();
  if (completing_ == slot) later_.request_stop();
  changed_.notify_all();
  return revisions_;
}

std::vector<Answer> LiveSolver::take() {
  const std::lock_guard lock(mutex_);
  return std::exchange(answers_, {});
}

bool LiveSolver::busy_now(int slot) const {
  return waiting_[slot].has_value() || solving_ == slot || postponed_[slot].has_value() || completing_ == slot;
}

bool LiveSolver::busy(int slot) const {
  const std::lock_guard lock(mutex_);
  return busy_now(slot);
}

void LiveSolver::cancel(int slot) {
  const std::lock_guard lock(mutex_);
  waiting_[slot].reset();
  postponed_[slot].reset();
  if (solving_ == slot) all_.request_stop();
  if (completing_ == slot) later_.request_stop();
}

std::optional<LiveSolver::Doing> LiveSolver::doing() const {
  const std::lock_guard lock(mutex_);
  if (!solving_ && !completing_) return std::nullopt;
  Doing doing = doing_;
  doing.for_s = std::chrono::duration<double>(std::chrono::steady_clock::now() - began_).count();
  return doing;
}

void LiveSolver::wait() const {
  std::unique_lock lock(mutex_);
  changed_.wait(lock, [this] { return !busy_now(0) && !busy_now(1); });
}

bool LiveSolver::newer(int slot, std::uint64_t revision) const {
  const std::lock_guard lock(mutex_);
  return waiting_[slot] && waiting_[slot]->revision > revision;
}

void LiveSolver::deliver(Answer answer) {
  answer.done_at = std::chrono::steady_clock::now();
  {
    const std::lock_guard lock(mutex_);
    answers_.push_back(std::move(answer));
  }
  if (wake_) wake_();
}

void LiveSolver::work(const std::stop_token& stop) {
  while (!stop.stop_requested()) {
    Question question;
    int slot = 0;
    {
      std::unique_lock lock(mutex_);
      changed_.wait(lock, stop, [this] { return waiting_[0].has_value() || waiting_[1].has_value(); });
      if (stop.stop_requested()) return;
      slot = !waiting_[0] || (waiting_[1] && waiting_[1]->asked_at < waiting_[0]->asked_at) ? 1 : 0;
      question = std::move(*waiting_[slot]);
      waiting_[slot].reset();
      solving_ = slot;
      all_ = std::stop_source();
      doing_ = {};
      began_ = std::chrono::steady_clock::now();
    }
    answer(slot, question);
    {
      const std::lock_guard lock(mutex_);
      solving_.reset();
    }
    changed_.notify_all();
    if (wake_) wake_();
  }
}

void LiveSolver::work_later(const std::stop_token& stop) {
  while (!stop.stop_requested()) {
    Later job;
    {
      std::unique_lock lock(mutex_);
      changed_.wait(lock, stop, [this] { return postponed_[0].has_value() || postponed_[1].has_value(); });
      if (stop.stop_requested()) return;
      const int slot =
          !postponed_[0] || (postponed_[1] && postponed_[1]->not_before < postponed_[0]->not_before) ? 1 : 0;
      const auto when = postponed_[slot]->not_before;
      if (std::chrono::steady_clock::now() < when) {
        changed_.wait_until(lock, stop, when, [] { return false; });
        continue;
      }
      job = std::move(*postponed_[slot]);
      postponed_[slot].reset();
      completing_ = slot;
      later_ = std::stop_source();
      doing_ = {};
      began_ = std::chrono::steady_clock::now();
    }
    answer_later(job);
    {
      const std::lock_guard lock(mutex_);
      completing_.reset();
    }
    changed_.notify_all();
    if (wake_) wake_();
  }
}

Progress LiveSolver::progress_of(const std::stop_token& stop) {
  return {[this](double fraction, std::string_view what) {
            const std::lock_guard lock(mutex_);
            doing_.fraction = fraction;
            doing_.what = what;
          },
          stop};
}

void LiveSolver::leave_for_later(int slot, const Question& question, std::shared_ptr<const Locator> locator) {
  {
    const std::lock_guard lock(mutex_);
    if (waiting_[slot] && waiting_[slot]->revision > question.revision) return;
    postponed_[slot] = Later{slot, question, std::move(locator), std::chrono::steady_clock::now() + kStill};
  }
  changed_.notify_all();
}

void LiveSolver::answer_later(const Later& job) {
  Answer answer;
  answer.slot = job.slot;
  answer.revision = job.question.revision;
  answer.asked_at = job.question.asked_at;
  answer.stage = Answer::Stage::whole;
  std::stop_token stop;
  {
    const std::lock_guard lock(mutex_);
    stop = later_.get_token();
  }
  try {
    answer.solution = std::make_shared<const Solution>(
        solve(job.question.asked, job.locator, progress_of(stop), {&registry_, job.question.with}));
    if (!stop.stop_requested()) deliver(std::move(answer));
  } catch (const Cancelled&) {
    // A newer question came, or the user stopped this one.
  } catch (const std::exception& problem) {
    answer.failure = failure_of(problem);
    deliver(std::move(answer));
  }
}

void LiveSolver::answer(int slot, const Question& question) {
  const Case& c = question.asked;
  Answer answer;
  answer.slot = slot;
  answer.revision = question.revision;
  answer.asked_at = question.asked_at;
  std::stop_token all;
  {
    const std::lock_guard lock(mutex_);
    all = all_.get_token();
  }
  try {
    std::unique_ptr<Prepared>& prepared = prepared_[slot];
    const std::string key = geometry_key(c);
    if (!prepared || prepared->key != key) {
      progress_of(all).at(0, "reading profiles");
      prepared.reset();
      auto made = std::make_unique<Prepared>();
      made->key = key;
      made->locator = prepare(c);
      prepared = std::move(made);
    }
    // First what the eye follows: patches, and their stick and slip. It is not stopped by newer questions, or a drag
    // would never show anything.
    AnalysisChoice first{&registry_, {}};
    const bool slips = registry_.find("slip_bands") != nullptr &&
                       (question.with.empty() ||
                        std::find(question.with.begin(), question.with.end(), "slip_bands") != question.with.end());
    first.with = {slips ? "slip_bands" : "creepage"};
    const bool any = registry_.find(first.with.front()) != nullptr;
    static const AnalysisRegistry kNone;
    Case bare = c;
    if (!any) {
      first = {&kNone, {}};
      bare.analyses.clear();
    }
    Solution quick = solve(bare, prepared->locator, progress_of(all), first);
    quick.asked = c;
    answer.stage = Answer::Stage::first;
    answer.solution = std::make_shared<const Solution>(std::move(quick));
    deliver(answer);
    if (newer(slot, question.revision)) return;

    if (prepared->locator != nullptr && prepared->traverse_key != traverse_key(c)) {
      const double yaw = c.state.yaw_mrad * 1e-3;
      Case moved = c;
      moved.analyses.clear();
      Answer curves = answer;
      curves.stage = Answer::Stage::traverse;
      curves.solution.reset();
      const auto positions = traverse_positions(*prepared->locator, yaw, c.state.reference, kReach_mm, kStep_mm);
      curves.traverse = std::make_shared<const Traverse>(
          traverse(moved, prepared->locator, positions, progress_of(all), {&kNone, {}}));
      prepared->traverse_key = traverse_key(c);
      deliver(std::move(curves));
      if (newer(slot, question.revision)) return;
    }

    leave_for_later(slot, question, prepared->locator);
  } catch (const Cancelled&) {
    // A newer question waits, or the user stopped this one.
  } catch (const std::exception& problem) {
    answer.failure = failure_of(problem);
    answer.solution.reset();
    deliver(std::move(answer));
  }
}

}  // namespace runband
