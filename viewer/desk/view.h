// What is looked at and how: everything of a session that is not the case itself.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"
#include "viewer/plot/theme.h"
#include "viewer/scene/named_view.h"

namespace runband {

/// What the middle of the window shows.
enum class Sheet { scene, profiles, curves, analyses, compare };
inline constexpr const char* kSheetNames[] = {"Scene", "Profiles", "Curves", "Analyses", "Compare"};

enum class DetailStyle { flat, relief, hidden };

/// A value that stays: where it was read, and what was there.
struct Pin {
  int slot = 0;
  std::string side;           ///< contact's name when it was set
  double x_mm = 0, s_mm = 0;  ///< contact frame
  std::string field;          ///< "pressure" or "analysis.field"
  std::string words;          ///< "1 480 MPa" as it was read
  std::string state;          ///< "lateral 3.25 mm, yaw 0.0 mrad"
};

/// Choices that a picture depends on; undo takes them back with the case.
struct View {
  Sheet sheet = Sheet::scene;
  std::string contact;  ///< "left", "right", "left flange", ...; empty: the one pressed hardest
  std::string field = "pressure";
  plot::ColourMap map = plot::ColourMap::ember;
  int steps = 0;
  std::optional<plot::Range> locked_range;
  DetailStyle detail = DetailStyle::flat;
  bool arrows = true, states = true, pure_rolling = true, scale_disc = true;
  double wheel_opacity = 0.34;
  bool section_cut = false;
  double section_x_mm = 0;
  bool wear_depth = false;
  std::string curve = "rolling_radius_difference";  ///< of the strip
  std::string volume;                               ///< "subsurface.von_mises"; empty: none
  bool compare_overlaid = false, compare_difference = false;
  std::vector<Pin> pins;
};

/// How the window is set up; kept from one start to the next.
struct Layout {
  double left = 300, right = 372, strip = 230;
  plot::ThemeName theme = plot::ThemeName::light;
  double text_scale = 1;  ///< on top of the screen's own
  int width = 1440, height = 900;
  bool show_left = true, show_right = true, show_strip = true;
};

}  // namespace runband
