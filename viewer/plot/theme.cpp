#include "viewer/plot/theme.h"

namespace runband::plot {

namespace {

Theme make(ThemeName name, const char* paper, const char* sheet, const char* scene, const char* rule, const char* ink,
           const char* quiet, const char* steel, const char* accent, const char* warning, const char* warning_ground,
           const char* wheel_fill, const char* rail_fill) {
  return {name,
          colour_from_hex(paper),
          colour_from_hex(sheet),
          colour_from_hex(scene),
          colour_from_hex(rule),
          colour_from_hex(ink),
          colour_from_hex(quiet),
          colour_from_hex(steel),
          colour_from_hex(accent),
          colour_from_hex(warning),
          colour_from_hex(warning_ground),
          colour_from_hex(wheel_fill),
          colour_from_hex(rail_fill)};
}

}  // namespace

const char* theme_name(ThemeName name) {
  switch (name) {
    case ThemeName::paper:
      return "paper";
    case ThemeName::light:
      return "light";
    case ThemeName::dark:
      return "dark";
  }
  return "";
}

std::optional<ThemeName> theme_named(std::string_view name) {
  for (const ThemeName each : {ThemeName::paper, ThemeName::light, ThemeName::dark})
    if (name == theme_name(each)) return each;
  return std::nullopt;
}

const Theme& theme(ThemeName name) {
  static const Theme kPaper = make(ThemeName::paper, "#FFFFFF", "#FFFFFF", "#FFFFFF", "#D6D4CE", "#1E2A32", "#5F6A73",
                                   "#7E8C97", "#2B5F8C", "#B8461F", "#F9EEE4", "#E3E9EE", "#EDEAE3");
  static const Theme kLight = make(ThemeName::light, "#F6F3EC", "#FCFAF5", "#ECE8DF", "#D9D3C6", "#1E2A32", "#5C6770",
                                   "#78858F", "#2B5F8C", "#B0431D", "#F7E9DD", "#DBE2E7", "#E4DED1");
  static const Theme kDark = make(ThemeName::dark, "#15191C", "#1C2125", "#101416", "#3A4248", "#ECE8DF", "#A3ADB5",
                                  "#8594A0", "#86B6DE", "#EE8F6C", "#38241C", "#2C363D", "#35322B");
  switch (name) {
    case ThemeName::paper:
      return kPaper;
    case ThemeName::light:
      return kLight;
    case ThemeName::dark:
      return kDark;
  }
  return kPaper;
}

Colour Theme::of(Ink which) const {
  switch (which) {
    case Ink::ink:
      return ink;
    case Ink::quiet:
      return quiet;
    case Ink::steel:
      return steel;
    case Ink::rule:
      return rule;
    case Ink::accent:
      return accent;
    case Ink::warning:
      return warning;
    case Ink::paper:
      return paper;
    case Ink::sheet:
      return sheet;
  }
  return ink;
}

}  // namespace runband::plot
