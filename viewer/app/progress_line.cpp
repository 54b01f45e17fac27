#include "viewer/app/progress_line.h"

#include <unistd.h>

#include <cstdio>
#include <string>

namespace runband {

// Work of less than this shows nothing: a line that flashes is noise.
constexpr std::chrono::milliseconds kPatience{300};

ProgressLine::ProgressLine() : start_(std::chrono::steady_clock::now()), on_terminal_(::isatty(STDERR_FILENO) != 0) {}

ProgressLine::~ProgressLine() {
  if (drawn_) std::fputs("\r\033[K", stderr);
}

void ProgressLine::show(double fraction, std::string_view what) {
  if (!on_terminal_ || std::chrono::steady_clock::now() - start_ < kPatience) return;
  constexpr int kWidth = 24;
  const int full = static_cast<int>(fraction * kWidth);
  std::string bar;
  for (int i = 0; i < kWidth; ++i) bar += i < full ? "━" : "╌";
  std::fprintf(stderr, "\r\033[K%s %3d %%  %.*s", bar.c_str(), static_cast<int>(fraction * 100),
               static_cast<int>(what.size()), what.data());
  std::fflush(stderr);
  drawn_ = true;
}

}  // namespace runband
