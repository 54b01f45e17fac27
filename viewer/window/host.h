// The seam between the interface and the window it lives in.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "viewer/plot/canvas.h"
#include "viewer/window/event.h"

namespace runband {

enum class Pointer { arrow, text, hand, resize_across, resize_down, grab };

class Host {
 public:
  virtual ~Host() = default;

  virtual int width_px() const = 0;  ///< of the framebuffer; 0 while the window is reduced to nothing
  virtual int height_px() const = 0;
  virtual double scale() const = 0;    ///< pixels per unit of the layout: 1 on an ordinary screen, 2 on a fine one
  virtual double seconds() const = 0;  ///< a clock that only goes forward

  /// Events since the last call. @param wait_s how long to wait for one if there is none.
  virtual std::vector<Event> events(double wait_s) = 0;
  /// Ends a wait in events() from any thread.
  virtual void wake() = 0;

  /// The context is current and its own framebuffer bound, cleared by the caller.
  virtual void begin_frame() = 0;
  virtual void end_frame() = 0;  ///< shows what was drawn

  virtual void set_title(const std::string& title) = 0;
  virtual void set_pointer(Pointer pointer) = 0;
  virtual std::string clipboard() = 0;
  virtual void set_clipboard(const std::string& text) = 0;

  /// What the last frame drew, rows from the top.
  virtual plot::Image picture() = 0;
};

/// @throws Error (drawing_unavailable) saying what is missing.
std::unique_ptr<Host> open_window(const std::string& title, int width, int height);

}  // namespace runband
