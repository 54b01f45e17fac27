#include "core/base/error.h"

#include <cmath>

#include "core/base/text.h"

namespace runband {

Error::Error(ErrorCode code, std::string message, std::string cure)
    : std::runtime_error(cure.empty() ? message : message + "\n  " + cure),
      code_(code),
      message_(std::move(message)),
      cure_(std::move(cure)) {}

int Error::exit_status() const {
  switch (static_cast<int>(code_) / 100) {
    case 1:
      return 2;
    case 2:
      return 3;
    case 3:
      return 4;
    case 4:
      return 5;
    default:
      return 130;
  }
}

Cancelled::Cancelled() : Error(ErrorCode::cancelled, "stopped on request.", "") {}

NotConverged::NotConverged(std::string what_failed, int iterations_done, double residual_left, std::string cure)
    : Error(ErrorCode::not_converged,
            what_failed + " did not converge: residual " + number_text(residual_left, 3) + " after " +
                std::to_string(iterations_done) + " iterations.",
            std::move(cure)),
      iterations(iterations_done),
      residual(residual_left) {}

InputError out_of_range(const std::string& where, const std::string& name, double value, const std::string& unit,
                        const std::string& range) {
  std::string message = where.empty() ? "" : where + ": ";
  message += name + " is " + number_text(value);
  if (!unit.empty() && unit != "1") message += " " + unit;
  return {ErrorCode::out_of_range, message + "; it must be " + range + ".", "correct the value of " + name + "."};
}

void require_positive(const std::string& where, const std::string& name, double value, const std::string& unit) {
  if (!std::isfinite(value) || value <= 0.0) throw out_of_range(where, name, value, unit, "finite and above 0");
}

}  // namespace runband
