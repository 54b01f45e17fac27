// What callers rely on besides accuracy: symmetry, determinism, threads, cancellation, the fallback, clear refusals.
#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <stop_token>
#include <string>
#include <thread>
#include <vector>

#include "core/halfspace/rolling.h"
#include "core/halfspace/rolling_grid.h"
#include "core/halfspace/rolling_multilevel.h"
#include "tests/halfspace/rolling_patches.h"

namespace runband::halfspace {
namespace {

RollingProblem ordinary() {
  RollingProblem problem = testing::ellipse_problem(6, 4, 36, 24, 1200, 0.3, 0.28);
  problem.slip = rigid_slip(problem.grid, 1.5e-3, -1e-3, 3e-4);
  return problem;
}

TEST(RollingSolver, MirroredAcrossGivesTheMirroredAnswer) {
  const RollingProblem problem = ordinary();
  RollingProblem mirrored = problem;
  mirrored.slip = rigid_slip(problem.grid, 1.5e-3, 1e-3, -3e-4);
  const RollingResult r = solve_rolling(problem), m = solve_rolling(mirrored);
  const double scale = 0.3 * 60000;
  EXPECT_NEAR(m.force_rolling_N, r.force_rolling_N, 1e-5 * scale);
  EXPECT_NEAR(m.force_across_N, -r.force_across_N, 1e-5 * scale);
  EXPECT_NEAR(m.moment_normal_Nmm, -r.moment_normal_Nmm, 1e-4 * scale);
}

TEST(RollingSolver, ScalesWithSizeAndStiffness) {
  // Twice the size, pressure and G as they are: creepage and stick area stay, forces grow by four, spin falls by two.
  const RollingResult r = solve_rolling(ordinary());
  RollingProblem larger = testing::ellipse_problem(12, 8, 36, 24, 1200, 0.3, 0.28);
  larger.slip = rigid_slip(larger.grid, 1.5e-3, -1e-3, 1.5e-4);
  const RollingResult l = solve_rolling(larger);
  EXPECT_NEAR(l.force_rolling_N, 4 * r.force_rolling_N, 1e-6 * std::abs(l.force_rolling_N));
  EXPECT_NEAR(l.moment_normal_Nmm, 8 * r.moment_normal_Nmm, 1e-5 * std::abs(l.moment_normal_Nmm));
  EXPECT_EQ(l.state, r.state);
}

TEST(RollingSolver, EmptyCellsAroundThePatchChangeNothing) {
  const RollingProblem problem = ordinary();
  RollingProblem framed = problem;
  const Grid& g = problem.grid;
  framed.grid = {g.nx + 5, g.ns + 4, g.x0_mm - 2 * g.dx_mm, g.s0_mm - 1 * g.ds_mm, g.dx_mm, g.ds_mm};
  framed.pressure_MPa.assign(static_cast<std::size_t>(framed.grid.cells()), 0);
  framed.area_fraction = framed.pressure_MPa;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const auto to = static_cast<std::size_t>((j + 1) * framed.grid.nx + i + 2),
                 from = static_cast<std::size_t>(j * g.nx + i);
      framed.pressure_MPa[to] = problem.pressure_MPa[from];
      framed.area_fraction[to] = problem.area_fraction[from];
    }
  }
  framed.slip = rigid_slip(framed.grid, 1.5e-3, -1e-3, 3e-4);
  const RollingResult r = solve_rolling(problem), f = solve_rolling(framed);
  EXPECT_NEAR(f.force_rolling_N, r.force_rolling_N, 1e-9 * std::abs(r.force_rolling_N));
  EXPECT_NEAR(f.moment_normal_Nmm, r.moment_normal_Nmm, 1e-8 * std::abs(r.moment_normal_Nmm));
}

TEST(RollingSolver, SeparateSpotsTooFarToFeelEachOtherAddUp) {
  const RollingProblem one = testing::ellipse_problem(3, 3, 16, 16, 1000, 0.3, 0.28);
  RollingProblem two = one;
  two.grid.ns = 160;
  two.pressure_MPa.assign(16 * 160, 0);
  two.area_fraction.assign(16 * 160, 0);
  for (std::size_t c = 0; c < 256; ++c) {
    for (const std::size_t at : {c, c + 144 * 16}) {
      two.pressure_MPa[at] = one.pressure_MPa[c];
      two.area_fraction[at] = one.area_fraction[c];
    }
  }
  two.slip = rigid_slip(two.grid, 1e-3, 5e-4, 0);
  RollingProblem alone = one;
  alone.slip = rigid_slip(one.grid, 1e-3, 5e-4, 0);
  const RollingResult a = solve_rolling(alone), b = solve_rolling(two);
  EXPECT_NEAR(b.force_rolling_N, 2 * a.force_rolling_N, 5e-3 * std::abs(b.force_rolling_N));
  EXPECT_NEAR(b.force_across_N, 2 * a.force_across_N, 5e-3 * std::abs(b.force_rolling_N));
}

TEST(RollingSolver, GivesTheSameBitsInEveryThread) {
  const RollingProblem problem = ordinary();
  const RollingResult reference = solve_rolling(problem);
  std::vector<RollingResult> results(4);
  {
    std::vector<std::jthread> threads;
    for (auto& r : results) {
      threads.emplace_back([&] {
        for (int k = 0; k < 3; ++k) solve_rolling(testing::random_problem(static_cast<std::uint64_t>(k), 20));
        r = solve_rolling(problem);
      });
    }
  }
  for (const auto& r : results) {
    EXPECT_EQ(r.traction_MPa, reference.traction_MPa);
    EXPECT_EQ(r.slip, reference.slip);
    EXPECT_EQ(r.force_rolling_N, reference.force_rolling_N);
  }
}

