// Figures read off profiles whose answer is known from how they were made.
#include <gtest/gtest.h>

#include <algorithm>

#include "core/base/error.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

double quantity(const std::vector<Quantity>& quantities, const std::string& name) {
  for (const Quantity& q : quantities)
    if (q.name == name) return q.value;
  return std::nan("");
}

// A wheel whose tread is lowered (material missing) by `depth` around y = 0.
std::shared_ptr<const Profile> hollow_wheel(double depth) {
  std::vector<Vec2> points = sampled(*s1002()->curve, 0.2);
  for (Vec2& p : points) p.y() += depth * std::exp(-std::pow((p.x() - 3.0) / 12.0, 2));
  return profile_from_points(points, ProfileKind::wheel, 0.0, "hollow");
}

TEST(WearAgainst, IsZeroAgainstItself) {
  for (const auto& profile : {s1002(), rail60()})
    for (const double w : wear_against(*profile, *profile).y) EXPECT_NEAR(w, 0.0, 1e-9);
}

TEST(WearAgainst, IsPositiveWhereMaterialIsMissing) {
  const Curve wear = wear_against(*hollow_wheel(2.0), *s1002());
  double deepest = 0.0, at = 0.0;
  for (std::size_t i = 0; i < wear.x.size(); ++i)
    if (wear.y[i] > deepest) {
      deepest = wear.y[i];
      at = wear.x[i];
    }
  EXPECT_NEAR(deepest, 2.0, 5e-3);
  EXPECT_NEAR(at, 3.0, 1.0);
  std::vector<Vec2> points = sampled(*rail60()->curve, 0.2);
  for (Vec2& p : points) p.y() -= 1.0 * std::exp(-std::pow(p.x() / 15.0, 2));
  const auto rail = profile_from_points(points, ProfileKind::rail, 0.0, "worn rail");
  const std::vector<Quantity> figures = describe_profile(*rail, rail60().get());
  EXPECT_NEAR(quantity(figures, "wear_max"), 1.0, 5e-3);
  // Integral of the bell: depth * width * sqrt(pi).
  EXPECT_NEAR(quantity(figures, "wear_area"), 15.0 * std::sqrt(M_PI), 0.3);
  EXPECT_NEAR(quantity(figures, "top_height"), -0.84, 0.15);
}

TEST(WearAgainst, RefusesAnotherKind) { EXPECT_THROW(wear_against(*s1002(), *rail60()), InputError); }

TEST(DescribeWheel, HollowDepthIsTheDropUnderAStraightEdge) {
  // The tread falls 0.0336 per mm at y = 0 and reaches its least height beyond the hollow; straight from the numbers:
  const auto wheel = hollow_wheel(3.0);
  double top = -1e9, low_beyond = 1e9;
  for (double y = -20.0; y <= 60.0; y += 0.01)
    top = std::max(top, wheel->curve->at(parameter_at_y(*wheel->curve, y)).z());
  for (double y = 3.0; y <= 60.0; y += 0.05)
    low_beyond = std::min(low_beyond, wheel->curve->at(parameter_at_y(*wheel->curve, y)).z());
  const double expected = [&] {
    double deepest = 0.0, low = 1e9;
    for (double y = 60.0; y >= -20.0; y -= 0.05) {
      const double z = wheel->curve->at(parameter_at_y(*wheel->curve, y)).z();
      low = std::min(low, z);
      deepest = std::max(deepest, z - low);
    }
    return deepest;
  }();
  EXPECT_GT(expected, 1.5);
  EXPECT_NEAR(quantity(describe_profile(*wheel), "hollow_depth"), expected, 1e-3);
}

TEST(DescribeWheel, WornFlangeIsThinnerByWhatWasTakenOff) {
  std::vector<Vec2> points = sampled(*s1002()->curve, 0.2);
  // The flank moved towards the flange back by 1.5 mm at the gauge level, fading towards tip and tread.
  for (Vec2& p : points)
    if (p.x() > -55.0) p.x() -= 1.5 * std::exp(-std::pow((p.y() + 10.0) / 4.0, 2));
  const auto wheel = profile_from_points(points, ProfileKind::wheel, 0.0, "thin");
  EXPECT_NEAR(quantity(describe_profile(*wheel), "flange_thickness"), 31.0, 5e-3);
  EXPECT_NEAR(quantity(describe_profile(*wheel), "flange_slope_dimension"), 10.794 - 1.5, 2e-2);
}

TEST(DescribeProfile, EveryFigureHasNameTitleAndUnit) {
  for (const auto& profile : {s1002(), rail60()})
    for (const Quantity& q : describe_profile(*profile, profile.get())) {
      EXPECT_FALSE(q.name.empty());
      EXPECT_FALSE(q.title.empty());
      EXPECT_FALSE(q.unit.empty());
      EXPECT_TRUE(std::isfinite(q.value)) << q.name;
    }
}

}  // namespace
}  // namespace runband
