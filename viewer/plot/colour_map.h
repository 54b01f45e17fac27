// Colour maps of our own, built in OKLab, and one well-known neighbour.
#pragma once

#include <array>
#include <optional>
#include <string_view>
#include <vector>

#include "viewer/plot/colour.h"

namespace runband::plot {

/// ember: magnitudes, paper to straw to rust to dark plum, lightness falls evenly.
/// tide: signed quantities, blue to paper to rust, lightness symmetric about the middle.
/// viridis: the widely used sequential map, for readers who expect it.
enum class ColourMap { ember, tide, viridis };

/// The colour at t in 0..1; outside it is clamped, not-a-number gives a transparent colour.
Colour colour_at(ColourMap, double t);
/// True for maps whose middle means zero.
constexpr bool is_signed(ColourMap map) { return map == ColourMap::tide; }
const char* colour_map_name(ColourMap);
std::optional<ColourMap> colour_map_named(std::string_view name);

/// stick, slip, open: three inks that stay apart on a grey printer. The label's index in `labels` counts; further
/// labels repeat. Labels are named as analyses name them.
enum class StateInk { stick, slip, open };
Colour state_colour(StateInk);

}  // namespace runband::plot
