// How long a profile takes to load, to fit and to evaluate.
#include <benchmark/benchmark.h>

#include <filesystem>

#include "core/profile/outline.h"
#include "core/profile/smoothing.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

void fit(benchmark::State& state) {
  const auto wheel = s1002();
  const std::vector<Vec2> points =
      sampled(*wheel->curve, wheel->curve->t_end() / (static_cast<double>(state.range(0)) - 0.5), 0.02);
  for (auto _ : state) benchmark::DoNotOptimize(smooth_points(points, 0.02));
  state.counters["points"] = static_cast<double>(points.size());
}
BENCHMARK(fit)->Arg(400)->Arg(1500)->Arg(4000)->Unit(benchmark::kMillisecond);

void check_and_fit(benchmark::State& state) {
  const auto wheel = s1002();
  const std::vector<Vec2> points =
      sampled(*wheel->curve, wheel->curve->t_end() / (static_cast<double>(state.range(0)) - 0.5), 0.02);
  for (auto _ : state) benchmark::DoNotOptimize(profile_from_points(points, ProfileKind::wheel, 0.02));
}
BENCHMARK(check_and_fit)->Arg(400)->Arg(1500)->Arg(4000)->Unit(benchmark::kMillisecond);

void load_demo_wheel(benchmark::State& state) {
  const auto file = std::filesystem::path(RUNBAND_DATA) / "demo" / "wheel_worn.csv";
  for (auto _ : state) benchmark::DoNotOptimize(load_profile(file.string(), ProfileKind::wheel));
}
BENCHMARK(load_demo_wheel)->Unit(benchmark::kMillisecond);

void evaluate(benchmark::State& state, const ProfileCurve& curve) {
  double t = curve.t_begin();
  const double step = 0.618 * (curve.t_end() - curve.t_begin());
  for (auto _ : state) {
    benchmark::DoNotOptimize(curve.at(t));
    t += step;
    if (t > curve.t_end()) t -= curve.t_end() - curve.t_begin();
  }
}
void evaluate_spline(benchmark::State& state) {
  evaluate(state, *profile_from_points(sampled(*s1002()->curve, 0.1, 0.02), ProfileKind::wheel, 0.02)->curve);
}
void evaluate_interpolation(benchmark::State& state) {
  evaluate(state, *profile_from_points(sampled(*s1002()->curve, 0.1), ProfileKind::wheel, 0.0)->curve);
}
void evaluate_definition(benchmark::State& state) { evaluate(state, *s1002()->curve); }
BENCHMARK(evaluate_spline);
BENCHMARK(evaluate_interpolation);
BENCHMARK(evaluate_definition);

}  // namespace
}  // namespace runband
