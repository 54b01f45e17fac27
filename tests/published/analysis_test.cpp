// The analyses against published theory and independent computations, through solve().
#include <gtest/gtest.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/solve/solution.h"

namespace runband {
namespace {

double quantity(const AnalysisResult& r, const std::string& name) {
  for (const Quantity& q : r.quantities)
    if (q.name == name) return q.value;
  ADD_FAILURE() << r.id << " gave no " << name << (r.cautions.empty() ? "" : ": " + r.cautions.front().text);
  return NAN;
}

const Curve& curve(const AnalysisResult& r, const std::string& name) {
  for (const Curve& c : r.curves)
    if (c.name == name) return c;
  throw std::runtime_error(r.id + " gave no " + name + (r.cautions.empty() ? "" : ": " + r.cautions.front().text));
}

double at(const Curve& c, double x) {
  for (std::size_t k = 0; k < c.x.size(); ++k)
    if (std::abs(c.x[k] - x) < 1e-9) return c.y[k];
  ADD_FAILURE() << c.name << " has no point at " << x;
  return NAN;
}

Case pairing(const std::string& inclination, const std::string& reference = "axle") {
  return parse_case("[track]\ninclination = \"" + inclination +
                        "\"\n[wheel]\nprofile = \"standard:S1002\"\n[rail]\nprofile = "
                        "\"standard:60E1\"\n[state]\nlateral_reference = \"" +
                        reference + "\"\n",
                    "test", ".");
}

AnalysisResult steering(const Case& c) {
  return solve(c, {}, {&installed_analyses(), {"steering"}}).analyses.at("steering");
}

// S1002 on 60E1, gauge 1435, back-to-back 1360, radius 460: two independent computations (rigid contact; brute-force
// sampling in 3D), y at the axle and at rail level.
TEST(PublishedSteering, EquivalentConicityOfS1002On60E1) {
  const double at_1_40[] = {.35635, .22126, .17714, .15878, .16525, .29243};
  const double at_1_20[] = {.00911, .00925, .00948, .00980, .01022, .01089};
  const double rail_level[] = {.35428, .21915, .17469, .15565, .14967, .26849};
  const AnalysisResult forty = steering(pairing("1:40")), twenty = steering(pairing("1:20")),
                       rail = steering(pairing("1:40", "rail"));
  for (int a = 1; a <= 6; ++a) {
    EXPECT_NEAR(at(curve(forty, "equivalent_conicity"), a), at_1_40[a - 1], 1e-3) << a;
    EXPECT_NEAR(at(curve(twenty, "equivalent_conicity"), a), at_1_20[a - 1], 1e-3) << a;
    EXPECT_NEAR(at(curve(rail, "equivalent_conicity"), a), rail_level[a - 1], 1e-3) << a;
  }
  // Linear regression, the first computation's (three digits).
  const double regression[] = {.40, .247, .194, .170};
  for (int a = 1; a <= 4; ++a) EXPECT_NEAR(at(curve(forty, "conicity_by_regression"), a), regression[a - 1], 5e-3) << a;
}

// J. Klingel 1883: the wavelength of the equivalent cone, lambda = 2 pi sqrt(e r0 / (2 tan gamma)).
TEST(PublishedSteering, WavelengthIsKlingelsOfTheEquivalentCone) {
  const AnalysisResult r = steering(pairing("1:40"));
  const double gamma = at(curve(r, "equivalent_conicity"), 3), lambda = at(curve(r, "kinematic_wavelength"), 3);
  EXPECT_NEAR(lambda, 2 * std::numbers::pi * std::sqrt(1.5 * 0.46 / (2 * gamma)), 1e-9);
  EXPECT_NEAR(quantity(r, "frequency_at_3_mm"), 20 / lambda, 1e-9);
}

// J. Klingel 1883: lambda = 2 pi sqrt(r0 e / (2 tan gamma)); r0 0.46, e 1.5 and the slope 0.05 give 16.5045775914 m. The
// cone on a crown of 300 mm acts as one of slope gamma / (1 - gamma (r0 + R) / s0) once the wheelset rolls with it
// (independent computation: 0.0526).
TEST(PublishedSteering, ConeHasKlingelsWavelengthAtEveryAmplitude) {
  Case c = pairing("1:20");
  for (auto& wheel : c.wheels) wheel.profile = "standard:coned_1_20";
  const AnalysisResult r = steering(c);
  const Curve& gamma = curve(r, "equivalent_conicity");
  const Curve& lambda = curve(r, "kinematic_wavelength");
  for (int a = 1; a <= 4; ++a) {
    EXPECT_NEAR(at(gamma, a), 0.05 / (1 - 0.05 * 760 / 750.0), 1e-4) << a;
    EXPECT_NEAR(at(lambda, a), 16.5045775914 * std::sqrt(0.05 / at(gamma, a)), 1e-6) << a;
    EXPECT_NEAR(at(curve(r, "kinematic_frequency"), a), c.state.speed_m_s / at(lambda, a), 1e-9) << a;
  }
}

// F. J. Redtenbacher 1855: R = r0 s / (gamma y), with r0 0.46, s 0.75, slope 0.05 and y 6 mm: 1150 m.
TEST(PublishedSteering, ConeRollsRedtenbachersCurve) {
  Case c = pairing("1:20");
  for (auto& wheel : c.wheels) wheel.profile = "standard:coned_1_20";
  c.state.lateral_mm = {-6.0};
  c.track.curve_radius_m = 1150;
  const AnalysisResult r = steering(c);
  const double slope = -quantity(r, "radius_difference") / (2 * 6.0);
  EXPECT_NEAR(slope, 0.05 / (1 - 0.05 * 760 / 750.0), 2e-4);
  EXPECT_NEAR(quantity(r, "free_rolling_curve"), 1150 * 0.05 / slope, 1e-6);
  // The same curve asks for the difference of the cone without roll: 2 gamma y.
  EXPECT_NEAR(quantity(r, "radius_difference_needed"), -2 * 0.05 * 6, 1e-12);
  EXPECT_NEAR(quantity(r, "lateral_for_needed"), -6.0 * 0.05 / slope, 1e-3);
  EXPECT_LE(quantity(r, "radius_difference_available"), quantity(r, "radius_difference"));
}

// Balance of a body in a canted curve (statics): V^2/R cos - g sin; 20 m/s, 400 m, cant 150 mm over 1500 mm.
TEST(PublishedSteering, CantLeavesTheUnbalancedAcceleration) {
  Case c = pairing("1:40");
  c.track.curve_radius_m = -400;
  c.track.cant_mm = 150;
  const AnalysisResult r = steering(c);
  const double unbalanced = 1.0 * std::sqrt(1 - 0.01) - 9.80665 * 0.1;
  EXPECT_NEAR(quantity(r, "unbalanced_acceleration"), unbalanced, 1e-12);
  EXPECT_NEAR(quantity(r, "cant_deficiency"), 1500 * unbalanced / 9.80665, 1e-9);
  EXPECT_NEAR(quantity(r, "outer_wheel_load") + quantity(r, "inner_wheel_load"), 200000, 1e-6);
  EXPECT_NEAR(quantity(r, "outer_wheel_load") - quantity(r, "inner_wheel_load"),
              2 * 200000 * unbalanced / 9.80665 * 1500 / 1500, 1e-6);
  c.state.speed_m_s = quantity(r, "balancing_speed");
  EXPECT_NEAR(quantity(steering(c), "unbalanced_acceleration"), 0, 1e-12);
}

Case bench(double nu, double rolling, double across, const std::string& creepage, double friction = 0.3) {
  return parse_case("[bench]\ncurvature_rolling_per_mm = " + std::to_string(rolling) +
                        "\ncurvature_across_per_mm = " + std::to_string(across) +
                        "\nnormal_force_N = 80000\n[material]\npoisson_ratio = " + std::to_string(nu) +
                        "\n[friction]\ncoefficient = " + std::to_string(friction) + "\n[creepage]\n" + creepage,
                    "test", ".");
}

// Kalker's coefficients of the circle, nu 0.25: exact values C11 4.11282, C22 3.66830, C23 1.46611, C33 1.18430
// (spectral solution; J. J. Kalker 1990, table E3: 4.12, 3.67, 1.47, 1.19, memory).
TEST(PublishedSlipBands, SmallCreepageGivesKalkersForcesByEveryMethod) {
  for (const std::string method : {"half_space", "simplified", "shen_hedrick_elkins"}) {
    Case c = bench(0.25, 0.002, 0.002, "longitudinal = 1e-7\n");
    c.analyses["slip_bands"]["method"] = method;
    c.patch.cells = 48;
    const Solution s = solve(c);
    const HertzEllipse& e = *s.contacts[0].zone.ellipse;
    const double g = c.material.wheel.shear_modulus_MPa() * e.semi_axis_rolling_mm * e.semi_axis_across_mm;
    EXPECT_NEAR(quantity(s.contacts[0].analyses.at("slip_bands"), "force_rolling") / (-g * 4.11282 * 1e-7), 1.0, 0.02)
        << method;
    Case l = bench(0.25, 0.002, 0.002, "lateral = 1e-7\n");
    l.analyses["slip_bands"]["method"] = method;
    l.patch.cells = 48;
    EXPECT_NEAR(quantity(solve(l).contacts[0].analyses.at("slip_bands"), "force_across") / (-g * 3.66830 * 1e-7), 1.0,
                0.02)
        << method;
    Case spin = bench(0.25, 0.002, 0.002, "spin_per_mm = 1e-8\n");
    spin.analyses["slip_bands"]["method"] = method;
    spin.patch.cells = 48;
    const double c_mm = std::sqrt(e.semi_axis_rolling_mm * e.semi_axis_across_mm);
    EXPECT_NEAR(
        quantity(solve(spin).contacts[0].analyses.at("slip_bands"), "force_across") / (-g * c_mm * 1.46611 * 1e-8), 1.0,
        0.02)
        << method;
  }
}

TEST(PublishedSlipBands, FullSlipUsesAllFriction) {
  for (const std::string method : {"half_space", "simplified", "vermeulen_johnson", "shen_hedrick_elkins"}) {
    Case c = bench(0.28, 0.002, 0.003, "longitudinal = 0.05\n");
    c.analyses["slip_bands"]["method"] = method;
    const auto r = solve(c).contacts[0].analyses.at("slip_bands");
    EXPECT_NEAR(quantity(r, "saturation"), 1.0, 1e-3) << method;
    EXPECT_LT(quantity(r, "force_rolling"), 0) << method;  // the wheel slips forward, the rail pulls it back
  }
}

// Y/Q = (tan d - mu) / (1 + mu tan d), M. J. Nadal 1908; EN 14363's 1.2 belongs to 70 degrees and 0.36 (memory).
TEST(PublishedFlangeClimb, NadalsTable) {
  const struct {
    double friction;
    double at_60, at_70, at_75;
  } rows[] = {{0.1, 1.3911044, 2.0768638, 2.6449442},
              {0.3, 0.94237723, 1.3416399, 1.6191858},
              {0.36, 0.84509914, 1.2002851, 1.4388717},
              {0.5, 0.66025404, 0.9468091, 1.1277118}};
  for (const auto& row : rows) {
    const auto r = solve(bench(0.28, 0.002, 0.003, "", row.friction)).contacts[0].analyses.at("flange_climb");
    const Curve& c = curve(r, "nadal_limit_over_angle");
    EXPECT_NEAR(at(c, 60), row.at_60, 1e-7);
    EXPECT_NEAR(at(c, 70), row.at_70, 1e-7);
    EXPECT_NEAR(at(c, 75), row.at_75, 1e-7);
    EXPECT_FALSE(r.cautions.empty());
  }
}

// The same table by friction, at the contact angle of a wheel on its flange: 70 degrees of S1002.
TEST(PublishedFlangeClimb, FrictionSensitivityOnTheFlange) {
  Case c = pairing("1:40");
  c.state.lateral_mm = {6.35};
  c.friction = 0.3;
  const Solution s = solve(c, {}, {&installed_analyses(), {"flange_climb"}});
  const auto flange = std::find_if(s.contacts.begin(), s.contacts.end(),
                                   [](const Contact& k) { return k.patch && k.zone.contact_angle_rad > 1.0; });
  ASSERT_NE(flange, s.contacts.end());
  const auto& r = flange->analyses.at("flange_climb");
  // The flank of 70 degrees leans with the wheelset's roll.
  const double t = std::tan(flange->zone.contact_angle_rad);
  EXPECT_NEAR(flange->zone.contact_angle_rad, 70 * std::numbers::pi / 180 + s.pose.roll_rad, 1e-4);
  for (const double friction : {0.1, 0.2, 0.3, 0.4, 0.5, 0.6})
    EXPECT_NEAR(at(curve(r, "nadal_limit_over_friction"), friction), (t - friction) / (1 + friction * t), 1e-12);
  EXPECT_NEAR(quantity(r, "nadal_limit"), 1.3416399, 0.02);
  EXPECT_NEAR(quantity(r, "nadal_limit_low_friction"), 1.644069, 0.03);
  EXPECT_NEAR(quantity(r, "nadal_limit_high_friction"), 1.1183838, 0.02);
  EXPECT_NEAR(quantity(r, "nadal_limit_per_friction"),
              ((t - 0.3001) / (1 + 0.3001 * t) - (t - 0.2999) / (1 + 0.2999 * t)) / 2e-4, 1e-6);
  EXPECT_NEAR(quantity(r, "climb_limit_used"), quantity(r, "lateral_over_vertical") / quantity(r, "nadal_limit"),
              1e-12);
  EXPECT_GT(quantity(r, "climb_limit_used_high_friction"), quantity(r, "climb_limit_used_low_friction"));
}

TEST(PublishedCreepage, SignsAndSizesOfACentredWheelset) {
  const Solution s = solve(pairing("1:40"));
  for (const Contact& k : s.contacts) {
    if (!k.patch) continue;
    const auto& r = k.analyses.at("creepage");
    EXPECT_NEAR(quantity(r, "longitudinal_creepage"), 0, 1e-4);
    EXPECT_NEAR(quantity(r, "lateral_creepage"), 0, 1e-12);
    // Spin of a coned wheel: -sin(contact angle) over the rolling radius (common practice, no source).
    EXPECT_NEAR(quantity(r, "spin"), -std::sin(k.zone.contact_angle_rad) / 460.0, 1e-7);
  }
}

// Heathcote 1921: a ball in a conforming groove rolls purely along two lines, forward between them and backward outside.
TEST(PublishedCreepage, RigidSlipOfAConformingGrooveHasTwoLinesOfPureRolling) {
  Case c = pairing("1:40");
  c.state.lateral_mm = {-3.0};
  const Solution s = solve(c);
  for (const Contact& k : s.contacts) {
    if (!k.patch) continue;
    const Field& slip = k.analyses.at("creepage").fields.front();
    ASSERT_EQ(slip.values.size(), static_cast<std::size_t>(2 * slip.grid.cells()));
    for (const Mark& m : k.analyses.at("creepage").marks) {
      if (!m.name.starts_with("pure_rolling_")) continue;
      // On the line the interpolated slip vanishes: neighbours differ in sign or are tiny.
      const int j = static_cast<int>(std::floor((m.s_mm[0] - slip.grid.s0_mm) / slip.grid.ds_mm));
      const double below = slip.values[static_cast<std::size_t>(2 * j * slip.grid.nx)],
                   above = slip.values[static_cast<std::size_t>(2 * (j + 1) * slip.grid.nx)];
      EXPECT_LE(below * above, 1e-18);
    }
  }
}

}  // namespace
}  // namespace runband
