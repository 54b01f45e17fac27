// Rigid contact against a sampling of the two surfaces in three dimensions that knows nothing of the contact locus:
// wheel circles turned in space by rotation matrices, rails as prisms.
#include <gtest/gtest.h>

#include <Eigen/Geometry>
#include <cmath>

#include "core/pairing/outline.h"
#include "shared.h"

namespace runband {
namespace {

using namespace test;

// The rail's height over the track's y, from samples so dense that chords are within 4e-8 mm of the gauge corner.
class RailHeight {
 public:
  RailHeight(const Pairing& pairing, Side side) {
    for (const CurvePoint& p : even_samples(*pairing.rail(side).curve, 0.002)) {
      const Vec2 q = pairing.mount(side).outward(p.position);
      if (!points_.empty() && q.x() <= points_.back().x()) {
        if (q.y() < points_.back().y()) continue;
        while (!points_.empty() && q.x() <= points_.back().x()) points_.pop_back();
      }
      points_.push_back(q);
    }
  }
  double at(double u) const {
    const auto next =
        std::upper_bound(points_.begin(), points_.end(), u, [](double value, const Vec2& p) { return value < p.x(); });
    if (next == points_.begin() || next == points_.end()) return -1e6;
    const Vec2 &a = *(next - 1), &b = *next;
    return a.y() + (u - a.x()) / (b.x() - a.x()) * (b.y() - a.y());
  }

 private:
  std::vector<Vec2> points_;
};

struct Surface {
  const Locator& locate;
  Side side;
  WheelsetPose pose;
  Eigen::Matrix3d turn;
  Vec3 centre;

  Surface(const Locator& l, Side s, const WheelsetPose& p) : locate(l), side(s), pose(p) {
    turn = Eigen::AngleAxisd(p.yaw_rad, Vec3::UnitZ()) * Eigen::AngleAxisd(p.roll_rad, Vec3::UnitX());
    const double height =
        0.5 * (l.pairing().rolling_radius_mm(Side::left) + l.pairing().rolling_radius_mm(Side::right)) + p.height_mm;
    centre = Vec3(0.0, p.lateral_mm, height);
  }
  // angle: around the axle, zero downwards.
  Vec3 point(double t, double angle) const {
    const CurvePoint p = locate.pairing().wheel(side).curve->at(t);
    const double radius = locate.pairing().rolling_radius_mm(side) - p.z();
    const double axial = side_sign(side) * (locate.pairing().wheelset().running_circle_y_mm() + p.y());
    return centre + turn * Vec3(radius * std::sin(angle), axial, -radius * std::cos(angle));
  }
};

struct Lowest {
  double gap = 1e9, t = 0, angle = 0;
};

Lowest search(const Surface& surface, const RailHeight& rail) {
  const auto gap = [&](double t, double angle) {
    const Vec3 p = surface.point(t, angle);
    return p.z() - rail.at(side_sign(surface.side) * p.y());
  };
  const ProfileCurve& wheel = *surface.locate.pairing().wheel(surface.side).curve;
  Lowest lowest;
  for (const CurvePoint& p : even_samples(wheel, 0.25))
    for (int k = -60; k <= 60; ++k) {
      const double angle = 0.005 * k, g = gap(p.t, angle);
      if (g < lowest.gap) lowest = {g, p.t, angle};
    }
  double dt = 0.6, da = 0.01;
  while (dt > 1e-6) {
    const Lowest from = lowest;
    for (int i = -8; i <= 8; ++i)
      for (int k = -8; k <= 8; ++k) {
        const double t = from.t + dt * i / 8, angle = from.angle + da * k / 8, g = gap(t, angle);
        if (g < lowest.gap) lowest = {g, t, angle};
      }
    dt *= 0.5;
    da *= 0.5;
  }
  return lowest;
}

// Chords of the sampled rail and the last step of the zoom; measured 6e-8.
constexpr double kGap_mm = 5e-7;

TEST(BruteForce, NoWheelEntersItsRailAndEachTouches) {
  const Locator locate = s1002_on_60e1();
  const RailHeight rails[2] = {{locate.pairing(), Side::left}, {locate.pairing(), Side::right}};
  for (const double yaw : {-0.05, -0.02, 0.0, 0.01, 0.03})
    for (const double lateral : {-5.3, -2.0, 0.0, 1.0, 3.7, 5.3}) {
      const RigidContact contact = locate.rigid(lateral, yaw);
      for (const Side side : {Side::left, Side::right}) {
        const std::size_t k = side == Side::left ? 0 : 1;
        const Surface surface(locate, side, contact.pose);
        const Lowest lowest = search(surface, rails[k]);
        EXPECT_NEAR(lowest.gap, 0.0, kGap_mm) << "yaw " << yaw << " lateral " << lateral << ' ' << side_name(side);
        const Vec3 at = surface.point(lowest.t, lowest.angle);
        const Vec3& found = contact.touch[k].track_mm;
        // The minimum is flat: position is only as sure as the root of the gap.
        EXPECT_NEAR(at.x(), found.x(), 0.05) << "yaw " << yaw << " lateral " << lateral << ' ' << side_name(side);
        EXPECT_NEAR(at.y(), found.y(), 0.05) << "yaw " << yaw << " lateral " << lateral << ' ' << side_name(side);
        EXPECT_NEAR(at.z(), found.z(), 0.02) << "yaw " << yaw << " lateral " << lateral << ' ' << side_name(side);
      }
    }
}

// A flange that touches under yaw does so ahead of the axle, by about yaw x rolling radius x tangent of its angle.
TEST(BruteForce, YawMovesTheTouchingPointAheadOnOneFlangeAndBehindOnTheOther) {
  const Locator locate = s1002_on_60e1();
  const double yaw = 0.01;
  for (const double lateral : {6.25, -6.25}) {
    const RigidContact contact = locate.rigid(lateral, yaw);
    const std::size_t flange = lateral > 0.0 ? 0 : 1;
    const RigidTouch& touch = contact.touch[flange];
    ASSERT_GT(touch.contact_angle_rad, 1.0);
    // Axle direction has x = -yaw; the left wheel lies along it, the right one against it.
    const double lean = (lateral > 0.0 ? -yaw : yaw);
    const double axial = locate.pairing().wheelset().running_circle_y_mm() + touch.wheel_y_mm;
    const double expected = lean * (axial - touch.rolling_radius_mm * std::tan(touch.contact_angle_rad));
    EXPECT_NEAR(touch.track_mm.x(), expected, 0.02 * std::abs(expected));
  }
}

}  // namespace
}  // namespace runband
