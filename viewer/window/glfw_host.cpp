// A real window, through GLFW.
#include <GLFW/glfw3.h>

#include <algorithm>
#include <array>
#include <cstdlib>
#include <utility>

#include "core/base/error.h"
#include "viewer/window/gl.h"
#include "viewer/window/host.h"

namespace runband {

namespace {

Key key_of(int key) {
  if (key >= GLFW_KEY_A && key <= GLFW_KEY_Z) return static_cast<Key>(static_cast<int>(Key::a) + key - GLFW_KEY_A);
  if (key >= GLFW_KEY_0 && key <= GLFW_KEY_9) return static_cast<Key>(static_cast<int>(Key::n0) + key - GLFW_KEY_0);
  if (key >= GLFW_KEY_F1 && key <= GLFW_KEY_F12) return static_cast<Key>(static_cast<int>(Key::f1) + key - GLFW_KEY_F1);
  switch (key) {
    case GLFW_KEY_TAB:
      return Key::tab;
    case GLFW_KEY_LEFT:
      return Key::left;
    case GLFW_KEY_RIGHT:
      return Key::right;
    case GLFW_KEY_UP:
      return Key::up;
    case GLFW_KEY_DOWN:
      return Key::down;
    case GLFW_KEY_PAGE_UP:
      return Key::page_up;
    case GLFW_KEY_PAGE_DOWN:
      return Key::page_down;
    case GLFW_KEY_HOME:
      return Key::home;
    case GLFW_KEY_END:
      return Key::end;
    case GLFW_KEY_INSERT:
      return Key::insert;
    case GLFW_KEY_DELETE:
      return Key::erase;
    case GLFW_KEY_BACKSPACE:
      return Key::backspace;
    case GLFW_KEY_SPACE:
      return Key::space;
    case GLFW_KEY_ENTER:
    case GLFW_KEY_KP_ENTER:
      return Key::enter;
    case GLFW_KEY_ESCAPE:
      return Key::escape;
    case GLFW_KEY_EQUAL:
    case GLFW_KEY_KP_ADD:
      return Key::plus;
    case GLFW_KEY_MINUS:
    case GLFW_KEY_KP_SUBTRACT:
      return Key::minus;
    case GLFW_KEY_COMMA:
      return Key::comma;
    case GLFW_KEY_PERIOD:
      return Key::period;
    case GLFW_KEY_SLASH:
      return Key::slash;
    case GLFW_KEY_LEFT_BRACKET:
      return Key::bracket_left;
    case GLFW_KEY_RIGHT_BRACKET:
      return Key::bracket_right;
    default:
      return Key::none;
  }
}

Modifiers modifiers_of(int mods) {
  return {(mods & (GLFW_MOD_CONTROL | GLFW_MOD_SUPER)) != 0, (mods & GLFW_MOD_SHIFT) != 0, (mods & GLFW_MOD_ALT) != 0};
}

Error unavailable(const std::string& why) {
  return {ErrorCode::drawing_unavailable, "the window cannot be opened: " + why + ".",
          "start it where there is a display and OpenGL 3.3 (Mesa's software drawing is enough), or use `runband draw` "
          "and `runband solve`, which need none."};
}

class GlfwHost final : public Host {
 public:
  GlfwHost(const std::string& title, int width, int height) {
    if (glfwInit() != GLFW_TRUE) throw unavailable(last_problem());
    glfwWindowHint(GLFW_CONTEXT_VERSION_MAJOR, 3);
    glfwWindowHint(GLFW_CONTEXT_VERSION_MINOR, 3);
    glfwWindowHint(GLFW_OPENGL_PROFILE, GLFW_OPENGL_CORE_PROFILE);
    glfwWindowHint(GLFW_OPENGL_FORWARD_COMPAT, GLFW_TRUE);
    glfwWindowHint(GLFW_SCALE_TO_MONITOR, GLFW_TRUE);
    window_ = glfwCreateWindow(width, height, title.c_str(), nullptr, nullptr);
    if (window_ == nullptr) {
      const std::string why = last_problem();
      glfwTerminate();
      throw unavailable(why);
    }
    glfwMakeContextCurrent(window_);
    glfwSwapInterval(1);
    glfwSetWindowUserPointer(window_, this);
    glfwSetWindowSizeLimits(window_, 320, 240, GLFW_DONT_CARE, GLFW_DONT_CARE);
    glfwSetCursorPosCallback(window_, [](GLFWwindow* w, double x, double y) {
      Event e;
      e.kind = Event::Kind::move;
      const auto [sx, sy] = self(w).pixels_per_unit();
      e.x = x * sx;
      e.y = y * sy;
      self(w).add(e);
    });
    glfwSetCursorEnterCallback(window_, [](GLFWwindow* w, int inside) {
      Event e;
      e.kind = Event::Kind::leave;
      if (inside == GLFW_FALSE) self(w).add(e);
    });
    glfwSetMouseButtonCallback(window_, [](GLFWwindow* w, int button, int action, int mods) {
      if (button > 2) return;
      Event e;
      e.kind = Event::Kind::button;
      e.button = static_cast<MouseButton>(button);
      e.down = action == GLFW_PRESS;
      e.modifiers = modifiers_of(mods);
      self(w).add(e);
    });
    glfwSetScrollCallback(window_, [](GLFWwindow* w, double x, double y) {
      Event e;
      e.kind = Event::Kind::wheel;
      e.x = x;
      e.y = y;
      e.modifiers = self(w).held_;
      self(w).add(e);
    });
    glfwSetKeyCallback(window_, [](GLFWwindow* w, int key, int, int action, int mods) {
      Event e;
      e.kind = Event::Kind::key;
      e.key = key_of(key);
      e.down = action != GLFW_RELEASE;
      e.repeated = action == GLFW_REPEAT;
      e.modifiers = modifiers_of(mods);
      // A modifier's own press is not yet in `mods` (GLFW on X11).
      const bool down = action != GLFW_RELEASE;
      if (key == GLFW_KEY_LEFT_CONTROL || key == GLFW_KEY_RIGHT_CONTROL) e.modifiers.control = down;
      if (key == GLFW_KEY_LEFT_SHIFT || key == GLFW_KEY_RIGHT_SHIFT) e.modifiers.shift = down;
      if (key == GLFW_KEY_LEFT_ALT || key == GLFW_KEY_RIGHT_ALT) e.modifiers.alt = down;
      self(w).held_ = e.modifiers;
      self(w).add(e);
    });
    glfwSetCharCallback(window_, [](GLFWwindow* w, unsigned int letter) {
      Event e;
      e.kind = Event::Kind::text;
      e.letter = letter;
      self(w).add(e);
    });
    glfwSetDropCallback(window_, [](GLFWwindow* w, int count, const char** paths) {
      Event e;
      e.kind = Event::Kind::drop;
      e.files.assign(paths, paths + count);
      self(w).add(e);
    });
    glfwSetWindowCloseCallback(window_, [](GLFWwindow* w) {
      glfwSetWindowShouldClose(w, GLFW_FALSE);
      Event e;
      e.kind = Event::Kind::close;
      self(w).add(e);
    });
    const int shapes[] = {GLFW_ARROW_CURSOR,   GLFW_IBEAM_CURSOR,   GLFW_HAND_CURSOR,
                          GLFW_HRESIZE_CURSOR, GLFW_VRESIZE_CURSOR, GLFW_CROSSHAIR_CURSOR};
    for (std::size_t k = 0; k < cursors_.size(); ++k) cursors_[k] = glfwCreateStandardCursor(shapes[k]);
  }

