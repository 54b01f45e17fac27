// Robustness: random events by the thousand, a plugin that throws in every call, long use in steady memory.
#include <gtest/gtest.h>
#include <unistd.h>

#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <random>

#include "tests/panels/driver.h"

namespace runband {
namespace {

long events_wanted() {
  // The long run: RUNBAND_STORM=100000.
  const char* wanted = std::getenv("RUNBAND_STORM");
  return wanted != nullptr ? std::atol(wanted) : 1200;
}

double resident_MB() {
  std::ifstream file("/proc/self/statm");
  long whole = 0, resident = 0;
  file >> whole >> resident;
  return static_cast<double>(resident) * static_cast<double>(::sysconf(_SC_PAGESIZE)) / 1e6;
}

void random_event(Driver& user, std::mt19937& random) {
  const auto any = [&](int n) { return static_cast<int>(random() % static_cast<unsigned>(n)); };
  const int width = user.host.width_px(), height = user.host.height_px();
  switch (any(12)) {
    case 0:
    case 1:
    case 2:
    case 3:
      user.host.move(any(width + 40) - 20, any(height + 40) - 20);
      break;
    case 4:
    case 5:
    case 6: {
      const auto button = static_cast<MouseButton>(any(8) == 0 ? any(3) : 0);
      user.host.press(button, true);
      if (any(3) == 0) user.host.move(any(width), any(height));
      user.host.press(button, false);
      break;
    }
    case 7:
      user.host.wheel(any(7) - 3, {any(6) == 0, any(6) == 0, false});
      break;
    case 8:
    case 9: {
      const auto key = static_cast<Key>(1 + any(static_cast<int>(Key::count) - 1));
      const Modifiers with{any(4) == 0, any(4) == 0, any(12) == 0};
      // Written files belong to nobody here: what saves, keeps or quits is left to other tests.
      if (with.control && (key == Key::s || key == Key::e || key == Key::q)) return;
      user.host.key(key, with);
      break;
    }
    case 10:
      user.host.type(any(2) == 0 ? "-3,5" : "Ωλ x");
      break;
    default:
      // A control by its name: every one is reached sooner or later.
      const auto ids = user.frame.ui().ids();
      if (ids.empty()) break;
      const std::string& id = ids[static_cast<std::size_t>(any(static_cast<int>(ids.size())))];
      if (id.starts_with("save/") || id.starts_with("unsaved/save") || id.starts_with("open/list") ||
          id.starts_with("profile/list"))
        break;
      const plot::Point at = user.frame.ui().where(id)->centre();
      user.host.move(at.x, at.y);
      user.host.press(MouseButton::left, true);
      user.host.press(MouseButton::left, false);
  }
}

TEST(Storm, RandomEventsHarmNothing) {
  Driver user(640, 460);
  user.open("curve12.toml");
  std::mt19937 random(20261201);
  const long events = events_wanted();
  for (long k = 0; k < events; ++k) {
    random_event(user, random);
    while (!user.host.idle() || user.frame.screen().pending()) user.frame.step();
    if (k % 500 == 499) {
      const int widths[] = {640, 0, 400, 900, 1};
      user.host.resize(widths[(k / 500) % 5], 460, k % 1000 < 500 ? 1 : 1.5);
      user.frame.step();
      user.host.resize(640, 460, 1);
    }
  }
  // Whatever was done can be taken back, and the window still answers.
  user.key(Key::escape);
  user.key(Key::escape);
  user.key(Key::escape);
  user.desk.prompt = {};
  const bool was_open = user.desk.now().used;
  EXPECT_TRUE(was_open);
  for (int k = 0; k < 5000 && user.desk.can_undo(); ++k) user.desk.undo();
  EXPECT_FALSE(user.desk.can_undo());
  user.open("curve12.toml");
  EXPECT_TRUE(user.desk.now().solution);
  EXPECT_FALSE(user.desk.now().failure);
}

/// Throws in every call that it can.
class Thrower final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "thrower";
    d.title = "Thrower";
    d.summary = "Throws whenever it is run.";
    d.gives = {"nothing_at_all"};
    return d;
  }
  AnalysisResult run(const PatchContext&, const Parameters&, const Progress&) const override {
    throw std::runtime_error("it always does");
  }
};

TEST(Storm, APluginThatThrowsInEveryCallShowsItsSentenceAndTheRestGoesOn) {
  AnalysisRegistry registry;
  for (const auto& folder : plugin_folders()) registry.load_folder(folder);
  registry.add(std::make_unique<Thrower>());
  Driver user(1200, 800, 1, {}, registry);
  user.open("curve12.toml");
  for (int k = 0; k < 6; ++k) user.key(Key::left);
  ASSERT_TRUE(user.desk.now().solution);
  const Contact& contact = user.desk.now().solution->contacts.back();
  ASSERT_TRUE(contact.analyses.contains("thrower"));
  ASSERT_FALSE(contact.analyses.at("thrower").cautions.empty());
  EXPECT_NE(contact.analyses.at("thrower").cautions.front().text.find("it always does"), std::string::npos);
  EXPECT_FALSE(contact.analyses.at("creepage").quantities.empty());
  user.key(Key::n4);
  user.click("page/thrower");
  EXPECT_TRUE(user.desk.now().whole);
}

TEST(Storm, LongUseKeepsTheMemory) {
  Driver user(640, 460);
  user.open("curve12.toml");
  user.key(Key::h);
  const auto use = [&](int rounds) {
    for (int k = 0; k < rounds; ++k) {
      user.host.key(k % 8 < 4 ? Key::left : Key::right, kShift);
      user.take_events();
      user.host.pass(0.05);
      if (k % 40 == 0) user.settle();
      if (k % 60 == 30)
        for (const Key sheet : {Key::n2, Key::n3, Key::n4, Key::n1}) {
          user.host.key(sheet);
          user.take_events();
        }
    }
    user.settle();
  };
  use(100);  // caches, fonts and plans are made
  const double before = resident_MB();
  use(140);
  EXPECT_LT(resident_MB() - before, 40.0) << "grew from " << before << " MB";
}

}  // namespace
}  // namespace runband
