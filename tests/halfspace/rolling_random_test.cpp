// Robustness: seeded random patches, friction and creepage. The ordinary run takes 300 cases;
// scripts/rolling_random_run.sh takes 10,000.
#include <gtest/gtest.h>

#include <algorithm>
#include <chrono>
#include <cstdlib>
#include <fstream>
#include <iostream>
#include <limits>
#include <string>

#include "core/halfspace/rolling.h"
#include "tests/halfspace/rolling_patches.h"

namespace runband::halfspace {
namespace {

std::uint64_t setting(const char* name, std::uint64_t otherwise) {
  const char* text = std::getenv(name);
  return text != nullptr ? std::strtoull(text, nullptr, 10) : otherwise;
}

/// Coulomb's law checked in the answer itself, without the solver's own measure: bound kept, slip opposed, stick where
/// below the bound. Returns the largest violation relative to the largest bound.
double violation(const RollingProblem& problem, const RollingResult& r) {
  double largest = 0, worst = 0, slip_scale = 0;
  for (std::size_t c = 0; c < r.state.size(); ++c) {
    const double mu = problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c];
    largest = std::max(largest, mu * problem.pressure_MPa[c]);
    slip_scale = std::max(slip_scale, std::hypot(problem.slip[2 * c], problem.slip[2 * c + 1]));
  }
  for (std::size_t c = 0; c < r.state.size(); ++c) {
    if (r.state[c] == RollingState::open) continue;
    const double mu = problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c];
    const double px = r.traction_MPa[2 * c], ps = r.traction_MPa[2 * c + 1], sx = r.slip[2 * c], ss = r.slip[2 * c + 1];
    worst = std::max(worst, (std::hypot(px, ps) - mu * problem.pressure_MPa[c]) / largest);
    // Work of friction is never negative: the part of p along s opposes it.
    worst = std::max(worst, (px * sx + ps * ss) / (largest * slip_scale));
    if (r.state[c] == RollingState::slip) {
      worst = std::max(worst, std::abs(px * ss - ps * sx) / (largest * slip_scale) / 10);
    }
  }
  return worst;
}

TEST(RollingSolver, SolvesEveryRandomCaseWithoutTheFallback) {
  const std::uint64_t count = setting("RUNBAND_RANDOM_CASES", 300), first = setting("RUNBAND_RANDOM_FIRST", 0);
  const int cells = static_cast<int>(setting("RUNBAND_RANDOM_CELLS", 32));
  std::uint64_t fallbacks = 0, failures = 0;
  std::vector<double> cost, steps;
  for (std::uint64_t k = first; k < first + count; ++k) {
    const RollingProblem problem = testing::random_problem(k, cells);
    try {
      const RollingResult r = solve_rolling(problem);
      cost.push_back(r.convolutions);
      steps.push_back(r.iterations);
      if (r.used_fallback) {
        ++fallbacks;
        ADD_FAILURE() << "case " << k << " needed the fallback";
      }
      EXPECT_LE(r.residual, 1e-6) << "case " << k;
      EXPECT_LT(violation(problem, r), 3e-5) << "case " << k;
    } catch (const Error& e) {
      ++failures;
      ADD_FAILURE() << "case " << k << ": " << e.what();
    }
  }
  std::sort(cost.begin(), cost.end());
  std::sort(steps.begin(), steps.end());
  if (cost.empty()) return;
  std::cout << count << " cases, " << cells << " cells: " << failures << " failures, " << fallbacks
            << " fallbacks; convolutions median " << cost[cost.size() / 2] << ", 90 % " << cost[cost.size() * 9 / 10]
            << ", most " << cost.back() << "; steps median " << steps[steps.size() / 2] << ", most " << steps.back()
            << "\n";
}

}  // namespace
}  // namespace runband::halfspace
