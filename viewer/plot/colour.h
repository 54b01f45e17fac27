// Colours as the eye sees them: sRGB for drawing, OKLab for building and measuring.
#pragma once

#include <cstdint>
#include <string>
#include <string_view>

namespace runband::plot {

/// An sRGB colour, each part 0..1, alpha not premultiplied.
struct Colour {
  double r = 0, g = 0, b = 0, a = 1;
  bool operator==(const Colour&) const = default;
};

/// "#RRGGBB". @throws InputError (bad_syntax) on anything else.
Colour colour_from_hex(std::string_view hex);
/// "#rrggbb", alpha left out, each part rounded to 8 bits.
std::string colour_to_hex(const Colour&);
/// 8-bit value of one part, rounded to nearest.
std::uint8_t byte_of(double part);
Colour with_opacity(Colour, double opacity);

/// Perceptual coordinates: lightness 0..1, a green-red, b blue-yellow.
/// @source B. Ottosson, "A perceptual color space for image processing" (2020).
struct OkLab {
  double lightness = 0, a = 0, b = 0;
};
OkLab to_oklab(const Colour&);
/// Parts may leave 0..1 where the point is outside sRGB; see in_gamut.
Colour from_oklab(const OkLab&);
/// From lightness, chroma and hue in degrees.
OkLab oklab_of(double lightness, double chroma, double hue_deg);
bool in_gamut(const Colour&, double slack = 1e-9);
Colour clamped(const Colour&);
/// Euclidean distance in OKLab; about 0.02 is just noticeable side by side.
double difference(const Colour&, const Colour&);

/// Straight mix in OKLab, t = 0 gives `from`.
Colour mix(const Colour& from, const Colour& to, double t);

/// Relative luminance and contrast ratio 1..21. @source WCAG 2.1, "relative luminance" and "contrast ratio".
double luminance(const Colour&);
double contrast(const Colour&, const Colour&);

/// What a reader without the middle-wavelength cones sees.
/// @source Machado, Oliveira, Fernandes (2009), table 1, deuteranomaly of severity 1.0 (memory).
Colour as_deuteranope(const Colour&);

}  // namespace runband::plot
