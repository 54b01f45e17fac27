// The normal problem, whole solves to 1e-6 on one core, in milliseconds and in convolutions of the final grid measured
// in the same run. Targets: 2 ms at 50 cells across the contact, 7 ms at 100, 25 convolutions.
#include <benchmark/benchmark.h>

#include <chrono>
#include <cmath>
#include <vector>

#include "core/halfspace/convolver.h"
#include "core/halfspace/influence.h"
#include "core/halfspace/normal_level.h"
#include "core/hertz/hertz.h"
#include "tests/halfspace/normal_gaps.h"

namespace runband::halfspace {
namespace {

double convolution_seconds(const Grid& grid) {
  const Convolver<float> convolver(grid.nx, grid.ns, love_table(grid.nx, grid.ns, 1.0, 1.0));
  auto work = convolver.workspace();
  std::vector<float> p(static_cast<std::size_t>(grid.cells()), 1.0F);
  double least = 1.0;
  for (int k = 0; k < 100; ++k) {
    const auto from = std::chrono::steady_clock::now();
    convolver.apply(p.data(), p.data(), work);
    least = std::min(least, std::chrono::duration<double>(std::chrono::steady_clock::now() - from).count());
    p.assign(p.size(), 1.0F);
  }
  return least;
}

// Arguments: cells across, curvature ratio in hundredths.
void BM_NormalSolve(benchmark::State& state) {
  const double ratio = static_cast<double>(state.range(1)) / 100.0, cx = 1 / 460.0, cs = ratio * cx;
  const HertzEllipse e = hertz_ellipse(cx, cs, 1e5, {});
  const NormalProblem problem =
      loaded(paraboloid(cx, cs), 1.5 * e.semi_axis_rolling_mm, 1.5 * e.semi_axis_across_mm, 1e5);
  NormalOptions options;
  options.cells = static_cast<int>(state.range(0));
  NormalSolution solution = solve_normal(problem, options);
  double least = 1e9;
  for (auto _ : state) {
    const auto from = std::chrono::steady_clock::now();
    solution = solve_normal(problem, options);
    least = std::min(least, std::chrono::duration<double>(std::chrono::steady_clock::now() - from).count());
  }
  state.counters["cells_x"] = solution.grid.nx;
  state.counters["cells_s"] = solution.grid.ns;
  state.counters["convolutions_counted"] = solution.convolutions;
  state.counters["convolutions_by_time"] = least / convolution_seconds(solution.grid);
  state.counters["least_ms"] = 1e3 * least;
  state.counters["residual"] = solution.residual;
}
BENCHMARK(BM_NormalSolve)
    ->ArgsProduct({{25, 50, 100, 200}, {100, 250, 1000}})
    ->Unit(benchmark::kMillisecond)
    ->ArgNames({"cells", "curvature_ratio_percent"});

// The first solve of a size pays for its kernels too (plans once per process more).
void BM_NormalKernel(benchmark::State& state) {
  const int n = static_cast<int>(state.range(0));
  for (auto _ : state) benchmark::DoNotOptimize(NormalKernel(n, n, 1.0));
}
BENCHMARK(BM_NormalKernel)->Arg(56)->Arg(112)->Unit(benchmark::kMillisecond);

template <typename Real>
void BM_Convolution(benchmark::State& state) {
  const int n = static_cast<int>(state.range(0));
  const Convolver<Real> convolver(n, n, love_table(n, n, 1.0, 1.0));
  auto work = convolver.workspace();
  std::vector<Real> p(static_cast<std::size_t>(n * n), Real{1}), u(p.size());
  for (auto _ : state) convolver.apply(p.data(), u.data(), work);
}
BENCHMARK(BM_Convolution<float>)->Arg(56)->Arg(112)->Arg(216)->Unit(benchmark::kMicrosecond);
BENCHMARK(BM_Convolution<double>)->Arg(56)->Arg(112)->Arg(216)->Unit(benchmark::kMicrosecond);

void BM_LoveTable(benchmark::State& state) {
  const int n = static_cast<int>(state.range(0));
  for (auto _ : state) benchmark::DoNotOptimize(love_table(n, n, 1.0, 0.7));
}
BENCHMARK(BM_LoveTable)->Arg(56)->Arg(112)->Unit(benchmark::kMicrosecond);

}  // namespace
}  // namespace runband::halfspace