TEST(RollingSolver, StopsWhenAsked) {
  std::stop_source source;
  source.request_stop();
  Progress progress;
  progress.stop = source.get_token();
  EXPECT_THROW(solve_rolling(ordinary(), {}, progress), Cancelled);
}

TEST(RollingSolver, TheFallbackAloneFindsTheSameAnswer) {
  const RollingProblem problem = testing::random_problem(7, 16);
  for (const double b : {0.0, 1.0}) {
    const RollingBox box = make_box(problem, {1 + b / 2, 1 + b, b / 2}, true);
    const MultilevelResult fast = solve_multilevel(box.level, {1e-8, 60}, {});
    RollingScratch scratch;
    MultilevelResult account;
    std::vector<double> p(2 * box.level.cells(), 0.0), slip;
    ASSERT_TRUE(march_to_steady(box.level, {1e-6, 60}, {}, scratch, p, slip, account));
    double largest = 0;
    for (std::size_t i = 0; i < p.size(); ++i) largest = std::max(largest, std::abs(p[i] - fast.traction[i]));
    EXPECT_LT(largest, 5e-6);  // tractions are in units of the largest bound
  }
}

TEST(RollingSolver, TakesOverWhenNewtonRunsOutOfStepsAndSaysSo) {
  RollingOptions options;
  options.max_steps = 2;  // too few for Newton on the finest grid; enough for each step of time marching to go on
  const RollingProblem problem = testing::random_problem(7, 16);
  try {
    const RollingResult r = solve_rolling(problem, options);
    EXPECT_TRUE(r.used_fallback);
    EXPECT_LE(r.residual, options.tolerance);
  } catch (const NotConverged& e) {
    EXPECT_GT(e.iterations, 0);
    EXPECT_GT(e.residual, options.tolerance);
  }
}

TEST(RollingSolver, SecondOrderAndExtrapolationComeCloserThanFirstOrder) {
  const auto force = [](int n, UpwindOrder order, bool extrapolate) {
    RollingProblem problem = testing::ellipse_problem(5, 5, n, n, 1000, 0.3, 0.28);
    problem.slip = rigid_slip(problem.grid, 1e-3, 0, 0);
    RollingOptions options;
    options.order = order;
    options.extrapolate = extrapolate;
    return solve_rolling(problem, options).force_rolling_N;
  };
  const double fine = force(128, UpwindOrder::second, true);
  const double first = std::abs(force(24, UpwindOrder::first, false) - fine);
  const double second = std::abs(force(24, UpwindOrder::second, false) - fine);
  const double best = std::abs(force(24, UpwindOrder::second, true) - fine);
  EXPECT_LT(second, 0.5 * first);
  EXPECT_LT(best, second);
  EXPECT_LT(best, 2e-3 * std::abs(fine));
}

TEST(RollingSolver, TheEllipseCoversEachCellByTheRightPart) {
  const Grid g{30, 20, -6.3, -4.4, 0.43, 0.47};
  const std::vector<double> f = ellipse_fraction(g, 5.2, 3.7);
  double sum = 0;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      int inside = 0;
      constexpr int kSub = 64;
      for (int v = 0; v < kSub; ++v) {
        for (int u = 0; u < kSub; ++u) {
          const double x = (g.x(i) + ((u + 0.5) / kSub - 0.5) * g.dx_mm) / 5.2;
          const double s = (g.s(j) + ((v + 0.5) / kSub - 0.5) * g.ds_mm) / 3.7;
          inside += x * x + s * s < 1 ? 1 : 0;
        }
      }
      const double fraction = f[static_cast<std::size_t>(j * g.nx + i)];
      EXPECT_NEAR(fraction, static_cast<double>(inside) / (kSub * kSub), 0.01);
      sum += fraction * g.dx_mm * g.ds_mm;
    }
  }
  EXPECT_NEAR(sum, std::numbers::pi * 5.2 * 3.7, 1e-9);
}

TEST(RollingSolver, RefusesWhatItCannotUse) {
  const auto refused = [](auto change) {
    RollingProblem problem = ordinary();
    change(problem);
    EXPECT_THROW(solve_rolling(problem), InputError);
  };
  refused([](RollingProblem& p) { p.pressure_MPa.pop_back(); });
  refused([](RollingProblem& p) { p.slip.pop_back(); });
  refused([](RollingProblem& p) { p.friction = {0.3, 0.3}; });
  refused([](RollingProblem& p) { p.friction = {-0.1}; });
  refused([](RollingProblem& p) { p.pressure_MPa[3] = std::numeric_limits<double>::quiet_NaN(); });
  refused([](RollingProblem& p) { p.slip[3] = std::numeric_limits<double>::infinity(); });
  refused([](RollingProblem& p) { p.area_fraction[0] = 1.5; });
  refused([](RollingProblem& p) { p.elastic.poisson_ratio = 0.7; });
  refused([](RollingProblem& p) { p.elastic.shear_modulus_MPa = 0; });
  refused([](RollingProblem& p) { p.grid.dx_mm = 0; });
  try {
    RollingProblem problem = ordinary();
    problem.elastic.poisson_ratio = 0.7;
    solve_rolling(problem);
  } catch (const InputError& e) {
    EXPECT_NE(std::string(e.what()).find("Poisson"), std::string::npos);
  }
}

}  // namespace
}  // namespace runband::halfspace
