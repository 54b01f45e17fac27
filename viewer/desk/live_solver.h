// Solves the latest case of each document while the user goes on: older questions are dropped, nothing waits.
#pragma once

#include <chrono>
#include <condition_variable>
#include <functional>
#include <memory>
#include <mutex>
#include <optional>
#include <string>
#include <thread>
#include <vector>

#include "core/solve/solution.h"

namespace runband {

/// Two documents can be on the desk.
inline constexpr int kSlots = 2;

struct Failure {
  std::string message, cure;
  int exit_status = 0;
};

struct Answer {
  int slot = 0;
  std::uint64_t revision = 0;  ///< of the question
  /// first: contacts, patches, creepage and slip bands; whole: every analysis; traverse: curves over the displacement.
  enum class Stage { first, whole, traverse } stage = Stage::first;
  std::shared_ptr<const Solution> solution;
  std::shared_ptr<const Traverse> traverse;
  std::optional<Failure> failure;
  std::chrono::steady_clock::time_point asked_at, done_at;
  double latency_ms() const { return std::chrono::duration<double, std::milli>(done_at - asked_at).count(); }
};

/// Two worker threads: one gives first answers and traverses, so that a drag is never behind an analysis; the other, once
/// the state has been still for a moment, the whole. Every call is made from the owner's thread.
class LiveSolver {
 public:
  /// @param wake called from the worker after each answer; may be empty.
  LiveSolver(const AnalysisRegistry& registry, std::function<void()> wake);
  ~LiveSolver();
  LiveSolver(const LiveSolver&) = delete;
  LiveSolver& operator=(const LiveSolver&) = delete;

  /// Replaces what the slot asked before. @param with analyses wanted; empty: all. @return the revision
  std::uint64_t ask(int slot, Case asked, std::vector<std::string> with = {});
  /// Answers since the last call, oldest first.
  std::vector<Answer> take();
  bool busy(int slot) const;
  bool idle() const { return !busy(0) && !busy(1); }
  /// Stops what is being solved for the slot and forgets the question.
  void cancel(int slot);
  /// What the worker is doing, for a progress line.
  struct Doing {
    double fraction = 0;
    std::string what;
    double for_s = 0;
  };
  std::optional<Doing> doing() const;
  /// Blocks until nothing is being solved (tests, pictures without a window).
  void wait() const;

 private:
  struct Question {
    Case asked;
    std::vector<std::string> with;
    std::uint64_t revision = 0;
    std::chrono::steady_clock::time_point asked_at;
  };
  struct Prepared;
  struct Later {
    int slot = 0;
    Question question;
    std::shared_ptr<const Locator> locator;
    std::chrono::steady_clock::time_point not_before;
  };
  void work(const std::stop_token& stop);
  void work_later(const std::stop_token& stop);
  void answer(int slot, const Question& question);
  void answer_later(const Later& job);
  void leave_for_later(int slot, const Question& question, std::shared_ptr<const Locator> locator);
  Progress progress_of(const std::stop_token& stop);
  bool newer(int slot, std::uint64_t revision) const;
  bool busy_now(int slot) const;
  void deliver(Answer answer);

  const AnalysisRegistry& registry_;
  std::function<void()> wake_;
  mutable std::mutex mutex_;
  mutable std::condition_variable_any changed_;
  std::optional<Question> waiting_[kSlots];
  std::optional<int> solving_;
  std::optional<Later> postponed_[kSlots];
  std::optional<int> completing_;
  std::stop_source later_;  ///< stops the whole answer, and a traverse, when a newer question comes
  std::stop_source all_;    ///< stops a first answer: when the user says so
  std::vector<Answer> answers_;
  std::uint64_t revisions_ = 0;
  Doing doing_;
  std::chrono::steady_clock::time_point began_;
  std::unique_ptr<Prepared> prepared_[kSlots];
  std::jthread worker_, later_worker_;
};

/// The widest traverse that has rigid contact on both sides, at most +-reach, symmetric as far as it can be.
std::vector<double> traverse_positions(const Locator&, double yaw_rad, LateralReference, double reach_mm,
                                       double step_mm);

}  // namespace runband
