// An OpenGL context that needs no display: EGL on Mesa's surfaceless platform, drawn by the processor.
#pragma once

#include <memory>

namespace runband {

/// Made current on construction in the calling thread; one per thread at a time.
/// @throws Error (no_solution) naming the step that failed and the packages it needs.
class HeadlessGl {
 public:
  HeadlessGl();
  ~HeadlessGl();
  HeadlessGl(const HeadlessGl&) = delete;
  HeadlessGl& operator=(const HeadlessGl&) = delete;

 private:
  struct Handles;
  std::unique_ptr<Handles> handles_;
};

}  // namespace runband
