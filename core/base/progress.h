// How long work reports where it is and learns that it should stop.
#pragma once

#include <functional>
#include <stop_token>
#include <string_view>

#include "core/base/error.h"

namespace runband {

/// Passed down into long work. Both parts may be empty.
struct Progress {
  std::function<void(double fraction, std::string_view what)>
      report;  ///< fraction 0..1 of the whole, called from the worker
  std::stop_token stop;

  /// Throws Cancelled if a stop was requested.
  void check() const {
    if (stop.stop_requested()) throw Cancelled();
  }
  void at(double fraction, std::string_view what) const {
    check();
    if (report) report(fraction, what);
  }
};

}  // namespace runband
