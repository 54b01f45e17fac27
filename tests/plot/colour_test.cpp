#include "viewer/plot/colour.h"

#include <gtest/gtest.h>

#include <cmath>

#include "core/base/error.h"
#include "viewer/plot/colour_map.h"
#include "viewer/plot/theme.h"

namespace runband::plot {
namespace {

constexpr int kSamples = 256;
// Just noticeable side by side in OKLab is about 0.02 (common practice, no source); eight steps of a map must stay
// five times as far apart.
constexpr double kStepDifference = 0.1;
// The same for a reader without middle-wavelength cones, who keeps lightness and the blue-yellow axis.
constexpr double kStepDifferenceDeuteranope = 0.08;

// B. Ottosson (2020), table "Example XYZ and Oklab results", and white and the primaries by the same transform
// (values of the CSS Color 4 sample code, memory): rounding of the published digits.
TEST(Colour, OkLabOfWhiteAndRedAreThePublishedOnes) {
  const OkLab white = to_oklab({1, 1, 1});
  EXPECT_NEAR(white.lightness, 1.0, 1e-6);
  EXPECT_NEAR(white.a, 0.0, 1e-6);
  EXPECT_NEAR(white.b, 0.0, 1e-6);
  const OkLab red = to_oklab({1, 0, 0});
  EXPECT_NEAR(red.lightness, 0.62796, 5e-5);
  EXPECT_NEAR(red.a, 0.22486, 5e-5);
  EXPECT_NEAR(red.b, 0.12585, 5e-5);
}

TEST(Colour, OkLabGoesThereAndBack) {
  for (int i = 0; i < 1000; ++i) {
    const int tens = i / 10 % 10, hundreds = i / 100;
    const Colour colour{(i % 10) / 9.0, tens / 9.0, hundreds / 9.0};
    const Colour back = from_oklab(to_oklab(colour));
    // The published matrices are rounded to ten digits; near black the power law stretches that to some 1e-6.
    EXPECT_NEAR(back.r, colour.r, 5e-6);
    EXPECT_NEAR(back.g, colour.g, 5e-6);
    EXPECT_NEAR(back.b, colour.b, 5e-6);
  }
}

// WCAG 2.1: black on white is 21 : 1; #767676 is the lightest grey that reaches 4.5 : 1 on white.
TEST(Colour, ContrastFollowsThePublishedRule) {
  EXPECT_NEAR(contrast({0, 0, 0}, {1, 1, 1}), 21.0, 1e-12);
  EXPECT_GE(contrast(colour_from_hex("#767676"), {1, 1, 1}), 4.5);
  EXPECT_LT(contrast(colour_from_hex("#777777"), {1, 1, 1}), 4.5);
}

TEST(Colour, HexIsReadStrictlyAndWrittenBack) {
  EXPECT_EQ(colour_to_hex(colour_from_hex("#1E2A32")), "#1e2a32");
  for (const char* bad : {"", "1E2A32", "#1E2A3", "#1E2A3G", "#1E2A322"})
    EXPECT_THROW(colour_from_hex(bad), InputError) << bad;
}

class SequentialMaps : public testing::TestWithParam<ColourMap> {};
INSTANTIATE_TEST_SUITE_P(Maps, SequentialMaps, testing::Values(ColourMap::ember, ColourMap::viridis),
                         [](const auto& instance) { return std::string(colour_map_name(instance.param)); });

TEST_P(SequentialMaps, LightnessIsStrictlyMonotone) {
  const double direction = GetParam() == ColourMap::ember ? -1 : 1;
  for (int i = 1; i < kSamples; ++i) {
    const double before = to_oklab(colour_at(GetParam(), (i - 1.0) / (kSamples - 1))).lightness;
    const double after = to_oklab(colour_at(GetParam(), i / (kSamples - 1.0))).lightness;
    EXPECT_GT(direction * (after - before), 0) << i;
  }
}

TEST_P(SequentialMaps, EightStepsAreTellableAlsoByADeuteranope) {
  for (int i = 1; i < 8; ++i) {
    const Colour a = colour_at(GetParam(), (i - 1) / 7.0), b = colour_at(GetParam(), i / 7.0);
    EXPECT_GT(difference(a, b), kStepDifference * 0.75) << i;
    EXPECT_GT(difference(as_deuteranope(a), as_deuteranope(b)), kStepDifferenceDeuteranope * 0.75) << i;
  }
}

TEST(Ember, LightnessFallsEvenly) {
  const double top = to_oklab(colour_at(ColourMap::ember, 0)).lightness;
  const double bottom = to_oklab(colour_at(ColourMap::ember, 1)).lightness;
  for (int i = 0; i < kSamples; ++i) {
    const double t = i / (kSamples - 1.0);
    // Clamping to sRGB may move a colour a little; more would mean that the map leaves the gamut.
    EXPECT_NEAR(to_oklab(colour_at(ColourMap::ember, t)).lightness, std::lerp(top, bottom, t), 0.002) << t;
  }
}

TEST(Tide, IsSymmetricInLightnessAndItsEndsDiffer) {
  for (int i = 0; i < kSamples; ++i) {
    const double t = i / (kSamples - 1.0);
    EXPECT_NEAR(to_oklab(colour_at(ColourMap::tide, t)).lightness,
                to_oklab(colour_at(ColourMap::tide, 1 - t)).lightness, 0.002)
        << t;
  }
  for (const double t : {0.0, 0.1, 0.2, 0.3, 0.4}) {
    const Colour low = colour_at(ColourMap::tide, t), high = colour_at(ColourMap::tide, 1 - t);
    EXPECT_GT(difference(low, high), kStepDifference * 0.5) << t;
    EXPECT_GT(difference(as_deuteranope(low), as_deuteranope(high)), kStepDifferenceDeuteranope * 0.5) << t;
  }
}

TEST(StateInks, SurviveAGreyPrinterAndADeuteranope) {
  const Colour inks[] = {state_colour(StateInk::stick), state_colour(StateInk::slip), state_colour(StateInk::open)};
  for (int i = 0; i < 3; ++i) {
    for (int j = i + 1; j < 3; ++j) {
      EXPECT_GT(std::abs(to_oklab(inks[i]).lightness - to_oklab(inks[j]).lightness), 0.15);
      EXPECT_GT(difference(as_deuteranope(inks[i]), as_deuteranope(inks[j])), 0.15);
    }
  }
}

TEST(ColourMaps, ClampAtTheirEndsAndLeaveNotANumberEmpty) {
  for (const ColourMap map : {ColourMap::ember, ColourMap::tide, ColourMap::viridis}) {
    EXPECT_EQ(colour_at(map, -1), colour_at(map, 0));
    EXPECT_EQ(colour_at(map, 2), colour_at(map, 1));
    EXPECT_EQ(colour_at(map, std::nan("")).a, 0);
    EXPECT_EQ(colour_map_named(colour_map_name(map)), map);
  }
}

// 4.5 : 1 for words and 3 : 1 for marks: WCAG 2.1, success criteria 1.4.3 and 1.4.11.
TEST(Themes, WordsAndMarksStandOutOnEveryGround) {
  for (const ThemeName name : {ThemeName::paper, ThemeName::light, ThemeName::dark}) {
    const Theme& t = theme(name);
    for (const Colour& ground : {t.paper, t.sheet, t.scene}) {
      for (const Colour& words : {t.ink, t.quiet, t.accent, t.warning})
        EXPECT_GE(contrast(words, ground), 4.5) << theme_name(name) << " " << colour_to_hex(words);
      EXPECT_GE(contrast(t.steel, ground), 3.0) << theme_name(name);
    }
    EXPECT_GE(contrast(t.ink, t.warning_ground), 4.5);
    EXPECT_GE(contrast(t.ink, t.wheel_fill), 4.5);
    EXPECT_GE(contrast(t.ink, t.rail_fill), 4.5);
  }
}

}  // namespace
}  // namespace runband::plot
