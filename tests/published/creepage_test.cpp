// Creepage against published kinematics and closed forms: Heathcote's ball in a groove, small-angle creepages of a
// wheelset, and the balance of a given torque.
#include <gtest/gtest.h>

#include <cmath>

#include "core/solve/solution.h"
#include "tests/locate/shared.h"

namespace runband {
namespace {

double quantity(const AnalysisResult& r, const std::string& name) {
  for (const Quantity& q : r.quantities)
    if (q.name == name) return q.value;
  ADD_FAILURE() << r.id << " gave no " << name << (r.cautions.empty() ? "" : ": " + r.cautions.front().text);
  return NAN;
}

/// Creepage of the left contact of a wheelset whose wheels, with grooves of radius `wheel`, run on crowns of `rail`.
struct Groove {
  Locator locator;
  Located located;
  Patch patch;
  AnalysisResult result;

  Groove(double wheel, double rail, int cells)
      : locator(test::bare(test::graph(ProfileKind::wheel, test::arc, -wheel, -20, 20),
                           test::graph(ProfileKind::rail, test::arc, -rail, -20, 20))),
        located(locator.loaded(0, 0, LateralReference::axle, {{20000, 20000}}, {})),
        patch(hertz_patch(*located.zones.front().ellipse, {PatchMethod::hertz, cells})) {
    const PatchContext context{false, located.zones.front(), patch,    {}, 0.3,           {},
                               {},    located.pose,          &locator, {}, &located.zones};
    result = installed_analyses().run(context, {"creepage"}, {}, {}).at("creepage");
  }
};

// H. L. Heathcote 1921, groove and ball exchanged (K. L. Johnson, Contact Mechanics, 1985, section 8.5; memory, confirmed by computation): under
// Hertz's pressure a sliding ball in its groove rolls purely along s = +-t b with t^3 - 3 t + 1 = 0, t = 2 sin 10 deg,
// and resists with 0.0805711989 mu b^2 / R^2 of its load, when the slip between is (s^2 - t^2 b^2) / (2 R^2).
TEST(PublishedCreepage, HeathcotesBallInAGroove) {
  const Groove g(61, 60, 256);
  const ContactZone& zone = g.located.zones.front();
  ASSERT_NEAR(zone.contact_angle_rad, 0, 1e-6);
  const double b = zone.ellipse->semi_axis_across_mm;
  std::vector<double> lines;
  for (const Mark& m : g.result.marks)
    if (m.name.starts_with("sliding_pure_rolling_")) lines.push_back(m.s_mm.front());
  ASSERT_EQ(lines.size(), 2u);
  constexpr double kStrips = 2e-3;  // 256 strips, and the arc is a parabola only near its apex
  EXPECT_NEAR(lines[0] / b, -2 * std::sin(10 * M_PI / 180), kStrips);
  EXPECT_NEAR(lines[1] / b, 2 * std::sin(10 * M_PI / 180), kStrips);
  // (1/60 + 1/61) / (4 r) in the place of 1 / (2 R^2).
  const double bow = (1 / 60.0 + 1 / 61.0) / (4 * zone.rolling_radius_mm);
  EXPECT_NEAR(quantity(g.result, "sliding_resistance") / (0.3 * 2 * bow * b * b * 0.0805711989), 1, 0.01);
}

// Between the lines the wheel slips forward, outside backward: the strip on the smallest radius is the slowest.
TEST(PublishedCreepage, BandsOfAGrooveLieBetweenItsLines) {
  const Groove g(61, 60, 128);
  std::vector<double> lines;
  for (const Mark& m : g.result.marks)
    if (m.name.starts_with("pure_rolling_")) lines.push_back(m.s_mm.front());
  ASSERT_EQ(lines.size(), 2u);  // rolling freely, as the torque says
  const Field& bands = g.result.fields.at(1);
  ASSERT_EQ(bands.name, "bands");
  for (int j = 0; j < bands.grid.ns; ++j)
    for (int i = 0; i < bands.grid.nx; ++i) {
      const double label = bands.values[static_cast<std::size_t>(j * bands.grid.nx + i)], s = bands.grid.s(j);
      const double pressed = g.patch.pressure.values[static_cast<std::size_t>(j * bands.grid.nx + i)];
      EXPECT_EQ(label, pressed <= 0 ? 0 : s > lines[0] && s < lines[1] ? 1 : 2) << s;
    }
  // Free: the mean of the slip under Hertz's pressure is nothing, so the lines lie at b / sqrt(5).
  const double b = g.located.zones.front().ellipse->semi_axis_across_mm;
  EXPECT_NEAR(lines[1] / b, 1 / std::sqrt(5.0), 2e-3);
}

Case pairing(const std::string& more) {
  return parse_case("[track]\ninclination = \"1:40\"\n" + more +
                        "[wheel]\nprofile = \"standard:S1002\"\n[rail]\nprofile = \"standard:60E1\"\n",
                    "test", ".");
}

const AnalysisResult& creepage_of(const Contact& k) { return k.analyses.at("creepage"); }

// Kinematics of a yawed wheelset off the middle of a curve (J. J. Kalker 1990, section 1.2; small angles): xi =
// 1 - y/R - r/r0, eta = -+psi / cos delta, phi = -sin delta / r0 +- cos delta / R.
TEST(PublishedCreepage, SmallAngleKinematics) {
  Case c = pairing("curve_radius_m = 500.0\n");
  c.state.lateral_mm = {-2.5};
  c.state.yaw_mrad = 2;
  c.analyses["creepage"]["traction"] = std::string("creepage");
  c.analyses["creepage"]["traction_creepage"] = 0.001;
  const Solution s = solve(c, {}, {&installed_analyses(), {"creepage"}});
  const RigidContact rigid = s.locator->rigid(-2.5, 0.002);
  const double mean = 0.5 * (rigid.touch[0].rolling_radius_mm + rigid.touch[1].rolling_radius_mm);
  for (const Contact& k : s.contacts) {
    if (!k.patch) continue;
    const double sign = side_sign(k.zone.side), angle = k.zone.contact_angle_rad, r = k.zone.rolling_radius_mm;
    EXPECT_NEAR(quantity(creepage_of(k), "longitudinal_creepage"),
                1 - k.zone.track_mm.y() / 500e3 - 0.999 * r / mean * std::cos(0.002), 2e-6);
    EXPECT_NEAR(quantity(creepage_of(k), "lateral_creepage"), -sign * 0.999 * 0.002 * r / mean / std::cos(angle), 5e-6);
    EXPECT_NEAR(quantity(creepage_of(k), "spin"),
                -0.999 * std::sin(angle - sign * s.pose.roll_rad) / mean + sign * std::cos(angle) / 500e3, 2e-8);
  }
}

// A given torque is met by the creep forces that the same law gives contact by contact, at their radii.
TEST(PublishedCreepage, TorqueIsTheMomentOfTheCreepForces) {
  for (const double torque : {-9000.0, 0.0, 4000.0, 20000.0}) {
    Case c = pairing("curve_radius_m = -800.0\n");
    c.state.lateral_mm = {1.5};
    c.analyses["creepage"]["traction"] = std::string("torque");
    c.analyses["creepage"]["axle_torque_Nm"] = torque;
    c.analyses["creepage"]["local_radius"] = false;
    c.analyses["slip_bands"]["method"] = std::string("shen_hedrick_elkins");
    const Solution s = solve(c, {}, {&installed_analyses(), {"slip_bands"}});
    double moment = 0;
    for (const Contact& k : s.contacts) {
      if (!k.patch) continue;
      moment += quantity(k.analyses.at("slip_bands"), "force_rolling") * k.zone.rolling_radius_mm * 1e-3;
      EXPECT_NEAR(quantity(creepage_of(k), "axle_torque"), torque, 1e-3);
      if (std::abs(torque) > 5000) {
        EXPECT_LT(quantity(creepage_of(k), "axle_creepage") * torque, 0);
      }
    }
    EXPECT_NEAR(moment, torque, 1.0);
  }
}

// More than friction holds: 0.3 of 200 kN at 0.46 m is 27.6 kN m.
TEST(PublishedCreepage, TorqueBeyondFrictionIsRefused) {
  Case c = pairing("");
  c.analyses["creepage"]["traction"] = std::string("torque");
  c.analyses["creepage"]["axle_torque_Nm"] = 28000.0;
  const Solution s = solve(c, {}, {&installed_analyses(), {"creepage"}});
  const AnalysisResult& r = creepage_of(s.contacts.front());
  ASSERT_FALSE(r.cautions.empty());
  EXPECT_NE(r.cautions.front().text.find("more than friction holds"), std::string::npos) << r.cautions.front().text;
  EXPECT_TRUE(r.fields.empty());
}

// A parameter that the chosen traction leaves aside is named, not swallowed.
TEST(PublishedCreepage, UnusedTractionIsNamed) {
  Case c = pairing("");
  c.analyses["creepage"]["traction_creepage"] = 0.01;
  const Solution s = solve(c, {}, {&installed_analyses(), {"creepage"}});
  ASSERT_FALSE(creepage_of(s.contacts.front()).cautions.empty());
  EXPECT_EQ(creepage_of(s.contacts.front()).cautions.front().code, "parameter_not_used");
}

}  // namespace
}  // namespace runband
