// One line on standard error that says how far long work is; nothing where standard error is not a terminal.
#pragma once

#include <chrono>
#include <string_view>

namespace runband {

class ProgressLine {
 public:
  ProgressLine();
  ~ProgressLine();
  ProgressLine(const ProgressLine&) = delete;
  ProgressLine& operator=(const ProgressLine&) = delete;
  void show(double fraction, std::string_view what);

 private:
  std::chrono::steady_clock::time_point start_;
  bool on_terminal_;
  bool drawn_ = false;
};

}  // namespace runband
