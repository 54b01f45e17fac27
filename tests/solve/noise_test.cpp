// A measured pairing must give the pressure of the pairing that was measured: noise is smoothed away by what it is
// known to be.
#include <gtest/gtest.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <iostream>
#include <random>

#include "core/locate/locate.h"

namespace runband {
namespace {

constexpr double kNoise = 0.02;    // mm, standard deviation of a laser profile gauge; common practice, no source
constexpr double kSpacing = 0.15;  // mm along the outline, likewise
constexpr int kDraws = 50;

/// Points every kSpacing along a standard profile, worn by a smooth amount below its surface.
template <typename Wear>
std::vector<Vec2> worn_points(const std::string& standard, ProfileKind kind, double y_from, double y_to, Wear wear) {
  const auto profile = load_profile(standard, kind);
  const double out = kind == ProfileKind::rail ? 1.0 : -1.0;  // outward normal up for a rail, down for a wheel
  std::vector<Vec2> points;
  double walked = kSpacing;
  Vec2 last = Vec2::Zero();
  bool first = true;
  for (const CurvePoint& p : sample_curve(*profile->curve, 1e-5, 0.01)) {
    if (p.y() < y_from || p.y() > y_to) continue;
    if (!first) walked += (p.position - last).norm();
    last = p.position;
    first = false;
    if (walked < kSpacing) continue;
    walked = 0;
    const Vec2 normal = Vec2(-p.d1.y(), p.d1.x()).normalized() * out;
    points.push_back(p.position - wear(p.y()) * normal);
  }
  return points;
}

double bump(double y, double centre, double width) {
  const double t = (y - centre) / width;
  return std::exp(-t * t);
}

std::vector<Vec2> worn_wheel() {
  return worn_points("standard:S1002", ProfileKind::wheel, -69.5, 55.0,
                     [](double y) { return 1.2 * bump(y, -2.0, 24.0) + 0.4 * bump(y, -36.0, 6.0); });
}
std::vector<Vec2> worn_rail() {
  return worn_points("standard:60E1", ProfileKind::rail, -40.0, 35.0,
                     [](double y) { return 0.5 * bump(y, 0.0, 20.0) + 0.8 * bump(y, -26.0, 9.0); });
}

std::vector<Vec2> with_noise(std::vector<Vec2> points, unsigned draw) {
  std::mt19937 random(draw);
  std::normal_distribution<double> normal(0.0, kNoise);
  for (Vec2& p : points) p += Vec2(normal(random), normal(random));
  return points;
}

/// Peak Hertz pressure of the main zone on the left.
double peak_pressure(const std::vector<Vec2>& wheel, const std::vector<Vec2>& rail, double noise, double lateral_mm) {
  const auto w = profile_from_points(wheel, ProfileKind::wheel, noise);
  const auto r = profile_from_points(rail, ProfileKind::rail, noise);
  const Locator locator(
      std::make_shared<const Pairing>(std::array{w, w}, std::array{r, r}, TrackGeometry{}, WheelsetGeometry{}));
  const Located located = locator.loaded(lateral_mm, 0.0, LateralReference::axle, WheelLoads{}, MaterialPair{});
  double peak = 0;
  double most = 0;
  for (const ContactZone& zone : located.zones) {
    if (zone.side != Side::left || !zone.carries_load || zone.normal_force_N <= most) continue;
    most = zone.normal_force_N;
    peak = zone.ellipse->peak_pressure_MPa;
  }
  return peak;
}

TEST(NoisyWornPairing, GivesThePressureOfTheNoiselessOne) {
  const std::vector<Vec2> wheel = worn_wheel();
  const std::vector<Vec2> rail = worn_rail();
  constexpr double kLateral = 3.0;
  const double truth = peak_pressure(wheel, rail, 0.0, kLateral);
  ASSERT_GT(truth, 300.0);
  ASSERT_LT(truth, 4000.0);
  std::vector<double> ratio, error;
  for (unsigned draw = 0; draw < kDraws; ++draw) {
    ratio.push_back(
        peak_pressure(with_noise(wheel, 2 * draw + 1), with_noise(rail, 2 * draw + 2), kNoise, kLateral) / truth - 1.0);
    error.push_back(std::abs(ratio.back()));
  }
  std::sort(ratio.begin(), ratio.end());
  std::sort(error.begin(), error.end());
  const double median_ratio = ratio[kDraws / 2];
  const double median = error[kDraws / 2];
  const double p90 = error[kDraws * 9 / 10];
  std::cout << "peak pressure without noise " << truth << " MPa; error over " << kDraws << " draws: bias "
            << 100 * median_ratio << " %, median " << 100 * median << " %, 90th percentile " << 100 * p90 << " %\n";
  RecordProperty("median_percent", std::to_string(100 * median));
  EXPECT_LT(std::abs(median_ratio), 0.05);
  EXPECT_LT(median, 0.05);
  EXPECT_LT(p90, 0.12);
}

}  // namespace
}  // namespace runband
