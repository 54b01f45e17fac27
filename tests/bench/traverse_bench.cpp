// Speed of locating: a traverse of 201 positions on profiles splined from 400 points (target 15 ms on one core), and
// what is asked at each position.
#include <benchmark/benchmark.h>

#include <cmath>

#include "core/locate/locate.h"

namespace {

using namespace runband;

std::shared_ptr<const Profile> splined(ProfileKind kind, const char* name) {
  const auto exact = load_profile(std::string("standard:") + name, kind);
  const ProfileCurve& curve = *exact->curve;
  constexpr int kPoints = 400;
  std::vector<Vec2> points;
  for (int k = 0; k < kPoints; ++k)
    points.push_back(curve.at(curve.t_begin() + (curve.t_end() - curve.t_begin()) * k / (kPoints - 1)).position);
  return profile_from_points(points, kind, 0.0, name);
}

std::shared_ptr<const Pairing> pairing() {
  static const std::shared_ptr<const Pairing> value = [] {
    TrackGeometry track;
    track.inclination_rad = std::atan(1.0 / 40.0);
    const auto wheel = splined(ProfileKind::wheel, "S1002");
    const auto rail = splined(ProfileKind::rail, "60E1");
    return std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, track, WheelsetGeometry{});
  }();
  return value;
}

void traverse_201(benchmark::State& state) {
  const Locator locate(pairing());
  std::vector<double> lateral;
  for (int k = 0; k < 201; ++k) lateral.push_back(-6.0 + 0.06 * k);
  for (auto _ : state) benchmark::DoNotOptimize(locate.rigid(lateral, 0.005));
}
BENCHMARK(traverse_201)->Unit(benchmark::kMillisecond);

void traverse_201_with_tables(benchmark::State& state) {
  std::vector<double> lateral;
  for (int k = 0; k < 201; ++k) lateral.push_back(-6.0 + 0.06 * k);
  for (auto _ : state) benchmark::DoNotOptimize(Locator(pairing()).rigid(lateral, 0.005));
}
BENCHMARK(traverse_201_with_tables)->Unit(benchmark::kMillisecond);

void tables(benchmark::State& state) {
  for (auto _ : state) benchmark::DoNotOptimize(Locator(pairing()));
}
BENCHMARK(tables)->Unit(benchmark::kMillisecond);

void loaded_tread_and_flange_root(benchmark::State& state) {
  const Locator locate(pairing());
  for (auto _ : state) benchmark::DoNotOptimize(locate.loaded(5.0, 0.005, LateralReference::axle, {}, {}));
}
BENCHMARK(loaded_tread_and_flange_root)->Unit(benchmark::kMicrosecond);

void gap_field_64_by_64(benchmark::State& state) {
  const Locator locate(pairing());
  const Located located = locate.loaded(3.0, 0.005, LateralReference::axle, {}, {});
  const Grid grid{64, 64, -10.0, -6.0, 20.0 / 63.0, 12.0 / 63.0};
  for (auto _ : state) benchmark::DoNotOptimize(locate.gap_field_mm(located.zones.front(), located.pose, grid));
}
BENCHMARK(gap_field_64_by_64)->Unit(benchmark::kMicrosecond);

void jumps_over_twelve_millimetres(benchmark::State& state) {
  const Locator locate(pairing());
  for (auto _ : state) benchmark::DoNotOptimize(locate.jumps(-6.0, 6.0, 0.005, LateralReference::axle));
}
BENCHMARK(jumps_over_twelve_millimetres)->Unit(benchmark::kMillisecond);

}  // namespace
