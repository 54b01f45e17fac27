// Distance between the undeformed surfaces along the contact normal.
#include <gtest/gtest.h>

#include "shared.h"

namespace runband {
namespace {

using namespace test;

constexpr double kGap_mm = 1e-9;

Grid grid_over(double half_x, double half_s, int n) {
  return {n, n, -half_x, -half_s, 2.0 * half_x / (n - 1), 2.0 * half_s / (n - 1)};
}

// A barrel (tread of radius rho, convex) on a crown of radius Rr: a torus over a cylinder, in closed form.
TEST(NormalGap, TorusOverCylinderIsExact) {
  const double r0 = 460.0, barrel = 350.0, crown = 300.0;
  const Locator locate = bare(graph(ProfileKind::wheel, arc, barrel), graph(ProfileKind::rail, arc, -crown), 0.0);
  const Located located = locate.loaded(0.0, 0.0, LateralReference::axle, {}, {});
  ASSERT_EQ(located.zones.size(), 2u);
  for (const ContactZone& zone : located.zones) {
    EXPECT_NEAR(zone.wheel_y_mm, 0.0, 1e-8);
    for (const double x : {-9.0, 0.0, 4.0, 12.0})
      for (const double s : {-8.0, -1.0, 0.0, 6.5}) {
        const double profile_centre = r0 - barrel;  // of the barrel's arc, from the axle
        const double reach = profile_centre + std::sqrt(barrel * barrel - s * s);
        const double wheel = r0 - std::sqrt(reach * reach - x * x);
        const double rail = std::sqrt(crown * crown - s * s) - crown;
        EXPECT_NEAR(locate.gap_mm(zone, located.pose, x, s), wheel - rail, kGap_mm) << x << ' ' << s;
      }
  }
}

TEST(NormalGap, IsNowhereNegativeAndZeroAtTheTouchingPoint) {
  const Locator locate = s1002_on_60e1();
  for (const double yaw : {-0.02, 0.0, 0.01, 0.03})
    for (const double lateral : {-5.6, -4.95, 0.0, 0.22, 3.0, 5.5}) {
      const Located located = locate.loaded(lateral, yaw, LateralReference::axle, {}, {});
      for (const ContactZone& zone : located.zones) {
        EXPECT_NEAR(locate.gap_mm(zone, located.pose, 0.0, 0.0), zone.gap_mm, 1e-10);
        const std::vector<double> field = locate.gap_field_mm(zone, located.pose, grid_over(14.0, 11.0, 57));
        for (const double gap : field) ASSERT_GT(gap, -1e-9) << lateral << ' ' << yaw << ' ' << zone.zone;
      }
      for (const std::size_t k : {0u, 1u}) {
        double least = 1e9;
        for (const ContactZone& zone : located.zones)
          if ((zone.side == Side::left) == (k == 0)) least = std::min(least, zone.gap_mm);
        EXPECT_NEAR(least, 0.0, 1e-10) << lateral << ' ' << yaw;
      }
    }
}

TEST(NormalGap, FieldAgreesWithSinglePoints) {
  const Locator locate = s1002_on_60e1();
  const Grid grid{40, 24, -11.3, -6.1, 0.55, 0.5};
  for (const double lateral : {0.0, 5.5, 6.2}) {
    const Located located = locate.loaded(lateral, 0.015, LateralReference::axle, {}, {});
    for (const ContactZone& zone : located.zones) {
      const std::vector<double> field = locate.gap_field_mm(zone, located.pose, grid);
      for (int j = 0; j < grid.ns; j += 5)
        for (int i = 0; i < grid.nx; i += 7) {
          const double single = locate.gap_mm(zone, located.pose, grid.x(i), grid.s(j));
          const double cell = field[static_cast<std::size_t>(j * grid.nx + i)];
          if (std::isfinite(single) || std::isfinite(cell)) {
            EXPECT_NEAR(cell, single, kGap_mm) << zone.zone;
          }
        }
    }
  }
}

// Every point that the gap claims on the wheel lies on the wheel: checked by turning it back into the profile.
TEST(NormalGap, LandsOnTheWheelUnderYaw) {
  const Locator locate = s1002_on_60e1();
  const double yaw = 0.025;
  const Located located = locate.loaded(5.6, yaw, LateralReference::axle, {}, {});
  const Vec3 axis(-std::sin(yaw) * std::cos(located.pose.roll_rad), std::cos(yaw) * std::cos(located.pose.roll_rad),
                  std::sin(located.pose.roll_rad));
  const Vec3 centre(0.0, 5.6, 460.0 + located.pose.height_mm);
  for (const ContactZone& zone : located.zones) {
    const Profile& wheel = locate.pairing().wheel(zone.side);
    const Profile& rail = locate.pairing().rail(zone.side);
    const RailMount& mount = locate.pairing().mount(zone.side);
    const double sign = side_sign(zone.side);
    for (const double x : {-6.0, 0.0, 5.0})
      for (const double s : {-1.0, 0.0, 1.5}) {
        const double gap = locate.gap_mm(zone, located.pose, x, s);
        // The rail's height over the tangent plane, by halving along the curve near the contact.
        const auto offset = [&](double t) -> Vec3 {
          const Vec2 q = mount.outward(rail.curve->at(t).position);
          return Vec3(0.0, sign * q.x(), q.y()) - Vec3(0.0, zone.track_mm.y(), zone.track_mm.z());
        };
        double a = rail.curve->t_begin(), b = rail.curve->t_end();
        // Restrict to the neighbourhood: the tangent coordinate rises there.
        for (double t = a; t < b; t += 0.05)
          if (rail.curve->at(t).position.x() < zone.rail_y_mm - 4.0) a = t;
        for (double t = b; t > a; t -= 0.05)
          if (rail.curve->at(t).position.x() > zone.rail_y_mm + 4.0) b = t;
        for (int k = 0; k < 80; ++k) {
          const double middle = 0.5 * (a + b);
          (offset(middle).dot(zone.frame.col(1)) < s ? a : b) = middle;
        }
        const double height = offset(a).dot(zone.frame.col(2)) + gap;
        const Vec3 point = zone.track_mm + x * zone.frame.col(0) + s * zone.frame.col(1) + height * zone.frame.col(2);
        const double along = (point - centre).dot(axis);
        const double radius = ((point - centre) - along * axis).norm();
        const double y = sign * along - locate.pairing().wheelset().running_circle_y_mm();
        // The profile's point at this y, on the stretch near the contact.
        double least = 1e9;
        double nearest = 0.0;
        for (double t = wheel.curve->t_begin(); t < wheel.curve->t_end(); t += 0.01) {
          const double off = (wheel.curve->at(t).position - Vec2(y, 460.0 - radius)).norm();
          if (off < least) least = off, nearest = t;
        }
        for (double step = 0.01; step > 1e-12; step *= 0.5)
          for (const double t : {nearest - step, nearest + step}) {
            const double off = (wheel.curve->at(t).position - Vec2(y, 460.0 - radius)).norm();
            if (off < least) least = off, nearest = t;
          }
        EXPECT_LT(least, 1e-7) << zone.zone << ' ' << x << ' ' << s;
      }
  }
}

TEST(NormalGap, IsInfiniteWhereASurfaceEnds) {
  const Locator locate =
      bare(graph(ProfileKind::wheel, arc, 350.0, -12.0, 12.0), graph(ProfileKind::rail, arc, -300.0, -30.0, 30.0));
  const Located located = locate.loaded(0.0, 0.0, LateralReference::axle, {}, {});
  const ContactZone& zone = located.zones.front();
  EXPECT_TRUE(std::isfinite(locate.gap_mm(zone, located.pose, 3.0, 11.9)));
  EXPECT_TRUE(std::isinf(locate.gap_mm(zone, located.pose, 3.0, 12.1)));
  const std::vector<double> field = locate.gap_field_mm(zone, located.pose, grid_over(5.0, 15.0, 31));
  EXPECT_TRUE(std::isinf(field.front()));
  EXPECT_TRUE(std::isinf(field.back()));
  EXPECT_TRUE(std::isfinite(field[15 * 31 + 15]));
  EXPECT_TRUE(std::isfinite(field[5 * 31 + 2]));  // s = -10
}

}  // namespace
}  // namespace runband
