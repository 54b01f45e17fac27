// Identities of Hertz's solution, and what it says to bad input.
#include "core/hertz/hertz.h"

#include <gtest/gtest.h>

#include <cmath>
#include <limits>
#include <numbers>
#include <string>

#include "core/base/error.h"

namespace runband {
namespace {

// A few roundings through cube roots.
constexpr double kRounding = 4e-15;

const MaterialPair kSteel;

double relative(double value, double reference) { return std::abs(value / reference - 1.0); }

TEST(Hertz, EqualCurvaturesGiveACircle) {
  // Johnson 1985, eqs 4.22-4.24: a^3 = 3 N R / (4 E*), approach a^2 / R, p0 = 3 N / (2 pi a^2).
  const HertzEllipse e = hertz_ellipse(1.0 / 300.0, 1.0 / 300.0, 8e4, kSteel);
  const double a = std::cbrt(0.75 * 8e4 * 300.0 / kSteel.contact_modulus_MPa());
  EXPECT_LT(relative(e.semi_axis_rolling_mm, a), kRounding);
  EXPECT_LT(relative(e.semi_axis_across_mm, a), kRounding);
  EXPECT_LT(relative(e.approach_mm, a * a / 300.0), kRounding);
  EXPECT_LT(relative(e.peak_pressure_MPa, 1.5 * 8e4 / (std::numbers::pi * a * a)), kRounding);
  EXPECT_DOUBLE_EQ(hertz_coefficients(1.0).m, 1.0);
  EXPECT_DOUBLE_EQ(hertz_coefficients(1.0).r, 1.0);
}

TEST(Hertz, EightfoldForceDoublesAxesAndPressureAndQuadruplesApproach) {
  for (const double across : {1e-6, 1.0 / 300.0, 1.0 / 13.0, 5.0}) {
    const HertzEllipse one = hertz_ellipse(1.0 / 460.0, across, 1e4, kSteel);
    const HertzEllipse eight = hertz_ellipse(1.0 / 460.0, across, 8e4, kSteel);
    EXPECT_LT(relative(eight.semi_axis_rolling_mm, 2.0 * one.semi_axis_rolling_mm), kRounding);
    EXPECT_LT(relative(eight.semi_axis_across_mm, 2.0 * one.semi_axis_across_mm), kRounding);
    EXPECT_LT(relative(eight.peak_pressure_MPa, 2.0 * one.peak_pressure_MPa), kRounding);
    EXPECT_LT(relative(eight.approach_mm, 4.0 * one.approach_mm), kRounding);
  }
}

TEST(Hertz, ExchangingTheDirectionsExchangesTheAxes) {
  for (const double across : {1e-6, 1.0 / 460.0, 1.0 / 300.0, 1.0 / 13.0}) {
    const HertzEllipse e = hertz_ellipse(1.0 / 460.0, across, 1e5, kSteel);
    const HertzEllipse f = hertz_ellipse(across, 1.0 / 460.0, 1e5, kSteel);
    EXPECT_EQ(e.semi_axis_rolling_mm, f.semi_axis_across_mm);
    EXPECT_EQ(e.semi_axis_across_mm, f.semi_axis_rolling_mm);
    EXPECT_EQ(e.approach_mm, f.approach_mm);
    EXPECT_EQ(e.peak_pressure_MPa, f.peak_pressure_MPa);
  }
}

TEST(Hertz, TheLongerAxisLiesWhereTheCurvatureIsSmaller) {
  const HertzEllipse e = hertz_ellipse(1.0 / 460.0, 1.0 / 80.0, 1e5, kSteel);
  EXPECT_GT(e.semi_axis_rolling_mm, e.semi_axis_across_mm);
}

TEST(Hertz, PressureIntegratesToTheForce) {
  const HertzEllipse e = hertz_ellipse(1.0 / 460.0, 1.0 / 80.0, 1e5, kSteel);
  // Volume of a half ellipsoid; and its profile along both axes.
  EXPECT_LT(relative(2.0 / 3.0 * e.area_mm2() * e.peak_pressure_MPa, 1e5), kRounding);
  EXPECT_DOUBLE_EQ(e.pressure_MPa(0.0, 0.0), e.peak_pressure_MPa);
  EXPECT_LT(relative(e.pressure_MPa(0.6 * e.semi_axis_rolling_mm, 0.0), 0.8 * e.peak_pressure_MPa), kRounding);
  EXPECT_LT(relative(e.pressure_MPa(0.0, -0.8 * e.semi_axis_across_mm), 0.6 * e.peak_pressure_MPa), kRounding);
  EXPECT_EQ(e.pressure_MPa(0.8 * e.semi_axis_rolling_mm, 0.7 * e.semi_axis_across_mm), 0.0);
  EXPECT_EQ(e.pressure_MPa(1e6, 0.0), 0.0);
}

TEST(Hertz, ForceIsTheInverseOfApproach) {
  for (const double across : {1e-8, 1e-4, 1.0 / 300.0, 1.0, 1e4}) {
    for (const double force : {1e-3, 1.0, 1e5, 1e8}) {
      const HertzEllipse e = hertz_ellipse(1.0 / 460.0, across, force, kSteel);
      EXPECT_LT(relative(hertz_force_N(1.0 / 460.0, across, e.approach_mm, kSteel), force), kRounding);
    }
  }
}

TEST(Hertz, StiffnessIsTheDerivativeOfForceByApproach) {
  const HertzEllipse e = hertz_ellipse(1.0 / 460.0, 1.0 / 80.0, 1e5, kSteel);
  const auto force = [](double approach) { return hertz_force_N(1.0 / 460.0, 1.0 / 80.0, approach, kSteel); };
  const double h = 1e-4 * e.approach_mm;
  // Central difference, error h^2 / 24 of the third derivative: about 1e-9 relative.
  const double derivative = (force(e.approach_mm + h) - force(e.approach_mm - h)) / (2.0 * h);
  EXPECT_LT(relative(e.stiffness_N_per_mm, derivative), 1e-8);
}

TEST(Hertz, SoftnessOfTheTwoBodiesAdds) {
  // A rigid counterpart halves the compliance of two like bodies: the same approach needs twice the force.
  MaterialPair rigid_wheel;
  rigid_wheel.wheel.youngs_modulus_MPa = 1e30;
  const double alike = hertz_force_N(0.01, 0.02, 0.1, kSteel);
  EXPECT_LT(relative(hertz_force_N(0.01, 0.02, 0.1, rigid_wheel), 2.0 * alike), kRounding);
}

TEST(Hertz, RatiosBeyondTheFittedRangeStillSolve) {
  // Thin ellipses: A/B = k^2 (ln(4/k) - 1) + O(k^4) (Johnson 1985, section 4.2, from the logarithmic limit of K).
  for (const double ratio : {1e-9, 1e-12, 1e-16, 1e-20}) {
    const double k = hertz_coefficients(ratio).axis_ratio;
    EXPECT_LT(relative(k * k * (std::log(4.0 / k) - 1.0), ratio), 1e-14 + 20.0 * k * k) << ratio;
  }
}

std::string complaint(double rolling, double across, double force, const MaterialPair& material = kSteel) {
  try {
    hertz_ellipse(rolling, across, force, material);
  } catch (const InputError& error) {
    EXPECT_EQ(error.code(), ErrorCode::out_of_range);
    EXPECT_EQ(error.exit_status(), 2);
    EXPECT_FALSE(error.cure().empty());
    return error.message();
  }
  return "accepted";
}

TEST(Hertz, BadInputIsNamed) {
  constexpr double kNan = std::numeric_limits<double>::quiet_NaN();
  constexpr double kInf = std::numeric_limits<double>::infinity();
  EXPECT_NE(complaint(0.0, 0.01, 1e5).find("curvature_rolling_per_mm is 0"), std::string::npos);
  EXPECT_NE(complaint(-0.01, 0.01, 1e5).find("curvature_rolling_per_mm is -0.01 1/mm"), std::string::npos);
  EXPECT_NE(complaint(0.01, kNan, 1e5).find("curvature_across_per_mm is nan"), std::string::npos);
  EXPECT_NE(complaint(0.01, kInf, 1e5).find("curvature_across_per_mm"), std::string::npos);
  EXPECT_NE(complaint(0.01, 0.01, 0.0).find("normal_force_N is 0"), std::string::npos);
  EXPECT_NE(complaint(0.01, 0.01, -5.0).find("normal_force_N is -5 N"), std::string::npos);
  EXPECT_NE(complaint(1e-300, 1.0, 1e5).find("ratio"), std::string::npos);
  MaterialPair jelly;
  jelly.rail.poisson_ratio = 0.6;
  EXPECT_NE(complaint(0.01, 0.01, 1e5, jelly).find("rail: poisson_ratio is 0.6"), std::string::npos);
  jelly = {};
  jelly.wheel.youngs_modulus_MPa = -1.0;
  EXPECT_NE(complaint(0.01, 0.01, 1e5, jelly).find("wheel: youngs_modulus_MPa is -1"), std::string::npos);
  EXPECT_THROW(hertz_force_N(0.01, 0.01, 0.0, kSteel), InputError);
  EXPECT_THROW(hertz_force_N(0.01, 0.01, kNan, kSteel), InputError);
  EXPECT_THROW(hertz_coefficients(0.0), InputError);
  EXPECT_THROW(hertz_coefficients(1.5), InputError);
  EXPECT_THROW(hertz_coefficients(kNan), InputError);
}

}  // namespace
}  // namespace runband
