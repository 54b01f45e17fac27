#include "viewer/window/gl.h"

#define GL_GLEXT_PROTOTYPES 1
#include <GL/gl.h>
#include <GL/glext.h>

namespace runband::gl {

Framebuffer make_framebuffer(int width, int height) {
  Framebuffer f;
  glGenFramebuffers(1, &f.name);
  glGenRenderbuffers(1, &f.colour);
  glGenRenderbuffers(1, &f.depth);
  glBindRenderbuffer(GL_RENDERBUFFER, f.colour);
  glRenderbufferStorage(GL_RENDERBUFFER, GL_RGBA8, width, height);
  glBindRenderbuffer(GL_RENDERBUFFER, f.depth);
  glRenderbufferStorage(GL_RENDERBUFFER, GL_DEPTH_COMPONENT24, width, height);
  glBindFramebuffer(GL_FRAMEBUFFER, f.name);
  glFramebufferRenderbuffer(GL_FRAMEBUFFER, GL_COLOR_ATTACHMENT0, GL_RENDERBUFFER, f.colour);
  glFramebufferRenderbuffer(GL_FRAMEBUFFER, GL_DEPTH_ATTACHMENT, GL_RENDERBUFFER, f.depth);
  return f;
}

void drop(Framebuffer& f) {
  if (f.name != 0) glDeleteFramebuffers(1, &f.name);
  if (f.colour != 0) glDeleteRenderbuffers(1, &f.colour);
  if (f.depth != 0) glDeleteRenderbuffers(1, &f.depth);
  f = {};
}

void bind(unsigned int framebuffer, int width, int height) {
  glBindFramebuffer(GL_FRAMEBUFFER, framebuffer);
  glViewport(0, 0, width, height);
  glDisable(GL_SCISSOR_TEST);
}

void clear(double r, double g, double b) {
  glColorMask(GL_TRUE, GL_TRUE, GL_TRUE, GL_TRUE);
  glClearColor(static_cast<float>(r), static_cast<float>(g), static_cast<float>(b), 1.0F);
  glClear(GL_COLOR_BUFFER_BIT);
}

void read_pixels(int width, int height, std::uint8_t* rgba) {
  glPixelStorei(GL_PACK_ALIGNMENT, 1);
  glReadPixels(0, 0, width, height, GL_RGBA, GL_UNSIGNED_BYTE, rgba);
}

unsigned int make_texture(int width, int height, const std::uint8_t* rgba, bool smooth) {
  GLint before = 0;
  glGetIntegerv(GL_TEXTURE_BINDING_2D, &before);
  GLuint name = 0;
  glGenTextures(1, &name);
  glBindTexture(GL_TEXTURE_2D, name);
  const GLint filter = smooth ? GL_LINEAR : GL_NEAREST;
  glTexParameteri(GL_TEXTURE_2D, GL_TEXTURE_MIN_FILTER, filter);
  glTexParameteri(GL_TEXTURE_2D, GL_TEXTURE_MAG_FILTER, filter);
  glTexParameteri(GL_TEXTURE_2D, GL_TEXTURE_WRAP_S, GL_CLAMP_TO_EDGE);
  glTexParameteri(GL_TEXTURE_2D, GL_TEXTURE_WRAP_T, GL_CLAMP_TO_EDGE);
  glPixelStorei(GL_UNPACK_ALIGNMENT, 1);
  glPixelStorei(GL_UNPACK_ROW_LENGTH, 0);
  glTexImage2D(GL_TEXTURE_2D, 0, GL_RGBA, width, height, 0, GL_RGBA, GL_UNSIGNED_BYTE, rgba);
  glBindTexture(GL_TEXTURE_2D, static_cast<GLuint>(before));
  return name;
}

void drop_texture(unsigned int name) {
  if (name != 0) glDeleteTextures(1, &name);
}

}  // namespace runband::gl
