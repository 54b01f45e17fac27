// How many ellipses a second, over the range of ratios that profiles produce and over the whole range.
#include <benchmark/benchmark.h>

#include <cmath>
#include <random>
#include <vector>

#include "core/hertz/hertz.h"
#include "core/patch/patch.h"

namespace {

struct Curvatures {
  double rolling, across;
};

std::vector<Curvatures> random_curvatures(double decades) {
  std::mt19937 generator(7);
  std::uniform_real_distribution<double> exponent(-decades, decades);
  std::vector<Curvatures> all(4096);
  for (Curvatures& c : all) c = {1.0 / 460.0, std::pow(10.0, exponent(generator)) / 460.0};
  return all;
}

// Argument: decades of the curvature ratio to either side of 1. 2 covers wheel on rail, 7 an axis ratio of 1e-4..1e4.
void hertz_ellipses(benchmark::State& state) {
  const std::vector<Curvatures> all = random_curvatures(static_cast<double>(state.range(0)));
  const runband::MaterialPair steel;
  std::size_t i = 0;
  for (auto _ : state) {
    const Curvatures& c = all[i++ & 4095];
    benchmark::DoNotOptimize(runband::hertz_ellipse(c.rolling, c.across, 1e5, steel));
  }
  state.SetItemsProcessed(state.iterations());
}
BENCHMARK(hertz_ellipses)->Arg(2)->Arg(7);

// The exact cell averages on a grid of so many cells along the longer side.
void hertz_patches(benchmark::State& state) {
  const runband::HertzEllipse ellipse = runband::hertz_ellipse(1.0 / 460.0, 1.0 / 300.0, 1e5, {});
  const runband::PatchOptions options{.method = runband::PatchMethod::hertz, .cells = static_cast<int>(state.range(0))};
  for (auto _ : state) benchmark::DoNotOptimize(runband::hertz_patch(ellipse, options));
}
BENCHMARK(hertz_patches)->Arg(64)->Arg(256)->Unit(benchmark::kMicrosecond);

}  // namespace
