// The normal problem against closed forms: Hertz (Johnson, Contact Mechanics, 1985, ch. 4; the numbers for a wheel of
// 460 mm on rails were computed independently with mpmath), flat punch and cone (Sneddon, Int. J. Eng. Sci. 3 (1965)
// 47).
#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "core/halfspace/normal.h"
#include "tests/halfspace/normal_gaps.h"

namespace runband::halfspace {
namespace {

constexpr double kModulus = 113932.291667;

TEST(NormalHertz, WheelOf460mmOnRailCrowns) {
  // Load 100 kN, E 210 GPa, nu 0.28: semi-axes, peak pressure, approach for crown radii of 300, 80 and 13 mm.
  const struct {
    double crown, a, b, peak, approach;
  } rows[] = {{300, 7.19197839626, 5.40996617639, 1227.15229049, 0.105001897208},
              {80, 8.57807547762, 2.71223020583, 2052.22500444, 0.125958137896},
              {13, 10.1197059007, 1.03170927849, 4573.15750068, 0.152252915884}};
  for (const auto& row : rows) {
    const NormalSolution solution =
        solve_normal(loaded(paraboloid(1 / 460.0, 1 / row.crown), 2 * row.a, 2 * row.b, 1e5));
    // Cells of a 64th of the contact. Measured: peak 1.1e-4, approach 8e-5, area 4e-3; the margin is for other
    // machines.
    EXPECT_NEAR(solution.peak_pressure_MPa / row.peak, 1, 4e-4) << row.crown;
    EXPECT_NEAR(solution.approach_mm / row.approach, 1, 3e-4) << row.crown;
    EXPECT_NEAR(solution.area_mm2 / (std::numbers::pi * row.a * row.b), 1, 6e-3) << row.crown;
    EXPECT_NEAR(solution.load_N / 1e5, 1, 1e-12);
    EXPECT_EQ(solution.spots, 1);
    // The whole field, against the ellipsoid: rms over the contact, relative to the peak.
    double square = 0, count = 0;
    const Grid& g = solution.grid;
    for (int j = 0; j < g.ns; ++j) {
      for (int i = 0; i < g.nx; ++i) {
        const double d = 1 - std::pow(g.x(i) / row.a, 2) - std::pow(g.s(j) / row.b, 2);
        const double exact = d > 0 ? row.peak * std::sqrt(d) : 0;
        square += std::pow((solution.pressure_MPa[static_cast<std::size_t>(j * g.nx + i)] - exact) / row.peak, 2);
        count += d > 0;
      }
    }
    EXPECT_LT(std::sqrt(square / count), 0.012) << row.crown;
  }
}

TEST(NormalHertz, SphereForceFollowsApproachToThePower15) {
  // P = 4/3 E* sqrt(R) delta^1.5.
  constexpr double radius = 100;
  for (const double approach : {0.001, 0.01, 0.1}) {
    NormalProblem problem = loaded(paraboloid(1 / radius, 1 / radius), 4, 4, 1);
    problem.load_N.reset();
    problem.approach_mm = approach;
    const NormalSolution solution = solve_normal(problem);
    EXPECT_NEAR(solution.load_N / (4.0 / 3.0 * kModulus * std::sqrt(radius) * std::pow(approach, 1.5)), 1, 4e-4);
    EXPECT_NEAR(solution.area_mm2 / (std::numbers::pi * radius * approach), 1, 6e-3);
    EXPECT_DOUBLE_EQ(solution.approach_mm, approach);
  }
}

TEST(NormalHertz, LongEllipsesFromOneTenthToTen) {
  // From the relation of curvature ratio and axis ratio, Johnson eq. 4.24 ff: A/B, b/a and the coefficients m, n, r
  // (a = m L, b = n L), computed independently with mpmath.
  const struct {
    double curvature_ratio, axis_ratio, m, n, r;
  } rows[] = {{0.5, 0.630595701428, 1.2758207982, 0.804527111136, 0.974082151408},
              {0.2, 0.345999086637, 1.8129392074, 0.627275309891, 0.87568669029},
              {0.05, 0.14432761519, 3.15703837756, 0.455647820097, 0.672342382692},
              {0.01, 0.0549840180571, 5.96068534218, 0.327742430487, 0.458131483392}};
  for (const auto& row : rows) {
    for (const bool long_along_x : {true, false}) {
      const double B = 0.005, A = row.curvature_ratio * B, load = 5e4;
      const double L = std::cbrt(3 * load / (4 * kModulus * (A + B)));
      const double a = row.m * L, b = row.n * L;
      const GapFunction gap = long_along_x ? paraboloid(2 * A, 2 * B) : paraboloid(2 * B, 2 * A);
      const NormalSolution s =
          solve_normal(loaded(gap, 1.5 * (long_along_x ? a : b), 1.5 * (long_along_x ? b : a), load));
      EXPECT_NEAR(s.peak_pressure_MPa / (1.5 * load / (std::numbers::pi * a * b)), 1, 4e-4) << row.axis_ratio;
      const double approach = row.r * std::cbrt(9 * load * load * (A + B) / (16 * kModulus * kModulus));
      EXPECT_NEAR(s.approach_mm / approach, 1, 3e-4) << row.axis_ratio;
      EXPECT_NEAR(s.area_mm2 / (std::numbers::pi * a * b), 1, 1e-2) << row.axis_ratio;
    }
  }
}

TEST(NormalPunch, FlatEndedCylinder) {
  // P = 2 a E* delta; p/p_mean = 0.5/sqrt(1 - r^2/a^2): 0.5 in the middle, 0.5773502692 at half the radius.
  constexpr double a = 5, load = 1e5;
  const auto gap =
      gap_of([](double x, double s) { return std::hypot(x, s) <= a ? 0.0 : std::numeric_limits<double>::infinity(); });
  NormalOptions options;
  options.cells = 128;
  const NormalSolution solution = solve_normal(loaded(gap, 6, 6, load), options);
  // A circle of square cells: its mean radius is known to a fraction of a cell.
  EXPECT_NEAR(solution.approach_mm / (load / (2 * a * kModulus)), 1, 4e-3);
  EXPECT_NEAR(solution.area_mm2 / (std::numbers::pi * a * a), 1, 0.015);
  const Grid& g = solution.grid;
  const double mean = load / (std::numbers::pi * a * a);
  int seen = 0;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const double r = std::hypot(g.x(i), g.s(j));
      if (r > 0.6 * a) continue;
      ++seen;
      EXPECT_NEAR(solution.pressure_MPa[static_cast<std::size_t>(j * g.nx + i)] / mean,
                  0.5 / std::sqrt(1 - r * r / (a * a)), 0.004);
    }
  }
  EXPECT_GT(seen, 2000);
}

