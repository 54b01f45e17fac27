#include "viewer/window/headless_host.h"

#include <algorithm>

#include "viewer/plot/fonts.h"
#include "viewer/window/gl.h"

namespace runband {

HeadlessHost::HeadlessHost(int width_px, int height_px, double scale)
    : width_(width_px), height_(height_px), scale_(scale) {
  make_framebuffer();
}

HeadlessHost::~HeadlessHost() { drop_framebuffer(); }

void HeadlessHost::make_framebuffer() {
  const gl::Framebuffer f = gl::make_framebuffer(std::max(1, width_), std::max(1, height_));
  framebuffer_ = f.name;
  colour_ = f.colour;
  depth_ = f.depth;
}

void HeadlessHost::drop_framebuffer() {
  gl::Framebuffer f{framebuffer_, colour_, depth_};
  gl::drop(f);
}

void HeadlessHost::resize(int width_px, int height_px, double scale) {
  drop_framebuffer();
  width_ = width_px;
  height_ = height_px;
  scale_ = scale;
  make_framebuffer();
}

void HeadlessHost::move(double x, double y) {
  Event e;
  e.kind = Event::Kind::move;
  e.x = x;
  e.y = y;
  post(e);
}

void HeadlessHost::press(MouseButton button, bool down) {
  Event e;
  e.kind = Event::Kind::button;
  e.button = button;
  e.down = down;
  post(e);
}

void HeadlessHost::wheel(double notches, Modifiers modifiers) {
  Event e;
  e.kind = Event::Kind::wheel;
  e.y = notches;
  e.modifiers = modifiers;
  post(e);
}

void HeadlessHost::key(Key key, Modifiers modifiers) {
  Event e;
  e.kind = Event::Kind::key;
  e.key = key;
  e.modifiers = modifiers;
  e.down = true;
  post(e);
  e.down = false;
  post(e);
}

void HeadlessHost::type(const std::string& words) {
  for (const auto& [letter, at] : plot::letters_of(words)) {
    Event e;
    e.kind = Event::Kind::text;
    e.letter = letter;
    post(e);
  }
}

void HeadlessHost::drop(std::vector<std::string> files) {
  Event e;
  e.kind = Event::Kind::drop;
  e.files = std::move(files);
  post(e);
}

std::vector<Event> HeadlessHost::events(double) {
  now_ += step_;
  if (waiting_.empty()) return {};
  std::vector<Event> one{std::move(waiting_.front())};
  waiting_.pop_front();
  return one;
}

void HeadlessHost::begin_frame() { gl::bind(framebuffer_, width_, height_); }

void HeadlessHost::end_frame() {}

plot::Image HeadlessHost::picture() {
  gl::bind(framebuffer_, width_, height_);
  const auto row = static_cast<std::size_t>(width_) * 4;
  plot::Image image{width_, height_, std::vector<std::uint8_t>(row * static_cast<std::size_t>(height_))};
  if (image.rgba.empty()) return image;
  gl::read_pixels(width_, height_, image.rgba.data());
  for (int y = 0; y < height_ / 2; ++y)
    std::swap_ranges(image.rgba.begin() + static_cast<std::ptrdiff_t>(row) * y,
                     image.rgba.begin() + static_cast<std::ptrdiff_t>(row) * (y + 1),
                     image.rgba.begin() + static_cast<std::ptrdiff_t>(row) * (height_ - 1 - y));
  for (std::size_t k = 3; k < image.rgba.size(); k += 4) image.rgba[k] = 255;
  return image;
}

}  // namespace runband
