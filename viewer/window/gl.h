// The few OpenGL calls of our own; the toolkit and VTK load theirs themselves.
#pragma once

#include <cstdint>

namespace runband::gl {

/// A colour framebuffer with a depth part. Names of OpenGL objects, 0 is none.
struct Framebuffer {
  unsigned int name = 0, colour = 0, depth = 0;
};
Framebuffer make_framebuffer(int width, int height);
void drop(Framebuffer&);
void bind(unsigned int framebuffer, int width, int height);
void clear(double r, double g, double b);
/// width * height * 4 bytes, lowest row first.
void read_pixels(int width, int height, std::uint8_t* rgba);
unsigned int make_texture(int width, int height, const std::uint8_t* rgba, bool smooth);
void drop_texture(unsigned int name);

}  // namespace runband::gl
