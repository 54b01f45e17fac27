// Steady rolling and contact at rest against closed solutions: Carter's line contact, Cattaneo's and Mindlin's partial
// slip, and the friction limit itself.
#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "tests/halfspace/rolling_patches.h"

namespace runband::halfspace {
namespace {

/// Mean of sqrt(1 - t^2) over the cell [low, high] of the unit half-width.
double mean_root(double low, double high) {
  const auto f = [](double t) {
    return 0.5 * (t * std::sqrt(std::max(0.0, 1 - t * t)) + std::asin(std::clamp(t, -1.0, 1.0)));
  };
  return (f(high) - f(low)) / (high - low);
}

/// A strip of half-width 1 mm along x, 60 mm long across, in cells long across: its middle is a line contact.
RollingProblem line_contact(int nx, double peak, double mu, double nu) {
  RollingProblem problem;
  constexpr int kAcross = 15;
  problem.grid = {nx, kAcross, -1 + 1.0 / nx, -28.0, 2.0 / nx, 4.0};
  for (int j = 0; j < kAcross; ++j) {
    for (int i = 0; i < nx; ++i) {
      problem.pressure_MPa.push_back(peak * mean_root(-1 + 2.0 * i / nx, -1 + 2.0 * (i + 1) / nx));
    }
  }
  problem.friction = {mu};
  problem.elastic = testing::like_pair(80000, nu);
  return problem;
}

TEST(RollingLimits, TheMiddleOfAWidePatchIsCartersLineContact) {
  // xi = (mu a / R) (1 - sqrt(1 - Q/(mu P))), R from Hertz: p0 = E* a / (2 R). Stick adjoins the leading edge with half-width
  // c = a sqrt(1 - Q/(mu P)). Source: F. W. Carter, Proc. R. Soc. A 112 (1926) 151; Johnson 1985, section 8.3.
  constexpr double kPeak = 1000, kMu = 0.3;
  for (const double nu : {0.0, 0.28, 0.5}) {
    for (const double share : {0.1, 0.25, 0.5, 0.75, 0.9}) {
      SCOPED_TRACE(::testing::Message() << "nu " << nu << " Q/(mu P) " << share);
      RollingProblem problem = line_contact(64, kPeak, kMu, nu);
      const double modulus = 80000 / (1 - nu), a_over_r = 2 * kPeak / modulus;
      problem.slip = rigid_slip(problem.grid, kMu * a_over_r * (1 - std::sqrt(1 - share)), 0, 0);
      const RollingResult r = solve_rolling(problem);
      double q = 0, p = 0;
      int stick = 0;
      for (int i = 0; i < 64; ++i) {
        const auto c = static_cast<std::size_t>(7 * 64 + i);
        q -= r.traction_MPa[2 * c];
        p += problem.pressure_MPa[c];
        stick += r.state[c] == RollingState::stick ? 1 : 0;
      }
      EXPECT_NEAR(q / (kMu * p), share, 0.01);
      EXPECT_NEAR(stick / 64.0, std::sqrt(1 - share), 1.5 / 64);
      EXPECT_EQ(r.state[static_cast<std::size_t>(7 * 64 + 63)], RollingState::stick);  // at the leading edge
    }
  }
}

TEST(RollingLimits, CartersForceConvergesWithTheCellSize) {
  // Slips between 16, 32 and 64 cells: the error of the middle strip against the finest falls steadily.
  const auto force = [](int nx) {
    RollingProblem problem = line_contact(nx, 1000, 0.3, 0.28);
    problem.slip = rigid_slip(problem.grid, 2e-3, 0, 0);
    const RollingResult r = solve_rolling(problem);
    double q = 0;
    for (int i = 0; i < nx; ++i) q -= r.traction_MPa[2 * static_cast<std::size_t>(7 * nx + i)] * 2.0 / nx;
    return q;
  };
  const double f16 = force(16), f32 = force(32), f64 = force(64), f128 = force(128);
  EXPECT_LT(std::abs(f32 - f128), 0.7 * std::abs(f16 - f128));
  EXPECT_LT(std::abs(f64 - f128), 0.6 * std::abs(f32 - f128));
}

TEST(RollingLimits, ASphereAtRestSlipsAsCattaneoAndMindlinSay) {
  // delta / delta_max = 1 - (1 - Q/(mu P))^(2/3), delta_max = 3 mu P (2 - nu) / (8 G a), stick radius c = a (1 - Q/(mu
  // P))^(1/3). Exact for nu = 0, where no transverse slip arises. Source: Cattaneo 1938; Mindlin 1949; Johnson 1985, 7.2.
  const double a = 5, peak = 1000, mu = 0.3, load = 2.0 / 3 * std::numbers::pi * a * a * peak;
  RollingProblem problem = testing::ellipse_problem(a, a, 48, 48, peak, mu, 0.0);
  const double most = 3 * mu * load * 2 / (8 * 80000 * a);
  for (const double share : {0.1, 0.25, 0.5, 0.75, 0.9}) {
    SCOPED_TRACE(::testing::Message() << "Q/(mu P) " << share);
    problem.slip = rigid_slip(problem.grid, most * (1 - std::pow(1 - share, 2.0 / 3)), 0, 0);
    const RollingResult r = solve_shift(problem);
    EXPECT_NEAR(-r.force_rolling_N / (mu * load), share, 0.005);
    EXPECT_NEAR(r.force_across_N, 0, 1e-6 * mu * load);
    double stick = 0;
    for (std::size_t c = 0; c < r.state.size(); ++c)
      stick += r.state[c] == RollingState::stick ? problem.area_fraction[c] : 0;
    const double radius = std::sqrt(stick * problem.grid.dx_mm * problem.grid.ds_mm / std::numbers::pi);
    EXPECT_NEAR(radius / a, std::cbrt(1 - share), 0.02);
  }
}

TEST(RollingLimits, FullSlipCarriesTheWholeFriction) {
  RollingProblem problem = testing::ellipse_problem(6, 4, 40, 28, 1200, 0.35, 0.28);
  const double load = 2.0 / 3 * std::numbers::pi * 24 * 1200;
  for (const double angle : {0.0, 0.7, 2.0, 4.0}) {
    problem.slip = rigid_slip(problem.grid, 0.2 * std::cos(angle), 0.2 * std::sin(angle), 0);
    const RollingResult r = solve_rolling(problem);
    EXPECT_NEAR(r.force_rolling_N, -0.35 * load * std::cos(angle), 3e-3 * load * 0.35);
    EXPECT_NEAR(r.force_across_N, -0.35 * load * std::sin(angle), 3e-3 * load * 0.35);
    EXPECT_NEAR(std::hypot(r.force_rolling_N, r.force_across_N), 0.35 * load, 1e-4 * load);
  }
}

TEST(RollingLimits, NoCreepageNoForceAndNoFrictionNoForce) {
  RollingProblem problem = testing::ellipse_problem(6, 4, 40, 28, 1200, 0.35, 0.28);
  problem.slip = rigid_slip(problem.grid, 0, 0, 0);
  EXPECT_EQ(solve_rolling(problem).force_rolling_N, 0);
  problem.slip = rigid_slip(problem.grid, 1e-3, 0, 0);
  problem.friction = {0};
  EXPECT_EQ(solve_rolling(problem).force_rolling_N, 0);
}

}  // namespace
}  // namespace runband::halfspace
