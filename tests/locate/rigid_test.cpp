// Properties of rigid contact that hold for any pairing.
#include <gtest/gtest.h>

#include <random>

#include "core/base/error.h"
#include "shared.h"

namespace runband {
namespace {

using namespace test;

constexpr double kMirror_mm = 1e-8;

std::mt19937& sequence() {
  static std::mt19937 engine(20240607);  // a fixed sequence: the same cases in every run
  return engine;
}
double draw(double low, double high) { return std::uniform_real_distribution<double>(low, high)(sequence()); }

void expect_mirrored(const RigidTouch& a, const RigidTouch& b, const std::string& where) {
  EXPECT_NEAR(a.wheel_y_mm, b.wheel_y_mm, 1e-5) << where;
  EXPECT_NEAR(a.rolling_radius_mm, b.rolling_radius_mm, 1e-6) << where;
  EXPECT_NEAR(a.contact_angle_rad, b.contact_angle_rad, 1e-6) << where;
  EXPECT_NEAR(a.track_mm.x(), b.track_mm.x(), 1e-4) << where;
  EXPECT_NEAR(a.track_mm.y(), -b.track_mm.y(), 1e-5) << where;
}

TEST(Rigid, MirroredPositionGivesMirroredContact) {
  const Locator locate = s1002_on_60e1();
  for (int k = 0; k < 60; ++k) {
    const double y = draw(-6.1, 6.1), yaw = draw(-0.02, 0.02);
    for (const LateralReference reference : {LateralReference::axle, LateralReference::rail}) {
      const std::string where = "y " + std::to_string(y) + " yaw " + std::to_string(yaw);
      const RigidContact a = locate.rigid(y, yaw, reference), b = locate.rigid(-y, -yaw, reference);
      EXPECT_NEAR(a.pose.roll_rad, -b.pose.roll_rad, 1e-11) << where;
      EXPECT_NEAR(a.pose.height_mm, b.pose.height_mm, kMirror_mm) << where;
      EXPECT_NEAR(radius_difference(a), -radius_difference(b), 1e-6) << where;
      expect_mirrored(a.touch[0], b.touch[1], where);
      expect_mirrored(a.touch[1], b.touch[0], where);
    }
  }
}

// Turning the wheelset the other way round changes nothing but the place of contact along the track.
TEST(Rigid, YawEitherWayGivesTheSameRoll) {
  const Locator locate = s1002_on_60e1();
  for (int k = 0; k < 20; ++k) {
    const double y = draw(-5.0, 5.0), yaw = draw(0.0, 0.04);
    const RigidContact a = locate.rigid(y, yaw), b = locate.rigid(y, -yaw);
    EXPECT_NEAR(a.pose.roll_rad, b.pose.roll_rad, 1e-10);
    EXPECT_NEAR(a.touch[0].track_mm.x(), -b.touch[0].track_mm.x(), 1e-4);
  }
}

TEST(Rigid, DisplacementToTheLeftLiftsTheLeftWheel) {
  const Locator locate = s1002_on_60e1();
  const RigidContact contact = locate.rigid(4.0, 0.0);
  EXPECT_GT(contact.pose.roll_rad, 0.0);
  EXPECT_GT(radius_difference(contact), 0.0);
  EXPECT_GT(contact.touch[0].contact_angle_rad, contact.touch[1].contact_angle_rad);
  EXPECT_GT(contact.touch[0].track_mm.y(), 0.0);
  EXPECT_LT(contact.touch[1].track_mm.y(), 0.0);
}

TEST(Rigid, BothReferencesDescribeTheSamePose) {
  const Locator locate = s1002_on_60e1();
  for (const double y : {-6.0, -2.0, 0.5, 3.0, 5.9}) {
    const RigidContact axle = locate.rigid(y, 0.005);
    const double height = 460.0 + axle.pose.height_mm;
    const double at_rail = y + height * std::tan(axle.pose.roll_rad) * std::cos(0.005);
    const RigidContact rail = locate.rigid(at_rail, 0.005, LateralReference::rail);
    EXPECT_NEAR(rail.pose.roll_rad, axle.pose.roll_rad, 1e-10) << y;
    EXPECT_NEAR(radius_difference(rail), radius_difference(axle), 1e-5) << y;
  }
}

TEST(Rigid, UnequalRadiiTiltTheWheelset) {
  WheelsetGeometry wheelset;
  wheelset.rolling_radius_mm = {461.0, 460.0};
  const Locator locate = s1002_on_60e1(1.0 / 40.0, wheelset);
  // The axle tilts by one millimetre over the distance of the touching points, and touches elsewhere for it.
  const RigidContact contact = locate.rigid(0.0, 0.0);
  EXPECT_NEAR(contact.pose.roll_rad, 1.0 / 1500.0, 0.25 / 1500.0);
  EXPECT_NEAR(contact.pose.height_mm, 0.0, 0.2);
}

TEST(Rigid, TraverseAgreesWithSinglePositions) {
  const Locator locate = s1002_on_60e1();
  std::vector<double> lateral;
  for (int k = 0; k <= 120; ++k) lateral.push_back(-6.0 + 0.1 * k);
  const std::vector<RigidContact> contacts = locate.rigid(lateral, 0.01);
  ASSERT_EQ(contacts.size(), lateral.size());
  for (std::size_t k = 0; k < lateral.size(); ++k) {
    const RigidContact single = locate.rigid(lateral[k], 0.01);
    EXPECT_NEAR(contacts[k].pose.roll_rad, single.pose.roll_rad, 1e-11) << lateral[k];
    EXPECT_NEAR(radius_difference(contacts[k]), radius_difference(single), 1e-6) << lateral[k];
  }
}

TEST(Rigid, JumpsSeparateTheTwoTouchingPoints) {
  const Locator locate = s1002_on_60e1();
  for (const double yaw : {0.0, 0.015})
    for (const ContactJump& jump : locate.jumps(-5.5, 5.5, yaw, LateralReference::axle)) {
      const std::size_t k = jump.side == Side::left ? 0 : 1;
      const RigidContact before = locate.rigid(jump.lateral_mm - 1e-6, yaw);
      const RigidContact after = locate.rigid(jump.lateral_mm + 1e-6, yaw);
      EXPECT_NEAR(before.touch[k].wheel_y_mm, jump.wheel_y_from_mm, 1e-3);
      EXPECT_NEAR(after.touch[k].wheel_y_mm, jump.wheel_y_to_mm, 1e-3);
      EXPECT_GT(std::abs(jump.wheel_y_to_mm - jump.wheel_y_from_mm), 0.02);
    }
}

// Followed from neighbours, every position of a sweep is the one that a search from scratch finds, up to the flange and
// through jumps, with yaw and at either reference.
TEST(Rigid, SweepAgreesWithSinglePositions) {
  const Locator locate = s1002_on_60e1();
  for (const double yaw : {0.0, 0.012})
    for (const LateralReference reference : {LateralReference::axle, LateralReference::rail}) {
      const RigidSweep sweep = locate.sweep(-7.0, 7.0, yaw, reference);
      EXPECT_GT(sweep.contacts.back().pose.lateral_mm, 6.2);
      EXPECT_LE(sweep.contacts.back().pose.lateral_mm, 7.0);
      double last = -8.0;
      for (const RigidContact& contact : sweep.contacts) {
        EXPECT_GT(contact.pose.lateral_mm, last);
        last = contact.pose.lateral_mm;
        // Arc and gauge corner of one radius leave the place open at 6.26 mm.
        if (std::abs(std::abs(last) - 6.2595) < 1.5e-3) continue;
        const RigidContact single = locate.rigid(last, yaw, reference);
        EXPECT_NEAR(contact.pose.roll_rad, single.pose.roll_rad, 1e-10) << last << " yaw " << yaw;
        EXPECT_NEAR(radius_difference(contact), radius_difference(single), 1e-5) << last << " yaw " << yaw;
      }
    }
}

TEST(Rigid, RatesAreTheSlopesOfTheRollingRadii) {
  const Locator locate = s1002_on_60e1();
  constexpr double kStep_mm = 1e-4;
  for (const double yaw : {0.0, 0.012})
    for (const LateralReference reference : {LateralReference::axle, LateralReference::rail})
      for (const double y : {-5.6, -3.1, 0.1, 1.7, 4.4, 6.31}) {
        const RigidContact at = locate.rigid(y, yaw, reference), before = locate.rigid(y - kStep_mm, yaw, reference),
                           after = locate.rigid(y + kStep_mm, yaw, reference);
        for (const std::size_t k : {0u, 1u}) {
          const double slope = (after.touch[k].rolling_radius_mm - before.touch[k].rolling_radius_mm) / (2 * kStep_mm);
          // Yaw bends the locus a little differently from the profile.
          EXPECT_NEAR(at.touch[k].rolling_radius_rate, slope, (yaw == 0.0 ? 1e-3 : 0.05) * (0.01 + std::abs(slope)))
              << y << " yaw " << yaw << " side " << k;
        }
      }
}

// Between neighbours of a sweep nothing happens that their rates do not foretell: halved, the stretch agrees.
TEST(Rigid, SweepIsDenseEnoughToInterpolate) {
  const Locator locate = s1002_on_60e1();
  const RigidSweep sweep = locate.sweep(-6.1, 6.1, 0.0, LateralReference::axle);
  for (std::size_t i = 1; i < sweep.contacts.size(); ++i) {
    const RigidContact &a = sweep.contacts[i - 1], &b = sweep.contacts[i];
    const double h = b.pose.lateral_mm - a.pose.lateral_mm;
    if (h < 1e-5) continue;
    const RigidContact middle = locate.rigid(a.pose.lateral_mm + 0.5 * h, 0.0);
    for (const std::size_t k : {0u, 1u}) {
      const double cubic = 0.5 * (a.touch[k].rolling_radius_mm + b.touch[k].rolling_radius_mm) +
                           0.125 * h * (a.touch[k].rolling_radius_rate - b.touch[k].rolling_radius_rate);
      EXPECT_NEAR(middle.touch[k].rolling_radius_mm, cubic, 1e-3) << a.pose.lateral_mm;
    }
  }
}

ErrorCode code_of(const std::function<void()>& action, std::string* text = nullptr) {
  try {
    action();
  } catch (const Error& error) {
    if (text) *text = error.what();
    return error.code();
  }
  return static_cast<ErrorCode>(0);
}

TEST(Rigid, SaysWhenAFlangeWouldClimbOrAWheelStandsBesideItsRail) {
  const Locator locate = s1002_on_60e1();
  std::string text;
  EXPECT_EQ(code_of([&] { locate.rigid(7.5, 0.0); }, &text), ErrorCode::no_contact);
  EXPECT_NE(text.find("left flange"), std::string::npos) << text;
  EXPECT_NE(text.find("7.5"), std::string::npos) << text;
  EXPECT_EQ(code_of([&] { locate.rigid(-8.5, 0.0); }, &text), ErrorCode::no_contact);
  EXPECT_NE(text.find("right flange"), std::string::npos) << text;
  EXPECT_EQ(code_of([&] { locate.rigid(900.0, 0.0); }, &text), ErrorCode::no_contact);
  EXPECT_EQ(code_of([&] { locate.rigid(std::nan(""), 0.0); }), ErrorCode::out_of_range);
  EXPECT_EQ(code_of([&] { locate.rigid(0.0, 1.5); }), ErrorCode::out_of_range);
}

// Sampled at 0.25 mm and splined, the pairing keeps its rolling radius difference to 2e-5 mm (the loss that the second
// independent computation found for such a spline), away from the jumps.
TEST(Rigid, SplinedSamplesLoseLittle) {
  const auto sampled = [](ProfileKind kind, const char* name) {
    const auto exact = standard(kind, name);
    std::vector<Vec2> points;
    const ProfileCurve& curve = *exact->curve;
    const int n = static_cast<int>((curve.t_end() - curve.t_begin()) / 0.25);
    for (int k = 0; k <= n; ++k)
      points.push_back(curve.at(curve.t_begin() + (curve.t_end() - curve.t_begin()) * k / n).position);
    return profile_from_points(points, kind, 0.0, name);
  };
  const auto wheel = sampled(ProfileKind::wheel, "S1002");
  const auto rail = sampled(ProfileKind::rail, "60E1");
  const Locator splined(std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail},
                                                  track_of(1.0 / 40.0), WheelsetGeometry{}));
  const Locator exact = s1002_on_60e1();
  for (const double y : {1.0, 2.0, 3.0, 4.0})
    EXPECT_NEAR(radius_difference(splined.rigid(y, 0.0)), radius_difference(exact.rigid(y, 0.0)), 1e-4) << y;
}

}  // namespace
}  // namespace runband
