// The window on the processor alone: frames while turning the scene, the interface by itself, a live drag end to end.
#include <benchmark/benchmark.h>

#include "tests/panels/driver.h"

namespace runband {
namespace {

/// Frames of a window of 1440x900 while the scene is turned; the counter says how many triangles.
void TurnTheScene(benchmark::State& state) {
  Driver user(1440, 900);
  user.open("curve12.toml");
  const plot::Box scene = user.where("scene");
  user.host.move(scene.right() - 80, scene.centre().y);
  user.host.press(MouseButton::left, true);
  user.take_events();
  double x = 0;
  for (auto _ : state) {
    x += 3;
    user.host.move(scene.right() - 80 - std::fmod(x, 300), scene.centre().y);
    user.frame.step();
  }
  state.counters["triangles"] = static_cast<double>(user.frame.scene()->triangles());
}
BENCHMARK(TurnTheScene)->Unit(benchmark::kMillisecond);

/// The same window with the scene hidden behind another sheet.
void InterfaceAlone(benchmark::State& state) {
  Driver user(1440, 900);
  user.open("curve12.toml");
  user.key(Key::n4);
  double x = 0;
  for (auto _ : state) {
    x += 3;
    user.host.move(400 + std::fmod(x, 300), 500);
    user.frame.step();
  }
}
BENCHMARK(InterfaceAlone)->Unit(benchmark::kMillisecond);

/// From a move of the ruler to a frame that shows its half-space pressure, stick and slip at 64 cells on both wheels;
/// `answer_ms` is the solver's part as the status line tells it.
void LiveDrag(benchmark::State& state) {
  Driver user(1440, 900);
  user.open("curve12.toml");
  user.key(Key::h);
  const plot::Box strip = user.where("strip");
  user.host.move(strip.centre().x, strip.centre().y);
  user.host.press(MouseButton::left, true);
  user.take_events();
  double x = 0, answers = 0, most = 0;
  const auto drag = [&] {
    x += 1.7;
    user.host.move(strip.centre().x + std::fmod(x, 240), strip.centre().y);
    const auto before = user.desk.now().question;
    do user.frame.step();
    while (user.desk.now().question == before || user.desk.now().shown != user.desk.now().question);
  };
  for (int k = 0; k < 10; ++k) drag();  // transforms of this size are planned once
  for (auto _ : state) {
    drag();
    answers += user.desk.now().latency_ms;
    most = std::max(most, user.desk.now().latency_ms);
  }
  state.counters["answer_ms"] = answers / static_cast<double>(state.iterations());
  state.counters["slowest_answer_ms"] = most;
}
BENCHMARK(LiveDrag)->Unit(benchmark::kMillisecond)->UseRealTime()->Iterations(120);

/// An idle window's turns of the loop, which draw nothing.
void IdleTurn(benchmark::State& state) {
  Driver user(1440, 900);
  user.open("curve12.toml");
  user.host.set_step(1e-6);
  for (auto _ : state) user.frame.step();
}
BENCHMARK(IdleTurn)->Unit(benchmark::kMicrosecond);

}  // namespace
}  // namespace runband
