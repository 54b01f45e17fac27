// Paper and inks: what every picture and later the window is drawn with.
#pragma once

#include <optional>
#include <string_view>

#include "viewer/plot/colour.h"

namespace runband::plot {

/// paper: white, for reports and print. light: warm paper, for a projector. dark: for a dim room.
enum class ThemeName { paper, light, dark };
const char* theme_name(ThemeName);
std::optional<ThemeName> theme_named(std::string_view name);

/// What a stroke or a word is for; the theme says which colour that is.
enum class Ink { ink, quiet, steel, rule, accent, warning, paper, sheet };

struct Theme {
  ThemeName name = ThemeName::paper;
  Colour paper;           ///< the ground
  Colour sheet;           ///< raised areas, detail circles
  Colour scene;           ///< behind the three-dimensional view
  Colour rule;            ///< lines that only separate
  Colour ink;             ///< words and main lines
  Colour quiet;           ///< units, notes
  Colour steel;           ///< bodies and secondary lines
  Colour accent;          ///< the one blue
  Colour warning;         ///< the one red
  Colour warning_ground;  ///< behind a warning
  Colour wheel_fill, rail_fill;
  Colour of(Ink) const;
};

const Theme& theme(ThemeName);

}  // namespace runband::plot
