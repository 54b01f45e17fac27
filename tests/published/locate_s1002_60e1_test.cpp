// Rigid contact of wheel S1002 on rail 60E1, gauge 1435, back-to-back 1360, rolling radius 460. The values are those of
// two independent computations of this pairing: a rigid-contact search on the profile definitions and a brute-force
// sampling of the two surfaces in three dimensions with local refinement.
#include <gtest/gtest.h>

#include <cmath>

#include "core/locate/locate.h"

namespace runband {
namespace {

Locator locator(double inclination) {
  TrackGeometry track;
  track.inclination_rad = std::atan(inclination);
  const auto wheel = load_profile("standard:S1002", ProfileKind::wheel);
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  return Locator(
      std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, track, WheelsetGeometry{}));
}

double radius_difference(const RigidContact& c) { return c.touch[0].rolling_radius_mm - c.touch[1].rolling_radius_mm; }

constexpr double kRadius_mm = 1e-4;
constexpr double kPosition_mm = 2e-3;
constexpr double kRoll_rad = 1e-6;

TEST(LocateS1002On60E1, RollingRadiusDifferenceAt1In40) {
  const Locator locate = locator(1.0 / 40.0);
  const double y[] = {1, 3, 5, 6}, expected[] = {0.61379, 0.95866, 3.68876, 4.66093};
  for (int k = 0; k < 4; ++k) EXPECT_NEAR(radius_difference(locate.rigid(y[k], 0.0)), expected[k], kRadius_mm) << y[k];
  // The first computation gives four decimals.
  EXPECT_NEAR(radius_difference(locate.rigid(2.0, 0.0)), 0.7767, kRadius_mm);
  EXPECT_NEAR(radius_difference(locate.rigid(4.0, 0.0)), 1.1856, kRadius_mm);
}

TEST(LocateS1002On60E1, RollAt1In40) {
  const Locator locate = locator(1.0 / 40.0);
  const double y[] = {1, 3, 5, 6}, expected_mrad[] = {0.0529, 0.1797, 0.3406, 0.6211};
  for (int k = 0; k < 4; ++k)
    EXPECT_NEAR(locate.rigid(y[k], 0.0).pose.roll_rad, 1e-3 * expected_mrad[k], kRoll_rad) << y[k];
}

TEST(LocateS1002On60E1, ContactPositionsAndAngleAt1In40) {
  const Locator locate = locator(1.0 / 40.0);
  const RigidContact centred = locate.rigid(0.0, 0.0);
  EXPECT_NEAR(centred.touch[0].wheel_y_mm, 3.2262, kPosition_mm);
  EXPECT_NEAR(centred.touch[1].wheel_y_mm, 3.2262, kPosition_mm);
  EXPECT_NEAR(centred.pose.roll_rad, 0.0, 1e-12);
  const RigidContact displaced = locate.rigid(3.0, 0.0);
  EXPECT_NEAR(displaced.touch[0].wheel_y_mm, -12.7183, kPosition_mm);
  EXPECT_NEAR(displaced.touch[1].wheel_y_mm, 10.4368, kPosition_mm);
  EXPECT_NEAR(displaced.touch[0].contact_angle_rad, 0.08980, 1e-5);
}

TEST(LocateS1002On60E1, RollingRadiusDifferenceWithoutRoll) {
  const Locator locate = locator(1.0 / 40.0);
  const double expected[] = {0.6089, 0.7661, 0.9396, 1.1511, 1.4476};
  for (int k = 0; k < 5; ++k)
    EXPECT_NEAR(radius_difference(locate.rigid_without_roll(k + 1.0, 0.0)), expected[k], kRadius_mm) << k + 1;
}

TEST(LocateS1002On60E1, RollingRadiusDifferenceAt1In20) {
  const Locator locate = locator(1.0 / 20.0);
  const double expected[] = {0.0182, 0.0372, 0.0577, 0.0804, 0.1061, 0.1433};
  for (int k = 0; k < 6; ++k)
    EXPECT_NEAR(radius_difference(locate.rigid(k + 1.0, 0.0)), expected[k], kRadius_mm) << k + 1;
}

TEST(LocateS1002On60E1, CentredContactByInclination) {
  EXPECT_NEAR(locator(1.0 / 20.0).rigid(0.0, 0.0).touch[0].wheel_y_mm, 13.3, 0.05);
  EXPECT_NEAR(locator(1.0 / 30.0).rigid(0.0, 0.0).touch[0].wheel_y_mm, 9.15, 0.005);
}

TEST(LocateS1002On60E1, JumpsOfTheLeftWheel) {
  const Locator locate = locator(1.0 / 40.0);
  std::vector<ContactJump> left;
  for (const ContactJump& jump : locate.jumps(0.1, 6.3, 0.0, LateralReference::axle))
    if (jump.side == Side::left && std::abs(jump.wheel_y_to_mm - jump.wheel_y_from_mm) > 1.0) left.push_back(jump);
  // Arc D of the wheel and the rail's gauge corner have one radius: the third jump runs along the whole arc. The step
  // of 1e-4 mm in the published profile at y = -35 makes a jump of its own, shorter than a millimetre, just before it.
  const double at[] = {0.22592, 4.99181, 6.25973}, from[] = {2.04, -17.70, -35.0}, to[] = {-7.74, -28.58, -38.43};
  ASSERT_EQ(left.size(), 3u);
  for (std::size_t k = 0; k < 3; ++k) {
    EXPECT_NEAR(left[k].lateral_mm, at[k], 1e-5) << k;
    EXPECT_NEAR(left[k].wheel_y_from_mm, from[k], 0.01) << k;
    EXPECT_NEAR(left[k].wheel_y_to_mm, to[k], 0.01) << k;
  }
}

}  // namespace
}  // namespace runband
