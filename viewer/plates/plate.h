// A figure as data: what to show of which solution, in which size and style.
#pragma once

#include <filesystem>
#include <string>

#include "core/solve/solution.h"
#include "viewer/plot/theme.h"

namespace runband {

struct Plate {
  std::string kind;     ///< "section", "patch", "curve", "scene" or "traverse"
  std::string contact;  ///< "left", "right tread", ...; empty: all (patch), or the one pressed hardest (section, scene)
  std::string field;    ///< patch: "analysis.field", empty for the pressure; curve: "analysis.curve"
  double width_mm = 180, height_mm = 120;
  double dpi = 300;
  plot::ThemeName theme = plot::ThemeName::paper;
  bool transparent = false;
  std::string
      date;  ///< printed and kept in the file if given; none by default, so that the same input gives the same bytes
};

/// "180x120mm" as width and height. @throws InputError (bad_option).
std::pair<double, double> parse_size(const std::string& text);

/// Draws section, patch or scene. The file's ending says the format: png, svg, pdf (scene: png, glb).
/// @throws InputError (bad_option, unknown_name, conflicting_keys), FileError.
void draw_plate(const Plate&, const Solution&, const std::filesystem::path& out);
/// Draws the traverse.
void draw_plate(const Plate&, const Traverse&, const std::filesystem::path& out);

}  // namespace runband
