// What a caller relies on: the box is found, spots are told apart, bad input is named, work can be stopped, and the
// same question gets the same bits.
#include <gtest/gtest.h>

#include <atomic>
#include <cmath>
#include <cstring>
#include <limits>
#include <numbers>
#include <stop_token>
#include <string>
#include <thread>
#include <vector>

#include "core/base/error.h"
#include "core/halfspace/normal_level.h"
#include "core/hertz/hertz.h"
#include "tests/halfspace/normal_gaps.h"

namespace runband::halfspace {
namespace {

constexpr double kCurvature = 1 / 460.0, kLoad = 1e5;
const double kModulus = loaded({}, 1, 1, 1).contact_modulus_MPa;

NormalOptions with_cells(int cells, double tolerance = 1e-6) {
  NormalOptions options;
  options.cells = cells;
  options.tolerance = tolerance;
  return options;
}
NormalProblem crossed_cylinders(double half = 12) {
  return loaded(paraboloid(kCurvature, kCurvature), half, half, kLoad);
}
// Two balls of radius 100 mm, their centres `distance` apart along s.
NormalProblem two_balls(double distance, double load) {
  const auto gap =
      gap_of([distance](double x, double s) { return (x * x + std::pow(std::abs(s) - 0.5 * distance, 2)) / 200; });
  return loaded(gap, 0.6 * distance, distance, load);
}

TEST(NormalBox, IsFoundFromAPoorStart) {
  const HertzEllipse exact = hertz_ellipse(kCurvature, kCurvature, kLoad, {});
  const Box starts[] = {{-100, 100, -100, 100}, {-1, 1, -1, 1}, {-2, 40, -15, 3}, {3, 5, -1, 7}, {-70, 70, -7, 7}};
  for (const Box& start : starts) {
    NormalProblem problem = crossed_cylinders();
    problem.start = start;
    const NormalSolution s = solve_normal(problem);
    EXPECT_NEAR(s.peak_pressure_MPa / exact.peak_pressure_MPa, 1, 3e-4) << start.x_min_mm;
    EXPECT_NEAR(s.approach_mm / exact.approach_mm, 1, 3e-4) << start.x_min_mm;
    EXPECT_NEAR(2 * exact.semi_axis_rolling_mm / s.grid.dx_mm, 64, 4) << "cells across the contact";
    EXPECT_LT(s.grid.nx, 90);
    for (int k = 0; k < s.grid.nx; ++k) {  // a ring of empty cells around
      EXPECT_EQ(s.pressure_MPa[static_cast<std::size_t>(k)], 0);
      EXPECT_EQ(s.pressure_MPa[static_cast<std::size_t>((s.grid.ns - 1) * s.grid.nx + k)], 0);
    }
  }
}

TEST(NormalBox, KeepsToTheLimitsAndSaysSo) {
  NormalProblem problem = crossed_cylinders(5);
  problem.limits = Box{-20, 20, -4, 20};  // the contact would reach to -6.7
  EXPECT_TRUE(solve_normal(problem).reaches_limits);
  problem.limits = Box{-20, 20, -20, 20};
  const NormalSolution free = solve_normal(problem);
  EXPECT_FALSE(free.reaches_limits);
  EXPECT_NEAR(free.approach_mm / hertz_ellipse(kCurvature, kCurvature, kLoad, {}).approach_mm, 1, 3e-4);
}

TEST(NormalSpots, FarApartFeelEachOtherAsPointLoads) {
  // Each carries half; its approach is Hertz's plus the other's far field, F/(pi E* distance) (Boussinesq).
  const double distance = 40, load = 2e4;
  const NormalSolution s = solve_normal(two_balls(distance, load), with_cells(400));
  EXPECT_EQ(s.spots, 2);
  const HertzEllipse one = hertz_ellipse(0.01, 0.01, load / 2, {});
  EXPECT_NEAR(s.approach_mm / (one.approach_mm + load / 2 / (std::numbers::pi * kModulus * distance)), 1, 2e-3);
  EXPECT_NEAR(s.peak_pressure_MPa / one.peak_pressure_MPa, 1, 2e-3);
  EXPECT_NEAR(s.area_mm2 / (2 * one.area_mm2()), 1, 0.02);
}

TEST(NormalSpots, MergeUnderLoad) {
  // Two summits 4 mm apart with a smooth saddle between them.
  const auto gap = gap_of([](double x, double s) { return x * x / 200 + std::pow(s * s - 4, 2) / 3200; });
  EXPECT_EQ(solve_normal(loaded(gap, 4, 4, 1e3), with_cells(100)).spots, 2);
  EXPECT_EQ(solve_normal(loaded(gap, 4, 4, 1e5), with_cells(100)).spots, 1);
}

TEST(NormalHardness, CapsThePressureAndWidensTheContact) {
  NormalProblem problem = crossed_cylinders();
  const NormalSolution elastic = solve_normal(problem);
  problem.hardness_MPa = 0.7 * elastic.peak_pressure_MPa;
  const NormalSolution capped = solve_normal(problem);
  EXPECT_DOUBLE_EQ(capped.peak_pressure_MPa, *problem.hardness_MPa);
  EXPECT_NEAR(capped.load_N / kLoad, 1, 1e-10);
  EXPECT_GT(capped.area_mm2, 1.03 * elastic.area_mm2);
  EXPECT_GT(capped.capped_area_mm2, 0.3 * capped.area_mm2);
  EXPECT_GT(capped.approach_mm, elastic.approach_mm);
  // A cap far below: everything yields, and the area is load over hardness.
  problem.hardness_MPa = 0.02 * elastic.peak_pressure_MPa;
  const NormalSolution plastic = solve_normal(problem);
  EXPECT_NEAR(plastic.cell_area_mm2 * *problem.hardness_MPa / kLoad, 1, 0.03);
  // A cap above changes nothing, not one bit.
  problem.hardness_MPa = 2 * elastic.peak_pressure_MPa;
  EXPECT_EQ(solve_normal(problem).pressure_MPa, elastic.pressure_MPa);
}

TEST(NormalHardness, RefusesMoreThanTheSurfaceCanCarry) {
  NormalProblem problem = loaded(
      gap_of([](double x, double s) { return std::hypot(x, s) < 2 ? 0.0 : std::numeric_limits<double>::infinity(); }),
      3, 3, 1e5);
  problem.hardness_MPa = 1000;  // 12.6 mm^2 carry 12.6 kN at most
  EXPECT_THROW(solve_normal(problem), NotConverged);
}

TEST(NormalApproach, WithoutOverlapGivesNothing) {
  NormalProblem problem = crossed_cylinders();
  problem.load_N.reset();
  problem.approach_mm = -0.01;
  const NormalSolution s = solve_normal(problem);
  EXPECT_EQ(s.load_N, 0);
  EXPECT_EQ(s.area_mm2, 0);
  EXPECT_EQ(s.peak_pressure_MPa, 0);
  EXPECT_EQ(s.spots, 0);
}

TEST(NormalApproach, AndLoadAreTwoSidesOfOneAnswer) {
  const NormalSolution by_load = solve_normal(crossed_cylinders(), with_cells(64, 1e-9));
  NormalProblem problem = crossed_cylinders();
  problem.load_N.reset();
  problem.approach_mm = by_load.approach_mm;
  std::vector<double> gap(static_cast<std::size_t>(by_load.grid.cells()));
  problem.gap(by_load.grid, gap.data());
  const NormalSolution by_approach = solve_normal_on(by_load.grid, gap, problem, 1e-9);
  EXPECT_NEAR(by_approach.load_N / kLoad, 1, 1e-7);
  for (std::size_t k = 0; k < gap.size(); ++k) {
    EXPECT_NEAR(by_approach.pressure_MPa[k], by_load.pressure_MPa[k], 1e-5 * by_load.peak_pressure_MPa);
  }
}

// The fallbacks are never needed by smooth contacts: called here on purpose, they must give the same answer.
TEST(NormalFallbacks, AgreeWithTheQuickMethod) {
  const double pi = std::numbers::pi;
  for (const bool capped : {false, true}) {
    for (const bool by_load : {true, false}) {
      const Grid grid{32, 24, -15.5, -11.5, 1, 1};
      std::vector<double> gap(static_cast<std::size_t>(grid.cells()));
      gap_of([](double x, double s) { return x * x / 920 + s * s / 700 + 0.01 * std::cos(x) * std::sin(0.7 * s); })(
          grid, gap.data());
      LevelProblem problem{NormalKernel::of(grid.nx, grid.ns, 1.0),
                           gap,
                           std::nullopt,
                           std::nullopt,
                           capped ? 700.0 / (pi * kModulus) : std::numeric_limits<double>::infinity(),
                           1e-8};
      if (by_load) {
        problem.sum = kLoad / (pi * kModulus);
      } else {
        problem.approach = 0.09;
      }
      LevelState quick, steady;
      quick.q.assign(gap.size(), kLoad / (pi * kModulus * static_cast<double>(gap.size())));
      steady.q = quick.q;
      solve_level(problem, quick, {});
      ASSERT_TRUE(quick.converged);
      EXPECT_LT(quick.iterations, 40);
      const double top = *std::max_element(quick.q.begin(), quick.q.end());
      const auto expect_same = [&](const LevelState& other, const char* what) {
        ASSERT_TRUE(other.converged) << what << capped << by_load;
        EXPECT_NEAR(other.approach / quick.approach, 1, 1e-6) << what;
        for (std::size_t k = 0; k < gap.size(); ++k) EXPECT_NEAR(other.q[k] / top, quick.q[k] / top, 1e-5) << what;
      };
      if (by_load) {
        LevelState searched;
        searched.q.assign(gap.size(), 0.0);
        solve_level_by_approach(problem, searched, {});
        expect_same(searched, "searched");
        EXPECT_LT(searched.iterations, 150);  // measured 71 and 89
        problem.sum.reset();
        problem.approach = quick.approach;
      }
      solve_level_steadily(problem, steady, {});
      expect_same(steady, "steady");
      EXPECT_LT(steady.iterations, 45);  // measured 35 to 40; steepest descent instead of conjugate gradients 48 to 111
    }
  }
}

TEST(NormalInput, IsCheckedAndNamed) {
  const auto message = [](const NormalProblem& problem, const NormalOptions& options = {}) -> std::string {
    try {
      solve_normal(problem, options);
    } catch (const InputError& e) {
      return e.message();
    }
    return "accepted";
  };
  NormalProblem good = crossed_cylinders(), problem = good;
  problem.load_N = -1;
  EXPECT_NE(message(problem).find("load is -1 N"), std::string::npos);
  problem.load_N.reset();
  EXPECT_NE(message(problem).find("both given, or neither"), std::string::npos);
  problem = good;
  problem.approach_mm = 0.1;
  EXPECT_NE(message(problem).find("both given, or neither"), std::string::npos);
  problem = good;
  problem.contact_modulus_MPa = 0;
  EXPECT_NE(message(problem).find("contact modulus"), std::string::npos);
  problem = good;
  problem.hardness_MPa = std::nan("");
  EXPECT_NE(message(problem).find("hardness"), std::string::npos);
  problem = good;
  problem.start.x_max_mm = problem.start.x_min_mm;
  EXPECT_NE(message(problem).find("first box"), std::string::npos);
  EXPECT_NE(message(good, with_cells(3)).find("cells is 3"), std::string::npos);
  EXPECT_NE(message(good, with_cells(64, 0)).find("tolerance"), std::string::npos);
  problem.gap = gap_of([](double, double) { return std::nan(""); });
  problem.start = good.start;
  EXPECT_NE(message(problem).find("not a number"), std::string::npos);
  problem.gap = gap_of([](double, double) { return std::numeric_limits<double>::infinity(); });
  EXPECT_NE(message(problem).find("no part of the two surfaces"), std::string::npos);
  EXPECT_THROW(solve_normal_on({4, 4, 0, 0, 1, 1}, {1, 2, 3}, good), InputError);
}

TEST(NormalInput, AnUnreachableToleranceIsReportedWithItsResidual) {
  try {
    solve_normal(crossed_cylinders(), with_cells(16, 1e-12));
  } catch (const NotConverged& e) {
    EXPECT_GT(e.iterations, 0);
    EXPECT_LT(e.residual, 1e-9);
    return;
  }
  SUCCEED();  // this machine reaches it
}

TEST(NormalProgress, IsReportedAndCancels) {
  std::stop_source source;
  Progress progress;
  progress.stop = source.get_token();
  int calls = 0;
  double last = -1;
  progress.report = [&](double fraction, std::string_view what) {
    EXPECT_EQ(what, "pressure");
    EXPECT_GE(fraction, last);
    last = fraction;
    if (++calls == 2) source.request_stop();
  };
  EXPECT_THROW(solve_normal(crossed_cylinders(), {}, progress), Cancelled);
  EXPECT_EQ(calls, 2);
  progress.stop = {};
  progress.report = [&](double fraction, std::string_view) { last = fraction; };
  solve_normal(crossed_cylinders(), {}, progress);
  EXPECT_EQ(last, 1.0);
}

TEST(NormalThreads, GiveTheSameBits) {
  const NormalSolution alone = solve_normal(crossed_cylinders());
  std::atomic<int> different = 0;
  {
    std::vector<std::jthread> threads;
    for (int t = 0; t < 6; ++t) {
      threads.emplace_back([&, t] {
        for (int k = 0; k < 10; ++k) {
          solve_normal(two_balls(3.0 + t, 3e3), with_cells(20 + 3 * k));  // other sizes in between
          const NormalSolution again = solve_normal(crossed_cylinders());
          const bool same = again.grid == alone.grid && again.approach_mm == alone.approach_mm &&
                            std::memcmp(again.pressure_MPa.data(), alone.pressure_MPa.data(),
                                        alone.pressure_MPa.size() * sizeof(double)) == 0;
          different += !same;
        }
      });
    }
  }
  EXPECT_EQ(different, 0);
}

}  // namespace
}  // namespace runband::halfspace
