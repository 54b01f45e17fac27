// The Skerry Line: its measurements are what the generator makes, its cases load and show what their titles say.
#include <gtest/gtest.h>
#include <unistd.h>

#include <cstdlib>
#include <filesystem>

#include "core/base/file.h"
#include "core/case/case.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

namespace fs = std::filesystem;
const fs::path kDemo = fs::path(RUNBAND_DATA) / "demo";

TEST(DemoProfiles, AreWhatTheGeneratorMakes) {
  const fs::path folder = fs::path(::testing::TempDir()) / ("runband_demo_" + std::to_string(::getpid()));
  fs::remove_all(folder);
  const std::string script = (fs::path(RUNBAND_DATA).parent_path() / "scripts" / "make_demo_profiles.py").string();
  ASSERT_EQ(std::system(("python3 '" + script + "' '" + folder.string() + "'").c_str()), 0);
  int compared = 0;
  for (const auto& entry : fs::directory_iterator(kDemo)) {
    if (entry.path().extension() != ".csv") continue;
    EXPECT_EQ(read_file(entry.path()), read_file(folder / entry.path().filename())) << entry.path();
    ++compared;
  }
  EXPECT_EQ(compared, 5);
  fs::remove_all(folder);
}

TEST(DemoProfiles, FitWithinTheirNoise) {
  for (const auto& entry : fs::directory_iterator(kDemo)) {
    if (entry.path().extension() != ".csv") continue;
    const bool wheel = entry.path().filename().string().starts_with("wheel");
    const auto profile = load_profile(entry.path().string(), wheel ? ProfileKind::wheel : ProfileKind::rail);
    ASSERT_TRUE(profile->fit);
    EXPECT_EQ(profile->fit->noise_mm, 0.02);
    EXPECT_NEAR(profile->fit->residual_rms_mm, 0.02, 0.0015) << entry.path();
    EXPECT_TRUE(profile->findings.empty()) << entry.path() << ": " << profile->findings.front().text;
  }
}

TEST(DemoProfiles, WornWheelIsHollowByTwoMillimetres) {
  const auto wheel = load_profile((kDemo / "wheel_worn.csv").string(), ProfileKind::wheel);
  for (const Quantity& q : describe_profile(*wheel, s1002().get())) {
    if (q.name == "hollow_depth") {
      EXPECT_NEAR(q.value, 2.0, 0.3);
    }
    if (q.name == "wear_max") {
      EXPECT_NEAR(q.value, 3.6, 0.1);
    }
  }
}

TEST(DemoCases, LoadWithTheirProfiles) {
  int pairings = 0;
  for (const auto& entry : fs::directory_iterator(kDemo)) {
    if (entry.path().extension() != ".toml") continue;
    const Case c = load_case(entry.path());
    EXPECT_TRUE(c.title.starts_with("Skerry Line")) << entry.path();
    if (c.bench) continue;
    ++pairings;
    for (int side = 0; side < 2; ++side) {
      EXPECT_NO_THROW(load_profile(c.wheels[side].profile, ProfileKind::wheel, c.wheels[side].options, c.folder));
      EXPECT_NO_THROW(load_profile(c.rails[side].profile, ProfileKind::rail, c.rails[side].options, c.folder));
    }
  }
  EXPECT_GE(pairings, 6);
}

}  // namespace
}  // namespace runband
