// What each analysis costs for one contact at 64 cells across: the whole with it, less the whole with what it needs.
#include <benchmark/benchmark.h>

#include <chrono>
#include <filesystem>

#include "core/solve/solution.h"

namespace runband {
namespace {

const Solution& located() {
  static const Solution kSolution =
      solve(load_case(std::filesystem::path(RUNBAND_DATA) / "demo" / "curve12.toml", {"patch.method=half_space"}), {},
            {&installed_analyses(), {"creepage"}});
  return kSolution;
}

/// One contact, the analysis and everything it needs; the counter `of_it_ms` leaves out what it needs.
void Analyse(benchmark::State& state, const std::string& id, const std::vector<std::string>& before) {
  const Solution& s = located();
  const Case& c = s.asked;
  const auto run = [&](const std::vector<std::string>& with) {
    return solve(c, s.locator, {}, {&installed_analyses(), with});
  };
  double whole = 0, without = 0;
  long count = 0;
  (void)run({id});
  for (auto _ : state) {
    const auto a = std::chrono::steady_clock::now();
    benchmark::DoNotOptimize(run({id}));
    const auto b = std::chrono::steady_clock::now();
    benchmark::DoNotOptimize(run(before));
    const auto d = std::chrono::steady_clock::now();
    const double with_it = std::chrono::duration<double>(b - a).count(),
                 rest = std::chrono::duration<double>(d - b).count();
    state.SetIterationTime(with_it);
    whole += with_it;
    without += rest;
    ++count;
  }
  // Two contacts carry load here.
  state.counters["of_it_ms"] = (whole - without) / static_cast<double>(count) / 2 * 1e3;
}
BENCHMARK_CAPTURE(Analyse, creepage, "creepage", {"steering"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);
BENCHMARK_CAPTURE(Analyse, slip_bands, "slip_bands", {"creepage"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);
BENCHMARK_CAPTURE(Analyse, flange_climb, "flange_climb", {"slip_bands"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);
BENCHMARK_CAPTURE(Analyse, wear, "wear", {"slip_bands"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);
BENCHMARK_CAPTURE(Analyse, fatigue, "fatigue", {"wear"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);
BENCHMARK_CAPTURE(Analyse, heat, "heat", {"wear"})->UseManualTime()->Unit(benchmark::kMillisecond)->Iterations(30);
BENCHMARK_CAPTURE(Analyse, subsurface, "subsurface", {"slip_bands"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(10);
BENCHMARK_CAPTURE(Analyse, steering, "steering", {"creepage"})
    ->UseManualTime()
    ->Unit(benchmark::kMillisecond)
    ->Iterations(30);

}  // namespace
}  // namespace runband