TEST(NormalCone, SneddonsConeOf70Degrees) {
  // Semi-apex angle 70.3 deg: P = (2/pi) E* tan(alpha) delta^2, a = (2/pi) delta tan(alpha), p_mean = E* cot(alpha)/2,
  // p = p_mean acosh(a/r). tan(70.3 deg) = 2.792891687.
  constexpr double tangent = 2.792891687, load = 1e4;
  const double approach = std::sqrt(load * std::numbers::pi / (2 * kModulus * tangent));
  const double a = 2 / std::numbers::pi * approach * tangent;
  NormalOptions options;
  options.cells = 128;
  const NormalSolution solution = solve_normal(
      loaded(gap_of([](double x, double s) { return std::hypot(x, s) / tangent; }), 2 * a, 2 * a, load), options);
  EXPECT_NEAR(solution.approach_mm / approach, 1, 2e-3);
  EXPECT_NEAR(solution.area_mm2 / (std::numbers::pi * a * a), 1, 0.01);
  const double mean = kModulus / tangent / 2;
  const Grid& g = solution.grid;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const double r = std::hypot(g.x(i), g.s(j)) / a;
      if (r < 0.1 || r > 0.9) continue;
      EXPECT_NEAR(solution.pressure_MPa[static_cast<std::size_t>(j * g.nx + i)] / mean, std::acosh(1 / r), 0.02) << r;
    }
  }
}

}  // namespace
}  // namespace runband::halfspace
