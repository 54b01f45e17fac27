// A solution drawn in three dimensions, without a display.
#pragma once

#include <filesystem>

#include "core/solve/solution.h"
#include "viewer/plot/canvas.h"
#include "viewer/plot/theme.h"

namespace runband {

struct SceneOptions {
  int width_px = 1600, height_px = 1000;
  double pixels_per_mm = 8;  ///< of paper: line widths follow it
  plot::ThemeName theme = plot::ThemeName::paper;
  bool transparent = false;
  std::size_t contact = 0;  ///< index of the contact that the camera looks at; it has a patch
};

struct ScenePicture {
  plot::Image image;
  plot::Point contact_px;  ///< the looked-at contact in the image
  double px_per_mm = 1;    ///< at the contact, in the picture plane
};

/// The same input gives the same bytes. @throws InputError (conflicting_keys) for a bench case.
ScenePicture draw_scene(const Solution&, const SceneOptions&);

/// Rails, wheels, axle and patches in one GLB file (metres), patches coloured.
void write_scene_glb(const Solution&, const std::filesystem::path&);

}  // namespace runband