  ~GlfwHost() override {
    for (GLFWcursor* cursor : cursors_)
      if (cursor != nullptr) glfwDestroyCursor(cursor);
    glfwDestroyWindow(window_);
    glfwTerminate();
  }

  int width_px() const override { return size().first; }
  int height_px() const override { return size().second; }
  double scale() const override {
    if (const char* wanted = std::getenv("RUNBAND_SCALE")) {
      const double value = std::atof(wanted);
      if (value >= 0.5 && value <= 4) return value;
    }
    float x = 1, y = 1;
    glfwGetWindowContentScale(window_, &x, &y);
    return x > 0 ? x : 1;
  }
  double seconds() const override { return glfwGetTime(); }

  std::vector<Event> events(double wait_s) override {
    if (wait_s > 0)
      glfwWaitEventsTimeout(wait_s);
    else
      glfwPollEvents();
    return std::exchange(events_, {});
  }
  void wake() override { glfwPostEmptyEvent(); }

  void begin_frame() override { gl::bind(0, width_px(), height_px()); }
  void end_frame() override { glfwSwapBuffers(window_); }
  void set_title(const std::string& title) override { glfwSetWindowTitle(window_, title.c_str()); }
  void set_pointer(Pointer pointer) override { glfwSetCursor(window_, cursors_[static_cast<std::size_t>(pointer)]); }
  std::string clipboard() override {
    const char* text = glfwGetClipboardString(window_);
    return text == nullptr ? "" : text;
  }
  void set_clipboard(const std::string& text) override { glfwSetClipboardString(window_, text.c_str()); }

  plot::Image picture() override {
    const auto [width, height] = size();
    const auto row = static_cast<std::size_t>(width) * 4;
    plot::Image image{width, height, std::vector<std::uint8_t>(row * static_cast<std::size_t>(height))};
    std::vector<std::uint8_t> upside_down(image.rgba.size());
    if (image.rgba.empty()) return image;
    gl::bind(0, width, height);
    gl::read_pixels(width, height, upside_down.data());
    for (int y = 0; y < height; ++y)
      std::copy_n(upside_down.begin() + static_cast<std::ptrdiff_t>(row) * (height - 1 - y), row,
                  image.rgba.begin() + static_cast<std::ptrdiff_t>(row) * y);
    for (std::size_t k = 3; k < image.rgba.size(); k += 4) image.rgba[k] = 255;
    return image;
  }

 private:
  static GlfwHost& self(GLFWwindow* window) { return *static_cast<GlfwHost*>(glfwGetWindowUserPointer(window)); }
  static std::string last_problem() {
    const char* text = nullptr;
    glfwGetError(&text);
    return text == nullptr ? "no reason was given" : text;
  }
  std::pair<int, int> size() const {
    int width = 0, height = 0;
    glfwGetFramebufferSize(window_, &width, &height);
    return {width, height};
  }
  std::pair<double, double> pixels_per_unit() const {
    int width = 1, height = 1;
    glfwGetWindowSize(window_, &width, &height);
    const auto [w, h] = size();
    return {width > 0 ? static_cast<double>(w) / width : 1, height > 0 ? static_cast<double>(h) / height : 1};
  }
  void add(const Event& e) {
    // Only the last of a run of moves matters.
    if (e.kind == Event::Kind::move && !events_.empty() && events_.back().kind == Event::Kind::move)
      events_.back() = e;
    else
      events_.push_back(e);
  }

  GLFWwindow* window_ = nullptr;
  Modifiers held_;
  std::vector<Event> events_;
  std::array<GLFWcursor*, 6> cursors_{};
};

}  // namespace

std::unique_ptr<Host> open_window(const std::string& title, int width, int height) {
  return std::make_unique<GlfwHost>(title, width, height);
}

}  // namespace runband
