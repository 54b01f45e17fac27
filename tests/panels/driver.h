// A user of the window who needs no display: clicks controls by name, drags, types, and reads what the desk holds.
#pragma once

#include <cmath>
#include <filesystem>
#include <stdexcept>
#include <string>

#include "viewer/panels/frame.h"
#include "viewer/window/headless_host.h"

namespace runband {

class Driver {
 public:
  explicit Driver(int width = 1440, int height = 900, double scale = 1, const std::filesystem::path& state = {},
                  const AnalysisRegistry& registry = installed_analyses())
      : host(width, height, scale), desk({state, &registry, {}}), frame(host, desk) {}

  void open(const std::string& name) {
    desk.open(std::filesystem::path(RUNBAND_DATA) / "demo" / name);
    settle();
  }
  /// Frames until every event is taken and every answer shown.
  void settle() { frame.settle(); }
  /// As settle(), but only until the events are taken: answers may still be coming.
  void take_events() {
    do frame.step();
    while (!host.idle() || frame.screen().pending());
  }
  plot::Box where(const std::string& id) {
    const auto box = frame.ui().where(id);
    if (!box) throw std::runtime_error("no control " + id + " is shown");
    return *box;
  }
  bool shown(const std::string& id) { return frame.ui().where(id).has_value(); }
  void click_at(plot::Point p) {
    host.move(p.x, p.y);
    host.press(MouseButton::left, true);
    host.press(MouseButton::left, false);
    settle();
  }
  void click(const std::string& id) { click_at(where(id).centre()); }
  void drag(plot::Point from, plot::Point to, int steps = 8) {
    host.move(from.x, from.y);
    host.press(MouseButton::left, true);
    for (int k = 1; k <= steps; ++k)
      host.move(std::lerp(from.x, to.x, k / double(steps)), std::lerp(from.y, to.y, k / double(steps)));
    host.press(MouseButton::left, false);
    settle();
  }
  void key(Key key, Modifiers modifiers = {}) {
    host.key(key, modifiers);
    settle();
  }
  void type(const std::string& words) {
    host.type(words);
    settle();
  }
  const Case& current() const { return desk.now().document.current(); }
  double lateral() const { return current().state.lateral_mm.front(); }
  plot::Image picture() { return host.picture(); }

  HeadlessHost host;
  Desk desk;
  Frame frame;
};

inline constexpr Modifiers kCtrl{true, false, false}, kShift{false, true, false}, kCtrlShift{true, true, false};

}  // namespace runband
