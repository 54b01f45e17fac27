#include "viewer/plot/numbers.h"

#include <gtest/gtest.h>

#include <cmath>
#include <random>

namespace runband::plot {
namespace {

TEST(Number, UsesTrueMinusAndThinSpaces) {
  EXPECT_EQ(number(1480, 0), "1\u2009480");
  EXPECT_EQ(number(-1234567.891, 2), "\u22121\u2009234\u2009567.89");
  EXPECT_EQ(number(-0.001, 1), "0.0");
  EXPECT_EQ(number(999.96, 1), "1\u2009000.0");
  EXPECT_EQ(number(std::nan(""), 1), "\u2013");
  EXPECT_EQ(number(-INFINITY, 1), "\u2212\u221e");
  EXPECT_EQ(number_with_digits(0.0123456, 3), "0.0123");
  EXPECT_EQ(number_with_digits(123.456, 3), "123");
  EXPECT_EQ(power_of_ten(-12), "10\u207b\u00b9\u00b2");
}

TEST(LinearTicks, AreRoundInRangeAndNotTooMany) {
  std::mt19937 random(7);
  std::uniform_real_distribution<double> exponent(-6, 6), place(-3, 3);
  for (int i = 0; i < 2000; ++i) {
    const double span = std::pow(10, exponent(random)), low = place(random) * span;
    const int most = 2 + i % 9;
    const auto ticks = linear_ticks({low, low + span}, most);
    int named = 0;
    double last = -INFINITY;
    for (const Tick& tick : ticks) {
      EXPECT_GT(tick.value, last);
      last = tick.value;
      EXPECT_GE(tick.value, low - 1e-6 * span);
      EXPECT_LE(tick.value, low + span + 1e-6 * span);
      named += tick.text.empty() ? 0 : 1;
    }
    EXPECT_LE(named, most);
    EXPECT_GE(named, 1);
  }
}

TEST(LinearTicks, NameWhatARulerWould) {
  std::string names;
  for (const Tick& tick : linear_ticks({-8, 8}, 9))
    if (tick.major) names += tick.text + " ";
  EXPECT_EQ(names, "\u22128 \u22126 \u22124 \u22122 0 2 4 6 8 ");
}

TEST(LinearTicks, OfNothingAreNone) {
  EXPECT_TRUE(linear_ticks({1, 1}, 5).empty());
  EXPECT_TRUE(linear_ticks(empty_range(), 5).empty());
}

TEST(LogarithmicTicks, NameDecades) {
  std::string names;
  for (const Tick& tick : logarithmic_ticks({1e-3, 1e3}, 7)) names += tick.text.empty() ? "" : tick.text + " ";
  EXPECT_EQ(names, "10\u207b\u00b3 10\u207b\u00b2 10\u207b\u00b9 10\u2070 10\u00b9 10\u00b2 10\u00b3 ");
}

// ISO 5455:1979, table: 50:1 20:1 10:1 5:1 2:1, 1:1, 1:2 1:5 1:10 1:20 ...
TEST(DrawingScale, IsOneOfTheStandard) {
  EXPECT_EQ(scale_text(drawing_scale(9.7)), "5 : 1");
  EXPECT_EQ(scale_text(drawing_scale(10.0)), "10 : 1");
  EXPECT_EQ(scale_text(drawing_scale(1.3)), "1 : 1");
  EXPECT_EQ(scale_text(drawing_scale(0.6)), "1 : 2");
  EXPECT_EQ(scale_text(drawing_scale(0.2)), "1 : 5");
  EXPECT_EQ(scale_text(drawing_scale(0.09)), "1 : 20");
  EXPECT_EQ(scale_text(drawing_scale(55)), "50 : 1");
}

}  // namespace
}  // namespace runband::plot
