#include "viewer/plot/colour_map.h"

#include <algorithm>
#include <cmath>
#include <span>

namespace runband::plot {

namespace {

// One stop of a map in lightness, chroma and hue (degrees).
struct Stop {
  double t, lightness, chroma, hue_deg;
};

// Catmull-Rom through a and b of the stops; lightness is taken straight between the ends of each stop, so that a map
// whose stops lie on a line in lightness is exactly even.
Colour through(std::span<const Stop> stops, double t) {
  std::size_t i = 0;
  while (i + 2 < stops.size() && t > stops[i + 1].t) ++i;
  const double u = (t - stops[i].t) / (stops[i + 1].t - stops[i].t);
  const auto lab = [&](std::size_t k) { return oklab_of(stops[k].lightness, stops[k].chroma, stops[k].hue_deg); };
  const OkLab p1 = lab(i), p2 = lab(i + 1), p0 = i > 0 ? lab(i - 1) : p1, p3 = i + 2 < stops.size() ? lab(i + 2) : p2;
  const auto spline = [u](double q0, double q1, double q2, double q3) {
    return q1 + 0.5 * u * (q2 - q0 + u * (2 * q0 - 5 * q1 + 4 * q2 - q3 + u * (3 * (q1 - q2) + q3 - q0)));
  };
  return clamped(from_oklab(
      {std::lerp(p1.lightness, p2.lightness, u), spline(p0.a, p1.a, p2.a, p3.a), spline(p0.b, p1.b, p2.b, p3.b)}));
}

constexpr double kEmberTop = 0.970, kEmberBottom = 0.250;
constexpr double ember_lightness(double t) { return kEmberTop + (kEmberBottom - kEmberTop) * t; }
constexpr Stop ember_stop(double t, double chroma, double hue) { return {t, ember_lightness(t), chroma, hue}; }
constexpr std::array kEmber{ember_stop(0.00, 0.012, 95), ember_stop(0.16, 0.078, 97), ember_stop(0.34, 0.132, 78),
                            ember_stop(0.54, 0.158, 50), ember_stop(0.72, 0.140, 32), ember_stop(0.87, 0.104, 12),
                            ember_stop(1.00, 0.072, 352)};

constexpr double kTideMiddle = 0.965, kTideEnd = 0.400;
constexpr double tide_lightness(double t) {
  return kTideEnd + (kTideMiddle - kTideEnd) * (t < 0.5 ? 2 * t : 2 - 2 * t);
}
constexpr Stop tide_stop(double t, double chroma, double hue) { return {t, tide_lightness(t), chroma, hue}; }
constexpr std::array kTideBlue{tide_stop(0.00, 0.105, 252), tide_stop(0.18, 0.112, 248), tide_stop(0.36, 0.060, 240),
                               tide_stop(0.50, 0.006, 95)};
constexpr std::array kTideRust{tide_stop(0.50, 0.006, 95), tide_stop(0.64, 0.060, 62), tide_stop(0.82, 0.135, 45),
                               tide_stop(1.00, 0.125, 35)};

// Ten stops of viridis (S. van der Walt, N. Smith, 2015) (memory).
constexpr std::array kViridis{"#440154", "#482878", "#3e4989", "#31688e", "#26828e",
                              "#1f9e89", "#35b779", "#6ece58", "#b5de2b", "#fde725"};

}  // namespace

Colour colour_at(ColourMap map, double t) {
  if (std::isnan(t)) return {0, 0, 0, 0};
  t = std::clamp(t, 0.0, 1.0);
  switch (map) {
    case ColourMap::ember:
      return through(kEmber, t);
    case ColourMap::tide:
      return t <= 0.5 ? through(kTideBlue, t) : through(kTideRust, t);
    case ColourMap::viridis: {
      const double place = t * (kViridis.size() - 1);
      const auto i = std::min(static_cast<std::size_t>(place), kViridis.size() - 2);
      return mix(colour_from_hex(kViridis[i]), colour_from_hex(kViridis[i + 1]), place - static_cast<double>(i));
    }
  }
  return {};
}

const char* colour_map_name(ColourMap map) {
  switch (map) {
    case ColourMap::ember:
      return "ember";
    case ColourMap::tide:
      return "tide";
    case ColourMap::viridis:
      return "viridis";
  }
  return "";
}

std::optional<ColourMap> colour_map_named(std::string_view name) {
  for (const ColourMap map : {ColourMap::ember, ColourMap::tide, ColourMap::viridis})
    if (name == colour_map_name(map)) return map;
  return std::nullopt;
}

Colour state_colour(StateInk state) {
  switch (state) {
    case StateInk::stick:
      return colour_from_hex("#2B4F70");
    case StateInk::slip:
      return colour_from_hex("#D99A4E");
    case StateInk::open:
      return colour_from_hex("#EFEBE2");
  }
  return {};
}

}  // namespace runband::plot
