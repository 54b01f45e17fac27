// Coned wheels on crowned rails, where rigid contact has a closed form.
#include <gtest/gtest.h>

#include <cmath>

#include "core/locate/locate.h"

namespace runband {
namespace {

constexpr double kConicity = 0.05;  // 1 in 20

Locator coned_on_60e1(double inclination) {
  TrackGeometry track;
  track.inclination_rad = std::atan(inclination);
  const auto wheel = load_profile("standard:coned_1_20", ProfileKind::wheel);
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  return Locator(
      std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, track, WheelsetGeometry{}));
}

double conicity(const RigidContact& c, double lateral) {
  return (c.touch[0].rolling_radius_mm - c.touch[1].rolling_radius_mm) / (2.0 * lateral);
}

// Without roll the touching point of a cone stays where it is on the rail: the radius difference is 2 gamma y, exactly.
TEST(LocateCone, WithoutRollTheConicityIsTheCones) {
  const Locator locate = coned_on_60e1(1.0 / 20.0);
  for (const double y : {0.5, 1.0, 3.0, 5.0})
    EXPECT_NEAR(conicity(locate.rigid_without_roll(y, 0.0), y), kConicity, 1e-9) << y;
}

// With roll the conicity grows to gamma / (1 - gamma (r0 + Rr) / s0) for lateral displacement at the axle, and to
// gamma / (1 - gamma Rr / s0) for displacement at the height of the rails: roll is radius difference over 2 s0, shifts
// the axle's centre by r0 and the touching points by Rr times itself. First order in gamma; 1:20 on crown R300.
TEST(LocateCone, WithRollTheConicityIsSlightlyMore) {
  const Locator locate = coned_on_60e1(1.0 / 20.0);
  const RigidContact centred = locate.rigid(0.0, 0.0);
  const double s0 = centred.touch[0].track_mm.y(), r0 = centred.touch[0].rolling_radius_mm, crown = 300.0;
  EXPECT_NEAR(s0, 750.0, 10.0);
  const double y = 1.0;
  EXPECT_NEAR(conicity(locate.rigid(y, 0.0), y), kConicity / (1.0 - kConicity * (r0 + crown) / s0), 1.5e-4);
  EXPECT_NEAR(conicity(locate.rigid(y, 0.0, LateralReference::rail), y), kConicity / (1.0 - kConicity * crown / s0),
              1.5e-4);
  // The figure quoted for it: 0.0526.
  EXPECT_NEAR(conicity(locate.rigid(y, 0.0), y), 0.0526, 2e-4);
}

// Pose of two cones on two circles, solved here by halving: each cone's line keeps the crown's radius from its centre.
TEST(LocateCone, PoseSolvesTheLineAndCircleProblem) {
  const Locator locate = coned_on_60e1(1.0 / 40.0);
  const RailMount& mount = locate.pairing().mount(Side::left);
  const Vec2 crown_centre = mount.outward(Vec2(0.0, -300.0));
  const double gamma = std::atan(kConicity), w0 = 750.0, r0 = 460.0;
  for (const double lateral : {0.0, 0.7, 2.5, 4.0}) {
    // Height of the axle at which one side touches, at a given roll; side +1 left, -1 right.
    const auto height = [&](double side, double roll) {
      // Wheel line outward: through (w0, -r0), direction (cos gamma, sin gamma), turned by the roll about the axle.
      const double phi = side * roll, angle = gamma + phi;
      const Vec2 through(w0 * std::cos(phi) + r0 * std::sin(phi) + side * lateral,
                         w0 * std::sin(phi) - r0 * std::cos(phi));
      const Vec2 normal(-std::sin(angle), std::cos(angle));
      // (through + H up - centre) . normal = Rr
      return (300.0 - (through - crown_centre).dot(normal)) / normal.y();
    };
    double a = -0.01, b = 0.01;
    for (int k = 0; k < 60; ++k) {
      const double roll = 0.5 * (a + b);
      (height(1.0, roll) - height(-1.0, roll) > 0.0 ? a : b) = roll;
    }
    const RigidContact contact = locate.rigid(lateral, 0.0);
    EXPECT_NEAR(contact.pose.roll_rad, a, 1e-12) << lateral;
    EXPECT_NEAR(contact.pose.height_mm + r0, height(1.0, a), 1e-9) << lateral;
  }
}

// Common practice, no source: the taper of 1:20 makes the outer diameter of a tread about 6 mm less than the inner one.
TEST(LocateCone, OneInTwentyTakesAboutSixMillimetresOffTheDiameter) {
  const auto wheel = load_profile("standard:coned_1_20", ProfileKind::wheel);
  double inner = 0.0, outer = 0.0;
  for (double t = wheel->curve->t_begin(); t <= wheel->curve->t_end(); t += 0.01) {
    const CurvePoint p = wheel->curve->at(t);
    if (p.y() < -25.0) inner = p.z();
    if (p.y() < 35.0) outer = p.z();
  }
  EXPECT_NEAR(2.0 * (outer - inner), 6.0, 0.5);
}

}  // namespace
}  // namespace runband
