// Meshes of about 300,000 triangles: made, checked and written.
#include <benchmark/benchmark.h>

#include <filesystem>
#include <memory>
#include <string>

#include "core/surface/mesh.h"

namespace {

using namespace runband;

// Chosen so that the wheel has about 300,000 triangles.
const MeshOptions kWheelOptions{.chord_error_mm = 0.025};

TriangleMesh make_wheel() {
  static const auto profile = load_profile("standard:S1002", ProfileKind::wheel);
  return wheel_mesh(*profile, 460.0, kWheelOptions);
}

void count(benchmark::State& state, const TriangleMesh& mesh) {
  state.counters["triangles"] = static_cast<double>(mesh.triangles.size());
}

void wheel(benchmark::State& state) {
  TriangleMesh mesh;
  for (auto _ : state) benchmark::DoNotOptimize(mesh = make_wheel());
  count(state, mesh);
}
BENCHMARK(wheel)->Unit(benchmark::kMillisecond);

void rail(benchmark::State& state) {
  const auto profile = load_profile("standard:60E1", ProfileKind::rail);
  TriangleMesh mesh;
  for (auto _ : state)
    benchmark::DoNotOptimize(mesh = rail_mesh(*profile, -500.0, 500.0, {.chord_error_mm = 0.001, .max_edge_mm = 5.5}));
  count(state, mesh);
}
BENCHMARK(rail)->Unit(benchmark::kMillisecond);

void check(benchmark::State& state) {
  const TriangleMesh mesh = make_wheel();
  for (auto _ : state) benchmark::DoNotOptimize(check_mesh(mesh, state.range(0) != 0));
  count(state, mesh);
}
BENCHMARK(check)->ArgName("self_intersection")->Arg(0)->Arg(1)->Unit(benchmark::kMillisecond);

void write(benchmark::State& state, const std::string& ending) {
  TriangleMesh mesh = make_wheel();
  mesh.scalar_name = "height";
  for (const Vec3& v : mesh.vertices) mesh.scalar.push_back(v.z());
  const std::filesystem::path path = std::filesystem::temp_directory_path() / ("runband_bench_mesh" + ending);
  for (auto _ : state) write_mesh(path, mesh);
  state.counters["MB"] = static_cast<double>(std::filesystem::file_size(path)) / 1e6;
  std::filesystem::remove(path);
}
BENCHMARK_CAPTURE(write, ply, ".ply")->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(write, stl, ".stl")->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(write, vtp, ".vtp")->Unit(benchmark::kMillisecond);
BENCHMARK_CAPTURE(write, glb, ".glb")->Unit(benchmark::kMillisecond);

}  // namespace
