// Words and numbers: text that reads back, whatever the locale; the nearest known name.
#include "core/base/text.h"

#include <gtest/gtest.h>

#include <array>
#include <clocale>
#include <cmath>
#include <cstring>
#include <limits>
#include <random>
#include <string>
#include <vector>

namespace runband {
namespace {

TEST(NumberText, IsTheShortestThatReadsBack) {
  EXPECT_EQ(number_text(0.1), "0.1");
  EXPECT_EQ(number_text(460.0), "460");
  EXPECT_EQ(number_text(-1e-6), "-1e-06");
  EXPECT_EQ(number_text(0.0), "0");
  EXPECT_EQ(number_text(std::numeric_limits<double>::quiet_NaN()), "nan");
  EXPECT_EQ(number_text(-std::numeric_limits<double>::quiet_NaN()), "nan");
  EXPECT_EQ(number_text(-std::numeric_limits<double>::infinity()), "-inf");
}

TEST(NumberText, RoundsToTheDigitsAskedFor) {
  EXPECT_EQ(number_text(1139.18727373, 6), "1139.19");
  EXPECT_EQ(number_text(0.000123456, 3), "0.000123");
  EXPECT_EQ(number_text(2.0, 4), "2");
}

TEST(ParseNumber, ReadsBackEveryDoubleExactly) {
  std::mt19937_64 generator(3);
  for (int i = 0; i < 20000; ++i) {
    const std::uint64_t bits = generator();
    double value = 0.0;
    static_assert(sizeof value == sizeof bits);
    std::memcpy(&value, &bits, sizeof value);
    if (!std::isfinite(value)) continue;
    const std::optional<double> back = parse_number(number_text(value));
    ASSERT_TRUE(back.has_value()) << number_text(value);
    EXPECT_EQ(*back, value);
  }
}

TEST(ParseNumber, TakesTheWholeTextOrNothing) {
  EXPECT_EQ(parse_number(" 12.5\t"), 12.5);
  EXPECT_EQ(parse_number("+3"), 3.0);
  EXPECT_EQ(parse_number("-0.5e-3"), -0.5e-3);
  EXPECT_EQ(parse_number("7\r"), 7.0);
  EXPECT_TRUE(std::isnan(parse_number("nan").value()));
  EXPECT_TRUE(std::isinf(parse_number("inf").value()));
  for (const char* text : {"", " ", "1,5", "1.5mm", "1 2", "0x10", "one", "--1", "+", "1e", "1.2.3"})
    EXPECT_FALSE(parse_number(text).has_value()) << text;
}

TEST(ParseNumber, IgnoresTheLocale) {
  // Where no locale with a decimal comma is installed this repeats the plain case.
  const std::string before = std::setlocale(LC_ALL, nullptr);
  for (const char* name : {"de_DE.UTF-8", "fr_FR.UTF-8", "C.UTF-8"})
    if (std::setlocale(LC_ALL, name) != nullptr) break;
  EXPECT_EQ(parse_number("1.5"), 1.5);
  EXPECT_EQ(number_text(1.5), "1.5");
  EXPECT_FALSE(parse_number("1,5").has_value());
  std::setlocale(LC_ALL, before.c_str());
}

TEST(NearestName, FindsSlipsOfTheKeyboard) {
  const std::vector<std::string> known = {"gauge_mm", "lateral_mm", "yaw_mrad", "rolling_radius_mm", "cells"};
  EXPECT_EQ(nearest_name("guage_mm", known), "gauge_mm");
  EXPECT_EQ(nearest_name("yaw_rad", known), "yaw_mrad");
  EXPECT_EQ(nearest_name("lateral", known), "lateral_mm");
  EXPECT_EQ(nearest_name("cell", known), "cells");
  EXPECT_EQ(nearest_name("rolling_raduis_mm", known), "rolling_radius_mm");
  // Two neighbours exchanged are one slip, not two: nearer than two wrong letters.
  EXPECT_EQ(nearest_name("form", std::vector<std::string>{"fond", "from"}), "from");
  EXPECT_EQ(nearest_name("temperature", known), "");
  EXPECT_EQ(nearest_name("zz", std::vector<std::string>{}), "");
}

TEST(JoinNames, ReadsAsASentence) {
  EXPECT_EQ(join_names(std::vector<std::string>{}), "");
  EXPECT_EQ(join_names(std::vector<std::string>{"a"}), "a");
  EXPECT_EQ(join_names(std::vector<std::string>{"a", "b"}), "a and b");
  EXPECT_EQ(join_names(std::vector<std::string>{"a", "b", "c"}), "a, b and c");
}

}  // namespace
}  // namespace runband
