// Zones under load: curvatures, shares, names, cautions.
#include <gtest/gtest.h>

#include <random>

#include "core/base/error.h"
#include "shared.h"

namespace runband {
namespace {

using namespace test;

bool has(const std::vector<Caution>& cautions, const std::string& code) {
  return std::any_of(cautions.begin(), cautions.end(), [&](const Caution& c) { return c.code == code; });
}

// Arcs have one curvature, whatever the window: 1/r0 along, 1/rho + 1/Rr across.
TEST(Loaded, ArcsGiveTheirOwnCurvatureExactly) {
  for (const double barrel : {-900.0, 350.0, 120.0}) {
    const Locator locate = bare(graph(ProfileKind::wheel, arc, barrel), graph(ProfileKind::rail, arc, -300.0));
    const Located located = locate.loaded(0.0, 0.0, LateralReference::axle, {}, {});
    ASSERT_EQ(located.zones.size(), 2u) << barrel;
    for (const ContactZone& zone : located.zones) {
      EXPECT_NEAR(zone.curvature.rolling_per_mm * 460.0, 1.0, 1e-9) << barrel;
      EXPECT_NEAR(zone.curvature.wheel_across_per_mm * barrel, 1.0, 1e-7) << barrel;
      EXPECT_NEAR(zone.curvature.rail_across_per_mm * 300.0, 1.0, 1e-7) << barrel;
      EXPECT_NEAR(zone.curvature.across_per_mm / (1.0 / barrel + 1.0 / 300.0), 1.0, 1e-7) << barrel;
      EXPECT_LT(zone.curvature.misfit, 1e-6) << barrel;
      EXPECT_TRUE(zone.cautions.empty()) << zone.cautions.front().text;
      const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, 1.0 / barrel + 1.0 / 300.0, 100000.0, {});
      EXPECT_NEAR(zone.ellipse->semi_axis_across_mm / ellipse.semi_axis_across_mm, 1.0, 1e-7);
      EXPECT_NEAR(zone.ellipse->peak_pressure_MPa / ellipse.peak_pressure_MPa, 1.0, 1e-7);
    }
  }
}

// Steel wheel of radius 460 mm, cylindrical, on a 300 mm crown under 80 and 112.5 kN: Hertz's formulas with E 210 GPa,
// nu 0.28, evaluated to 25 digits.
TEST(Loaded, CylinderOnCrownMatchesHertz) {
  const Locator locate = bare(graph(ProfileKind::wheel, slanted, 0.0), graph(ProfileKind::rail, arc, -300.0));
  const Located located = locate.loaded(0.0, 0.0, LateralReference::axle, {{80000.0, 112500.0}}, {});
  ASSERT_EQ(located.zones.size(), 2u);
  EXPECT_NEAR(located.zones[0].ellipse->semi_axis_rolling_mm, 6.67644132313, 1e-6);
  EXPECT_NEAR(located.zones[0].ellipse->semi_axis_across_mm, 5.02216771891, 1e-6);
  EXPECT_NEAR(located.zones[1].ellipse->peak_pressure_MPa, 1276.28981393, 1e-3);
  EXPECT_NEAR(located.zones[1].ellipse->approach_mm, 0.113579205847, 1e-8);
}

// Equal curvature through a wheel's cone: cos(angle)/R along.
TEST(Loaded, RollingCurvatureIsCosineOverRadius) {
  const Locator locate = s1002_on_60e1();
  const Located located = locate.loaded(6.2, 0.0, LateralReference::axle, {}, {});
  const ContactZone& zone = located.zones.front();
  ASSERT_EQ(zone.side, Side::left);
  // Angle against the axle, not the track: the roll comes off.
  const double angle = zone.contact_angle_rad - located.pose.roll_rad;
  EXPECT_NEAR(zone.curvature.rolling_per_mm, std::cos(angle) / zone.rolling_radius_mm, 1e-9);
}

TEST(Loaded, ZonesCarryTheWheelLoadWithOneDisplacement) {
  const Locator locate = s1002_on_60e1();
  std::mt19937 engine(7);
  std::uniform_real_distribution<double> lateral(-6.15, 6.15), yaw(-0.02, 0.02), load(30e3, 150e3);
  std::vector<double> positions{0.22592, 4.99181, -4.99181, 0.2, 0.25, 4.9, 5.1, 5.5};
  for (int k = 0; k < 60; ++k) positions.push_back(lateral(engine));
  for (const double y : positions) {
    const WheelLoads loads{{load(engine), load(engine)}};
    const double turned = yaw(engine);
    const Located located = locate.loaded(y, turned, LateralReference::axle, loads, {});
    for (const Side side : {Side::left, Side::right}) {
      double sum = 0.0, displacement = -1.0;
      for (const ContactZone& zone : located.zones) {
        if (zone.side != side) continue;
        EXPECT_EQ(zone.carries_load, zone.normal_force_N > 0.0);
        EXPECT_EQ(zone.ellipse.has_value(), zone.carries_load);
        if (!zone.carries_load) continue;
        sum += zone.normal_force_N * std::cos(zone.contact_angle_rad);
        const double own = (zone.ellipse->approach_mm + zone.gap_mm) / std::cos(zone.contact_angle_rad);
        if (displacement < 0.0) displacement = own;
        EXPECT_NEAR(own / displacement, 1.0, 1e-6) << y << ' ' << turned;
      }
      EXPECT_NEAR(sum / loads.vertical_N[side == Side::left ? 0 : 1], 1.0, 1e-8) << y << ' ' << turned;
    }
  }
}

TEST(Loaded, TwoZonesShareNearAJumpAndNoForceJumps) {
  const Locator locate = s1002_on_60e1();
  // Tread and flange root on both sides of the jump at 4.99181.
  double before[2] = {0, 0};
  for (const double y : {4.9917, 4.9919}) {
    const Located located = locate.loaded(y, 0.0, LateralReference::axle, {}, {});
    std::vector<ContactZone> left;
    for (const ContactZone& zone : located.zones)
      if (zone.side == Side::left && zone.carries_load) left.push_back(zone);
    ASSERT_EQ(left.size(), 2u);
    EXPECT_EQ(left[0].zone, "tread");
    EXPECT_EQ(left[1].zone, "flange root");
    EXPECT_GT(left[0].wheel_y_mm, left[1].wheel_y_mm);
    for (std::size_t k = 0; k < 2; ++k) {
      EXPECT_GT(left[k].normal_force_N, 20e3);
      if (before[k] > 0.0) {
        EXPECT_NEAR(left[k].normal_force_N / before[k], 1.0, 1e-3);
      }
      before[k] = left[k].normal_force_N;
    }
  }
}

TEST(Loaded, NamesZonesByWhereTheyAre) {
  const Locator locate = s1002_on_60e1();
  const auto first = [&](double y) { return locate.loaded(y, 0.0, LateralReference::axle, {}, {}).zones.front().zone; };
  EXPECT_EQ(first(0.0), "tread");
  EXPECT_EQ(first(6.1), "flange root");
  EXPECT_EQ(first(6.3), "flange");
}

TEST(Loaded, CautionsPointOutWhatIsNotHertzian) {
  const Locator locate = s1002_on_60e1();
  // The gauge corner in the flange root: two arcs of 13 mm.
  const Located conforming = locate.loaded(6.255, 0.0, LateralReference::axle, {}, {});
  EXPECT_TRUE(has(conforming.zones.front().cautions, "half_space_doubtful"));
  // Two tread patches nearer than they are wide.
  const Located near = locate.loaded(0.226, 0.0, LateralReference::axle, {}, {});
  EXPECT_TRUE(has(near.zones.front().cautions, "patches_overlap"));
  // A good tread contact needs no word.
  EXPECT_TRUE(locate.loaded(3.0, 0.0, LateralReference::axle, {}, {}).zones.front().cautions.empty());
}

TEST(Loaded, FlatAndConformingShapesGetAFiniteAnswer) {
  // Cone on a flat rail, a hollow that fits its crown exactly, and a hollow tighter than the crown.
  const std::shared_ptr<const Profile> wheels[] = {graph(ProfileKind::wheel, slanted, 0.03, -30, 30),
                                                   graph(ProfileKind::wheel, arc, -300.0, -30, 30),
                                                   graph(ProfileKind::wheel, arc, -250.0, -30, 30)};
  const std::shared_ptr<const Profile> rails[] = {graph(ProfileKind::rail, arc, -1e7, -40, 40),
                                                  graph(ProfileKind::rail, arc, -300.0, -40, 40),
                                                  graph(ProfileKind::rail, arc, -300.0, -40, 40)};
  // The flat rail is inclined with the cone on it, so that it has a gauge side.
  const double inclination[] = {0.03, 0.0, 0.0};
  for (int k = 0; k < 3; ++k) {
    const Locator locate = bare(wheels[k], rails[k], inclination[k]);
    const Located located = locate.loaded(0.0, 0.0, LateralReference::axle, {}, {});
    ASSERT_FALSE(located.zones.empty()) << k;
    for (const ContactZone& zone : located.zones) {
      if (!zone.carries_load) continue;
      EXPECT_TRUE(std::isfinite(zone.ellipse->peak_pressure_MPa)) << k;
      EXPECT_GT(zone.ellipse->peak_pressure_MPa, 0.0) << k;
      EXPECT_FALSE(zone.cautions.empty()) << k;
    }
  }
}

TEST(Loaded, RefusesALoadThatIsNotOne) {
  const Locator locate = s1002_on_60e1();
  try {
    locate.loaded(0.0, 0.0, LateralReference::axle, {{100e3, -1.0}}, {});
    FAIL();
  } catch (const InputError& error) {
    EXPECT_EQ(error.code(), ErrorCode::out_of_range);
    EXPECT_NE(std::string(error.what()).find("right_N"), std::string::npos) << error.what();
  }
}

// On its flange alone, a wheel is held by a lateral force that nobody gave: said, with the number. Not while the tread
// still carries.
TEST(Loaded, FlangeAloneIsNotInLateralBalance) {
  const Locator locate = s1002_on_60e1();
  const auto cautioned = [](const Located& located) {
    std::vector<const ContactZone*> zones;
    for (const ContactZone& zone : located.zones)
      for (const Caution& caution : zone.cautions)
        if (caution.code == "lateral_not_balanced") zones.push_back(&zone);
    return zones;
  };
  const Located flange = locate.loaded(6.35, 0.0, LateralReference::axle, {}, {});
  const auto zones = cautioned(flange);
  ASSERT_EQ(zones.size(), 1u);
  EXPECT_EQ(zones.front()->side, Side::left);
  EXPECT_GT(zones.front()->contact_angle_rad, 1.2);
  // Q tan(delta), to the three digits of the sentence.
  const double needed = 100000.0 * std::tan(zones.front()->contact_angle_rad);
  const std::string& text = zones.front()->cautions.back().text;
  EXPECT_NE(text.find("lateral force of "), std::string::npos) << text;
  EXPECT_NEAR(std::stod(text.substr(text.find("lateral force of ") + 17)), needed, 0.005 * needed) << text;
  for (const double y : {0.0, 3.0, 5.0, 5.5})
    EXPECT_TRUE(cautioned(locate.loaded(y, 0.0, LateralReference::axle, {}, {})).empty()) << y;
}

}  // namespace
}  // namespace runband
