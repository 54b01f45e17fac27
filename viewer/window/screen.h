// One frame of the interface: fonts, style, events in, drawing out.
#pragma once

#include <deque>
#include <memory>
#include <span>

#include "viewer/plot/canvas.h"
#include "viewer/plot/theme.h"
#include "viewer/window/host.h"

struct ImFont;
struct ImDrawList;

namespace runband {

/// Sizes of words in layout units: labels, units and notes, body, titles.
inline constexpr double kLabelSize = 11, kNoteSize = 12, kBodySize = 13, kTitleSize = 20;

/// Owns the interface's context. One per host; the host's OpenGL context stays current.
class Screen {
 public:
  explicit Screen(Host& host);
  ~Screen();
  Screen(const Screen&) = delete;
  Screen& operator=(const Screen&) = delete;

  /// Takes events and opens a frame. At most one button or key changes in a frame, so that a fast click is not lost in
  /// a slow frame; the rest waits (pending()). @return false while the window has no size: draw nothing.
  bool begin(std::vector<Event> events, const plot::Theme& theme);
  void end();
  bool pending() const { return !waiting_.empty(); }

  /// Key presses of this frame, in order: shortcuts are looked for here.
  const std::vector<Event>& keys() const { return keys_; }
  const std::vector<std::string>& dropped() const { return dropped_; }
  bool close_asked() const { return close_asked_; }
  /// A field of text has the keyboard.
  bool typing() const;

  Host& host() { return host_; }
  double scale() const { return scale_; }
  plot::Box page() const { return {0, 0, static_cast<double>(width_), static_cast<double>(height_)}; }
  /// The baked font nearest in size; `size` in pixels.
  ImFont* font(double size, bool strong) const;
  /// Size of the letters in a baked font (pixels per em).
  double em_of(const ImFont*) const;
  double seconds() const { return host_.seconds(); }

  /// A texture of this image that lives while it is drawn at least every few seconds.
  unsigned int texture(const plot::Image& image, bool smooth);
  /// Triangles inside an outline, remembered like the textures. Indices into the points, three each.
  const std::vector<int>& filled(std::span<const plot::Point> outline);

 private:
  struct Baked;
  struct Cache;
  void bake();
  void apply(const Event& event);
  Host& host_;
  void* context_ = nullptr;
  int width_ = 0, height_ = 0;
  double scale_ = 0;
  std::unique_ptr<Baked> baked_;
  std::unique_ptr<Cache> cache_;
  std::deque<Event> waiting_;
  std::vector<Event> keys_;
  std::vector<std::string> dropped_;
  bool close_asked_ = false;
  double last_ = 0;
  plot::Colour ground_;
};

}  // namespace runband
