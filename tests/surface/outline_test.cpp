// Sections: rounded corners, adaptive sampling, and triangles that fill an outline.
#include "core/surface/outline.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/surface/cap.h"

namespace runband {
namespace {

double area(const Vec2& a, const Vec2& b, const Vec2& c) {
  return 0.5 * ((b - a).x() * (c - a).y() - (b - a).y() * (c - a).x());
}

double area(const Outline& outline) {
  double sum = 0.0;
  for (std::size_t i = 1; i + 1 < outline.size(); ++i) sum += area(outline[0], outline[i], outline[i + 1]);
  return sum;
}

TEST(Outline, ACornerBecomesAnArcOfItsRadius) {
  const Outline points = rounded({{{0, 0}, 0}, {{10, 0}, 3}, {{10, 10}, 0}}, 1e-3);
  const Vec2 centre(7, 3);
  ASSERT_GT(points.size(), 10U);
  EXPECT_EQ(points.front(), Vec2(0, 0));
  EXPECT_EQ(points.back(), Vec2(10, 10));
  EXPECT_NEAR((points[1] - Vec2(7, 0)).norm(), 0.0, 1e-12);
  for (std::size_t i = 1; i + 1 < points.size(); ++i) EXPECT_NEAR((points[i] - centre).norm(), 3.0, 1e-12);
  for (std::size_t i = 1; i + 2 < points.size(); ++i)
    EXPECT_LE(3.0 - (0.5 * (points[i] + points[i + 1]) - centre).norm(), 1e-3);
}

TEST(Outline, ARadiusWithoutRoomIsReduced) {
  const Outline points = rounded({{{0, 0}, 0}, {{10, 0}, 300}, {{10, 10}, 0}}, 0.01);
  for (const Vec2& p : points) {
    EXPECT_GE(p.x(), 0.0);
    EXPECT_LE(p.y(), 10.0);
  }
  EXPECT_GT(points[1].x(), 5.0);
}

TEST(Outline, SamplingKeepsTheChordError) {
  const auto wave = [](double t) { return Vec2(100.0 * t, 5.0 * std::sin(12.0 * t)); };
  const Outline points = sampled(wave, 0.01);
  double worst = 0.0;
  for (int i = 0; i <= 20000; ++i) {
    const Vec2 p = wave(i / 20000.0);
    double nearest = 1e9;
    for (std::size_t k = 0; k + 1 < points.size(); ++k) {
      const Vec2 d = points[k + 1] - points[k];
      const double t = std::clamp((p - points[k]).dot(d) / d.squaredNorm(), 0.0, 1.0);
      nearest = std::min(nearest, (p - points[k] - t * d).norm());
    }
    worst = std::max(worst, nearest);
  }
  EXPECT_LT(worst, 0.01);
  EXPECT_GT(worst, 0.002);
}

TEST(FillOutline, CoversAConcaveOutlineOnce) {
  // A comb: area by the shoelace formula, every triangle counter-clockwise.
  Outline comb;
  for (int i = 0; i < 20; ++i) {
    comb.emplace_back(i, 0.0);
    comb.emplace_back(i + 0.5, 5.0 + std::sin(i));
  }
  comb.emplace_back(20, 0.0);
  comb.emplace_back(20, 9.0);
  comb.emplace_back(0, 9.0);
  if (area(comb) < 0) std::reverse(comb.begin(), comb.end());
  const auto triangles = fill_outline(comb, "comb");
  EXPECT_EQ(triangles.size() + 2, comb.size());
  double sum = 0.0;
  for (const auto& [a, b, c] : triangles) {
    const double one =
        area(comb[static_cast<std::size_t>(a)], comb[static_cast<std::size_t>(b)], comb[static_cast<std::size_t>(c)]);
    EXPECT_GT(one, 0.0);
    sum += one;
  }
  EXPECT_NEAR(sum, area(comb), 1e-12);
}

TEST(FillOutline, RefusesOutlinesThatCrossOrTouch) {
  const auto refused = [](const Outline& outline) {
    try {
      fill_outline(outline, "here");
    } catch (const InputError& error) {
      return error.code() == ErrorCode::profile_crosses_itself;
    }
    return false;
  };
  EXPECT_TRUE(refused({{0, 0}, {2, 2}, {2, 0}, {0, 2}}));          // bow tie
  EXPECT_TRUE(refused({{0, 0}, {4, 0}, {4, 4}, {2, 0}, {0, 4}}));  // a corner on an edge
  EXPECT_TRUE(refused({{0, 0}, {4, 0}, {4, 4}, {0, 0}, {0, 4}}));  // a point twice
  EXPECT_FALSE(refused({{0, 0}, {4, 0}, {4, 4}, {0, 4}}));
}

}  // namespace
}  // namespace runband
