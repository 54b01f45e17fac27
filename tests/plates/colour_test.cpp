// The colour maps keep what they promise, to every eye.
#include <gtest/gtest.h>

#include <cmath>

#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"
#include "viewer/plot/theme.h"

namespace runband::plot {
namespace {

TEST(Ember, LightnessFallsEvenlyAlsoForADeuteranope) {
  double before = 2, before_deuteranope = 2;
  for (int k = 0; k <= 100; ++k) {
    const Colour c = colour_at(ColourMap::ember, k / 100.0);
    EXPECT_LT(to_oklab(c).lightness, before) << k;
    EXPECT_LT(to_oklab(as_deuteranope(c)).lightness, before_deuteranope + 1e-9) << k;
    before = to_oklab(c).lightness;
    before_deuteranope = to_oklab(as_deuteranope(c)).lightness;
  }
}

TEST(Tide, LightnessIsSymmetricAboutTheMiddle) {
  for (int k = 0; k <= 50; ++k) {
    const double low = to_oklab(colour_at(ColourMap::tide, 0.5 - k / 100.0)).lightness;
    const double high = to_oklab(colour_at(ColourMap::tide, 0.5 + k / 100.0)).lightness;
    EXPECT_NEAR(low, high, 0.02) << k;
  }
  // Opposite signs stay apart without the middle-wavelength cones.
  EXPECT_GT(
      difference(as_deuteranope(colour_at(ColourMap::tide, 0.1)), as_deuteranope(colour_at(ColourMap::tide, 0.9))),
      0.15);
}

TEST(States, StayApartOnAGreyPrinterAndForADeuteranope) {
  const Colour inks[] = {state_colour(StateInk::stick), state_colour(StateInk::slip), state_colour(StateInk::open)};
  for (int a = 0; a < 3; ++a) {
    for (int b = a + 1; b < 3; ++b) {
      EXPECT_GT(std::abs(to_oklab(inks[a]).lightness - to_oklab(inks[b]).lightness), 0.12) << a << b;
      EXPECT_GT(difference(as_deuteranope(inks[a]), as_deuteranope(inks[b])), 0.12) << a << b;
    }
  }
}

TEST(Themes, TextIsReadable) {
  // Contrast 4.5 : 1 for text, 3 : 1 for marks: WCAG 2.1, success criteria 1.4.3 and 1.4.11.
  for (const ThemeName name : {ThemeName::paper, ThemeName::light, ThemeName::dark}) {
    const Theme& t = theme(name);
    EXPECT_GE(contrast(t.ink, t.paper), 4.5) << theme_name(name);
    EXPECT_GE(contrast(t.quiet, t.paper), 4.5) << theme_name(name);
    EXPECT_GE(contrast(t.accent, t.paper), 3.0) << theme_name(name);
    EXPECT_GE(contrast(t.warning, t.paper), 3.0) << theme_name(name);
  }
}

TEST(Numbers, AreSetAsAReaderWantsThem) {
  EXPECT_EQ(number(-1234.5, 1), "−1\u2009234.5");
  EXPECT_EQ(number(-0.01, 1), "0.0");
  EXPECT_EQ(number(NAN, 1), "–");
  EXPECT_EQ(scale_text(5), "5 : 1");
  EXPECT_EQ(drawing_scale(3.7), 2.0);  // ISO 5455: 1, 2, 5, 10
}

}  // namespace
}  // namespace runband::plot
