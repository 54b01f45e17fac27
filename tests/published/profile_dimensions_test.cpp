// Dimensions that the standards print, against what the shipped definitions measure.
#include <gtest/gtest.h>

#include <cmath>

#include "core/profile/profile.h"

namespace runband {
namespace {

double quantity(const Profile& profile, const std::string& name) {
  for (const Quantity& q : describe_profile(profile))
    if (q.name == name) return q.value;
  ADD_FAILURE() << "no quantity " << name;
  return std::nan("");
}

double z_at(const ProfileCurve& curve, double y) {
  double a = curve.t_begin(), b = curve.t_end();
  for (int step = 0; step < 80; ++step) {
    const double middle = 0.5 * (a + b);
    (curve.at(middle).y() < y ? a : b) = middle;
  }
  return curve.at(0.5 * (a + b)).z();
}

// EN 13715, profile S1002: flange height 28, thickness 32.5 mm (published); qR 10.8 (memory). The further digits follow
// from the standard's segments, computed independently in 25-digit arithmetic.
TEST(PublishedS1002, FlangeDimensions) {
  const auto wheel = load_profile("standard:S1002", ProfileKind::wheel);
  EXPECT_NEAR(quantity(*wheel, "flange_height"), 28.0, 1e-7);
  EXPECT_NEAR(quantity(*wheel, "flange_thickness"), 32.5, 1e-6);
  EXPECT_NEAR(quantity(*wheel, "flange_slope_dimension"), 10.7938162, 1e-6);
  EXPECT_NEAR(quantity(*wheel, "flange_angle"), 70.0, 1e-6);
  EXPECT_NEAR(quantity(*wheel, "hollow_depth"), 0.0, 1e-9);
  EXPECT_NEAR(quantity(*wheel, "width"), 130.0, 1e-9);
}

// Ordinates computed independently from the standard's segments; below the running circle is negative here.
TEST(PublishedS1002, Ordinates) {
  const auto wheel = load_profile("standard:S1002", ProfileKind::wheel);
  const double expected[][2] = {{-62.7647, -25.1492809863}, {-60.0, -26.9087121146},  {-55.0, -28.0},
                                {-50.0, -26.9087121146},    {-45.0, -23.5377056654},  {-30.0, -3.92157127},
                                {-20.0, -1.59656302645},    {-10.0, -0.522759001023}, {0.0, 0.0},
                                {10.0, 0.2084008843},       {20.0, 0.311764595256},   {30.0, 0.646229901463},
                                {60.0, 2.63567638}};
  for (const auto& [y, z] : expected) {
    const double tolerance = y == -62.7647 ? 1e-5 : 1e-8;  // the joint's abscissa is rounded to four decimals there
    EXPECT_NEAR(z_at(*wheel->curve, y), z, tolerance) << "y = " << y;
  }
  EXPECT_NEAR(wheel->curve->at(0.0).z(), -9.519259302, 1e-9);
  EXPECT_NEAR(quantity(*wheel, "tread_slope"), 0.03358537058, 1e-10);
}

// EN 13674-1: head width 72 mm, which the tangent chain R300, R80, R13, 1:20 meets at 14.3 mm below the top.
TEST(Published60E1, HeadDimensions) {
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  EXPECT_NEAR(quantity(*rail, "head_width_14_3"), 72.0, 4e-4);
  EXPECT_NEAR(quantity(*rail, "gauge_point_y"), -35.9813349, 1e-7);
  EXPECT_NEAR(quantity(*rail, "crown_radius"), 300.0, 1e-5);
  EXPECT_NEAR(quantity(*rail, "top_height"), 0.0, 1e-12);
}

// Joints of the tangent chain of 60E1, computed independently with mpmath.
TEST(Published60E1, JointsOfTheTangentChain) {
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  const double expected[][3] = {{10.228, 0.174404001259, 0.0341131649},
                                {26.0265, 2.30252406118, 0.2380453333},
                                {35.9998108221, 14.2999580245, 20.0}};
  const std::vector<double> breaks = rail->curve->breaks();
  ASSERT_EQ(breaks.size(), 9U);  // four pieces to each side
  for (std::size_t k = 0; k < 3; ++k) {
    const CurvePoint joint = rail->curve->at(breaks[5 + k]);
    EXPECT_NEAR(joint.y(), expected[k][0], 1e-9);
    EXPECT_NEAR(-joint.z(), expected[k][1], 1e-9);
    EXPECT_NEAR(-joint.slope(), expected[k][2], 1e-7 * expected[k][2] + 1e-9);
    const CurvePoint other = rail->curve->at(breaks[3 - k]);
    EXPECT_NEAR(other.y(), -expected[k][0], 1e-9);
    EXPECT_NEAR(-other.z(), expected[k][1], 1e-9);
  }
}

// EN 13674-1: head widths 70 mm at 14.1 mm (54E1) and 67 mm at 14 mm (49E1) below the top (memory).
TEST(PublishedSmallerRails, HeadWidths) {
  const auto rail54 = load_profile("standard:54E1", ProfileKind::rail);
  const auto rail49 = load_profile("standard:49E1", ProfileKind::rail);
  const auto half_width = [](const Profile& rail, double depth) {
    double y = 0.0;
    for (const CurvePoint& p : sample_curve(*rail.curve, 1e-6, 0.01))
      if (p.y() > 0.0 && p.z() > -depth) y = std::max(y, p.y());
    return y;
  };
  EXPECT_NEAR(half_width(*rail54, 14.1), 35.0, 1e-3);
  EXPECT_NEAR(half_width(*rail49, 14.0), 33.5, 1e-3);
  EXPECT_NEAR(quantity(*rail49, "head_width_14"), 67.0, 3e-4);
}

// "A 1:20 taper makes the tread's outer diameter about 6 mm less than its inner one" (common practice, no source).
TEST(ConedWheel, TaperOverTheTread) {
  const auto wheel = load_profile("standard:coned_1_20", ProfileKind::wheel);
  EXPECT_NEAR(2.0 * (z_at(*wheel->curve, 40.0) - z_at(*wheel->curve, -20.0)), 6.0, 1e-9);
  EXPECT_NEAR(quantity(*wheel, "flange_thickness"), 32.5, 0.02);
}

}  // namespace
}  // namespace runband
