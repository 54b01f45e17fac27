#include "viewer/plot/colour.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"

namespace runband::plot {

namespace {

double to_linear(double part) { return part <= 0.04045 ? part / 12.92 : std::pow((part + 0.055) / 1.055, 2.4); }
double to_srgb(double part) { return part <= 0.0031308 ? 12.92 * part : 1.055 * std::pow(part, 1.0 / 2.4) - 0.055; }

int hex_digit(char c) {
  if (c >= '0' && c <= '9') return c - '0';
  if (c >= 'a' && c <= 'f') return c - 'a' + 10;
  if (c >= 'A' && c <= 'F') return c - 'A' + 10;
  return -1;
}

}  // namespace

Colour colour_from_hex(std::string_view hex) {
  double parts[3] = {};
  bool good = hex.size() == 7 && hex[0] == '#';
  for (std::size_t i = 0; good && i < 3; ++i) {
    const int high = hex_digit(hex[1 + 2 * i]), low = hex_digit(hex[2 + 2 * i]);
    good = high >= 0 && low >= 0;
    parts[i] = (high * 16 + low) / 255.0;
  }
  if (!good)
    throw InputError(ErrorCode::bad_syntax, "colour: \"" + std::string(hex) + "\" is not a colour.",
                     "write it as #RRGGBB.");
  return {parts[0], parts[1], parts[2], 1.0};
}

std::uint8_t byte_of(double part) { return static_cast<std::uint8_t>(std::lround(std::clamp(part, 0.0, 1.0) * 255.0)); }

std::string colour_to_hex(const Colour& colour) {
  constexpr char kDigits[] = "0123456789abcdef";
  std::string text = "#";
  for (const double part : {colour.r, colour.g, colour.b}) {
    const std::uint8_t byte = byte_of(part);
    text += kDigits[byte >> 4];
    text += kDigits[byte & 15];
  }
  return text;
}

Colour with_opacity(Colour colour, double opacity) {
  colour.a *= opacity;
  return colour;
}

OkLab to_oklab(const Colour& colour) {
  const double r = to_linear(colour.r), g = to_linear(colour.g), b = to_linear(colour.b);
  const double l = std::cbrt(0.4122214708 * r + 0.5363325363 * g + 0.0514459929 * b);
  const double m = std::cbrt(0.2119034982 * r + 0.6806995451 * g + 0.1073969566 * b);
  const double s = std::cbrt(0.0883024619 * r + 0.2817188376 * g + 0.6299787005 * b);
  return {0.2104542553 * l + 0.7936177850 * m - 0.0040720468 * s,
          1.9779984951 * l - 2.4285922050 * m + 0.4505937099 * s,
          0.0259040371 * l + 0.7827717662 * m - 0.8086757660 * s};
}

Colour from_oklab(const OkLab& lab) {
  const auto cubed = [](double v) { return v * v * v; };
  const double l = cubed(lab.lightness + 0.3963377774 * lab.a + 0.2158037573 * lab.b);
  const double m = cubed(lab.lightness - 0.1055613458 * lab.a - 0.0638541728 * lab.b);
  const double s = cubed(lab.lightness - 0.0894841775 * lab.a - 1.2914855480 * lab.b);
  return {to_srgb(4.0767416621 * l - 3.3077115913 * m + 0.2309699292 * s),
          to_srgb(-1.2684380046 * l + 2.6097574011 * m - 0.3413193965 * s),
          to_srgb(-0.0041960863 * l - 0.7034186147 * m + 1.7076147010 * s), 1.0};
}

OkLab oklab_of(double lightness, double chroma, double hue_deg) {
  const double hue = hue_deg * std::numbers::pi / 180.0;
  return {lightness, chroma * std::cos(hue), chroma * std::sin(hue)};
}

bool in_gamut(const Colour& colour, double slack) {
  const auto inside = [slack](double part) { return part >= -slack && part <= 1.0 + slack; };
  return inside(colour.r) && inside(colour.g) && inside(colour.b);
}

Colour clamped(const Colour& colour) {
  return {std::clamp(colour.r, 0.0, 1.0), std::clamp(colour.g, 0.0, 1.0), std::clamp(colour.b, 0.0, 1.0), colour.a};
}

double difference(const Colour& one, const Colour& other) {
  const OkLab p = to_oklab(one), q = to_oklab(other);
  return std::hypot(p.lightness - q.lightness, p.a - q.a, p.b - q.b);
}

Colour mix(const Colour& from, const Colour& to, double t) {
  const OkLab p = to_oklab(from), q = to_oklab(to);
  Colour mixed =
      clamped(from_oklab({std::lerp(p.lightness, q.lightness, t), std::lerp(p.a, q.a, t), std::lerp(p.b, q.b, t)}));
  mixed.a = std::lerp(from.a, to.a, t);
  return mixed;
}

double luminance(const Colour& colour) {
  return 0.2126 * to_linear(colour.r) + 0.7152 * to_linear(colour.g) + 0.0722 * to_linear(colour.b);
}

double contrast(const Colour& one, const Colour& other) {
  const double a = luminance(one), b = luminance(other);
  return (std::max(a, b) + 0.05) / (std::min(a, b) + 0.05);
}

Colour as_deuteranope(const Colour& colour) {
  const double r = to_linear(colour.r), g = to_linear(colour.g), b = to_linear(colour.b);
  return clamped({to_srgb(std::max(0.0, 0.367322 * r + 0.860646 * g - 0.227968 * b)),
                  to_srgb(std::max(0.0, 0.280085 * r + 0.672501 * g + 0.047413 * b)),
                  to_srgb(std::max(0.0, -0.011820 * r + 0.042940 * g + 0.968881 * b)), colour.a});
}

}  // namespace runband::plot
