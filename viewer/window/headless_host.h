// A window that nobody sees: drawn into memory without a display, its user a test or a script.
#pragma once

#include <atomic>
#include <deque>

#include "viewer/scene/headless_gl.h"
#include "viewer/window/host.h"

namespace runband {

class HeadlessHost final : public Host {
 public:
  /// @throws Error if there is no software OpenGL.
  HeadlessHost(int width_px, int height_px, double scale = 1);
  ~HeadlessHost() override;

  // What a user would do; each waits its turn, one event a frame.
  void move(double x, double y);
  void press(MouseButton button, bool down);
  void wheel(double notches, Modifiers modifiers = {});
  void key(Key key, Modifiers modifiers = {});  ///< down and up
  void type(const std::string& words);          ///< UTF-8
  void drop(std::vector<std::string> files);
  void post(Event event) { waiting_.push_back(std::move(event)); }
  void resize(int width_px, int height_px, double scale);
  bool idle() const { return waiting_.empty(); }
  /// Frames advance the clock by this much.
  void set_step(double seconds) { step_ = seconds; }
  void pass(double seconds) { now_ += seconds; }

  int width_px() const override { return width_; }
  int height_px() const override { return height_; }
  double scale() const override { return scale_; }
  double seconds() const override { return now_; }
  std::vector<Event> events(double wait_s) override;
  void wake() override {}
  void begin_frame() override;
  void end_frame() override;
  void set_title(const std::string& title) override { title_ = title; }
  void set_pointer(Pointer pointer) override { pointer_ = pointer; }
  std::string clipboard() override { return clipboard_; }
  void set_clipboard(const std::string& text) override { clipboard_ = text; }
  plot::Image picture() override;

  const std::string& title() const { return title_; }
  Pointer pointer() const { return pointer_; }

 private:
  void make_framebuffer();
  void drop_framebuffer();
  HeadlessGl gl_;
  int width_, height_;
  double scale_, now_ = 0, step_ = 1.0 / 60;
  unsigned int framebuffer_ = 0, colour_ = 0, depth_ = 0;
  std::deque<Event> waiting_;
  std::string title_, clipboard_;
  Pointer pointer_ = Pointer::arrow;
};

}  // namespace runband
