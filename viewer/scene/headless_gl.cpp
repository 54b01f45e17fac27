#include "viewer/scene/headless_gl.h"

#include <EGL/egl.h>
#include <EGL/eglext.h>
#include <dlfcn.h>

#include <cstdlib>

#include "core/base/error.h"

// On EGL, glewInit loads every core entry point and then returns 4 (GLEW_ERROR_NO_GLX_DISPLAY), which VTK takes for a
// failure. The program's own glewInit comes first in symbol lookup (it is linked with exports) and turns 4 into success.
extern "C" unsigned int glewInit() {
  using Init = unsigned int (*)();
  static const Init real = reinterpret_cast<Init>(::dlsym(RTLD_NEXT, "glewInit"));
  const unsigned int result = real == nullptr ? 1U : real();
  return result == 4U ? 0U : result;
}

namespace runband {

struct HeadlessGl::Handles {
  EGLDisplay display = EGL_NO_DISPLAY;
  EGLContext context = EGL_NO_CONTEXT;
};

HeadlessGl::HeadlessGl() : handles_(std::make_unique<Handles>()) {
  const auto require = [](bool good, const char* step) {
    if (good) return;
    throw Error(ErrorCode::no_solution, std::string("three-dimensional drawing: ") + step + " failed.",
                "install Mesa's software drawing (Debian: libegl1 and libgl1-mesa-dri).");
  };
  const auto platform_display =
      reinterpret_cast<PFNEGLGETPLATFORMDISPLAYEXTPROC>(eglGetProcAddress("eglGetPlatformDisplayEXT"));
  require(platform_display != nullptr, "finding eglGetPlatformDisplayEXT");
  handles_->display = platform_display(EGL_PLATFORM_SURFACELESS_MESA, EGL_DEFAULT_DISPLAY, nullptr);
  require(handles_->display != EGL_NO_DISPLAY && eglInitialize(handles_->display, nullptr, nullptr) == EGL_TRUE,
          "opening EGL without a display");
  require(eglBindAPI(EGL_OPENGL_API) == EGL_TRUE, "asking for OpenGL");
  const EGLint wanted[] = {EGL_SURFACE_TYPE, EGL_PBUFFER_BIT, EGL_RENDERABLE_TYPE, EGL_OPENGL_BIT, EGL_NONE};
  EGLConfig config = nullptr;
  EGLint count = 0;
  require(eglChooseConfig(handles_->display, wanted, &config, 1, &count) == EGL_TRUE && count > 0, "choosing a format");
  const EGLint version[] = {EGL_CONTEXT_MAJOR_VERSION, 3, EGL_CONTEXT_MINOR_VERSION, 3, EGL_NONE};
  handles_->context = eglCreateContext(handles_->display, config, EGL_NO_CONTEXT, version);
  require(handles_->context != EGL_NO_CONTEXT, "making an OpenGL 3.3 context");
  require(eglMakeCurrent(handles_->display, EGL_NO_SURFACE, EGL_NO_SURFACE, handles_->context) == EGL_TRUE,
          "making the context current");
}

HeadlessGl::~HeadlessGl() {
  eglMakeCurrent(handles_->display, EGL_NO_SURFACE, EGL_NO_SURFACE, EGL_NO_CONTEXT);
  eglDestroyContext(handles_->display, handles_->context);
}

}  // namespace runband
