// Steady rolling, whole solves to 1e-6 on one core: milliseconds, and the same as multiples of one convolution measured
// in the same run. Targets: 1.2, 6, 40 ms at 32, 64, 128 cells across; 45 convolutions in the median; growth from 32 to
// 256 cells no worse than (number of cells)^1.15. Simplified theory: 2 ns per element.
#include <benchmark/benchmark.h>
#include <sys/resource.h>

#include <algorithm>
#include <cmath>
#include <ctime>
#include <string>
#include <vector>

#include "core/halfspace/creep_laws.h"
#include "core/halfspace/rolling.h"
#include "core/halfspace/rolling_operator.h"
#include "core/halfspace/simplified.h"
#include "tests/halfspace/rolling_patches.h"

namespace runband::halfspace {
namespace {

/// Processor time of this thread: the solver uses one, and other work on the machine does not count.
double now() {
  timespec t{};
  clock_gettime(CLOCK_THREAD_CPUTIME_ID, &t);
  return static_cast<double>(t.tv_sec) + 1e-9 * static_cast<double>(t.tv_nsec);
}

double seconds_since(double from) { return now() - from; }

double median(std::vector<double> v) {
  std::sort(v.begin(), v.end());
  return v[v.size() / 2];
}

/// Least time of one float convolution (both components) of an n x n box.
double convolution_seconds(int n) {
  const RollingOperator op({n, n, 1.0, 0.28, {1.5, 2.0, 0.5}});
  PairScratch<float> scratch;
  std::vector<float> in(op.values(), 1.0F), out(op.values());
  double least = 1;
  for (int k = 0; k < 50; ++k) {
    const auto from = now();
    op.apply(in.data(), out.data(), scratch);
    least = std::min(least, seconds_since(from));
  }
  return least;
}

/// Ellipses of n x n cells as wheel and rail make them: a/b, creepages, spin and cut cells differ from case to case, so
/// that no case profits from the one before.
RollingProblem ellipse_case(int number, int n) {
  const double t = 0.5 + 0.5 * std::sin(1.7 * number), ratio = std::pow(10.0, 0.6 * std::sin(2.3 * number));
  RollingProblem problem =
      testing::ellipse_problem(5 * std::sqrt(ratio), 5 / std::sqrt(ratio), n, n, 1000, 0.2 + 0.2 * t, 0.28);
  const double size = 4e-3 * std::max(1.0, ratio) * std::pow(10.0, -1.5 * t);
  problem.slip = rigid_slip(problem.grid, size * std::cos(1.1 * number), size * std::sin(1.1 * number),
                            0.2 * size * std::sin(0.7 * number));
  return problem;
}

struct Measured {
  double seconds = 0, convolutions = 0;
};

Measured measure(int n, bool random, int cases) {
  std::vector<double> seconds, convolutions;
  for (int k = 0; k < cases; ++k) {
    const RollingProblem problem =
        random ? testing::random_problem(static_cast<std::uint64_t>(k), n) : ellipse_case(k, n);
    const auto from = now();
    const RollingResult r = solve_rolling(problem);
    seconds.push_back(seconds_since(from));
    convolutions.push_back(r.convolutions);
  }
  return {median(seconds), median(convolutions)};
}

/// Arguments: cells across, 0 ellipses or 1 random patches.
void BM_RollingSolve(benchmark::State& state) {
  const int n = static_cast<int>(state.range(0)), cases = n > 100 ? 24 : 60;
  const bool random = state.range(1) == 1;
  measure(n, random, cases);  // plans and pages
  std::vector<double> seconds;
  Measured m;
  for (auto _ : state) {
    m = measure(n, random, cases);
    seconds.push_back(m.seconds);
  }
  const double best = *std::min_element(seconds.begin(), seconds.end());
  state.counters["median_ms"] = 1e3 * best;
  state.counters["convolutions_counted"] = m.convolutions;
  state.counters["convolutions_by_time"] = best / convolution_seconds(n);
}
BENCHMARK(BM_RollingSolve)
    ->ArgsProduct({{32, 64, 128}, {0, 1}})
    ->Iterations(5)
    ->Unit(benchmark::kMillisecond)
    ->ArgNames({"cells", "random"});

/// Exponent of the median time over the number of cells, least squares on 32, 64, 128 and 256 cells across; the peak
/// resident memory of the process once 256 x 256 has been solved.
void BM_RollingGrowth(benchmark::State& state) {
  for (auto _ : state) {
    double sx = 0, sy = 0, sxx = 0, sxy = 0, count = 0;
    for (const int n : {32, 64, 128, 256}) {
      measure(n, false, 4);
      const double x = std::log(static_cast<double>(n) * n), y = std::log(measure(n, false, n > 100 ? 12 : 60).seconds);
      sx += x, sy += y, sxx += x * x, sxy += x * y, count += 1;
      state.counters["ms_" + std::to_string(n)] = 1e3 * std::exp(y);
    }
    state.counters["exponent"] = (count * sxy - sx * sy) / (count * sxx - sx * sx);
  }
  rusage usage{};
  getrusage(RUSAGE_SELF, &usage);
  state.counters["peak_MB"] = static_cast<double>(usage.ru_maxrss) / 1024;
}
BENCHMARK(BM_RollingGrowth)->Iterations(1)->Unit(benchmark::kMillisecond);

/// Nanoseconds per element on one core. Argument: strips, and elements in each.
void BM_SimplifiedTheory(benchmark::State& state) {
  SimplifiedEllipse e;
  e.semi_axis_rolling_mm = 6;
  e.semi_axis_across_mm = 4;
  e.normal_force_N = 1e5;
  e.friction = 0.3;
  e.flexibility = flexibility(6, 4, 82000, creep_coefficients(1.5, 0.28));
  e.strips = e.elements = static_cast<int>(state.range(0));
  e.longitudinal = 1e-3;
  e.spin_per_mm = 1e-4;
  double shift = 0, least = 1;
  for (auto _ : state) {
    e.lateral = shift += 1e-7;
    const auto from = now();
    benchmark::DoNotOptimize(simplified_forces(e).force_rolling_N);
    least = std::min(least, seconds_since(from));
  }
  state.counters["ns_per_element"] = 1e9 * least / static_cast<double>(state.range(0) * state.range(0));
}
BENCHMARK(BM_SimplifiedTheory)->Arg(32)->Arg(64)->Arg(128)->Unit(benchmark::kMicrosecond);

void BM_CreepCoefficients(benchmark::State& state) {
  double ratio = 0.3;
  for (auto _ : state) benchmark::DoNotOptimize(creep_coefficients(ratio += 1e-6, 0.28).c11);
}
BENCHMARK(BM_CreepCoefficients)->Unit(benchmark::kNanosecond);

void BM_Polach(benchmark::State& state) {
  CreepContact c{6, 4, 1e5, 0.3, 82000, 0.28, 0, 1e-3, 1e-4};
  const CreepCoefficients k = creep_coefficients(1.5, 0.28);
  for (auto _ : state) {
    c.longitudinal += 1e-9;
    benchmark::DoNotOptimize(polach(c, k).rolling_N);
  }
}
BENCHMARK(BM_Polach)->Unit(benchmark::kNanosecond);

}  // namespace
}  // namespace runband::halfspace
