// Rails set to gauge, wheels set on their running circles.
#include "core/pairing/pairing.h"

#include <gtest/gtest.h>

#include <cmath>
#include <functional>

#include "core/base/error.h"
#include "core/pairing/outline.h"

namespace runband {
namespace {

std::shared_ptr<const Profile> wheel_profile() { return load_profile("standard:S1002", ProfileKind::wheel); }
std::shared_ptr<const Profile> rail_profile() { return load_profile("standard:60E1", ProfileKind::rail); }

Pairing pair_with(const TrackGeometry& track, const WheelsetGeometry& wheelset = {}) {
  return Pairing({wheel_profile(), wheel_profile()}, {rail_profile(), rail_profile()}, track, wheelset);
}

// A curve given by points joined by straight lines.
class Polyline final : public ProfileCurve {
 public:
  explicit Polyline(std::vector<Vec2> points) : points_(std::move(points)) {}
  double t_begin() const override { return 0.0; }
  double t_end() const override { return static_cast<double>(points_.size() - 1); }
  CurvePoint at(double t) const override {
    const double last = t_end() - 1.0;
    const double k = std::min(std::max(std::floor(t), 0.0), last);
    const auto i = static_cast<std::size_t>(k);
    CurvePoint p;
    p.t = t;
    p.d1 = points_[i + 1] - points_[i];
    p.position = points_[i] + (t - k) * p.d1;
    return p;
  }
  std::vector<double> breaks() const override {
    std::vector<double> result;
    for (std::size_t i = 0; i < points_.size(); ++i) result.push_back(static_cast<double>(i));
    return result;
  }

 private:
  std::vector<Vec2> points_;
};

std::shared_ptr<const Profile> polyline(ProfileKind kind, std::vector<Vec2> points) {
  auto profile = std::make_shared<Profile>();
  profile->kind = kind;
  profile->origin = "test polyline";
  profile->curve = std::make_shared<Polyline>(std::move(points));
  return profile;
}

// The face leans by less than one in two where it is sampled.
constexpr double kSample_mm = 0.002;

TEST(Pairing, GaugeAndRailTopAreExactAfterInclination) {
  for (const double inclination : {0.0, 1.0 / 40.0, 1.0 / 20.0}) {
    for (const double depth : {10.0, 14.0, 16.0}) {
      TrackGeometry track;
      track.inclination_rad = std::atan(inclination);
      track.gauge_depth_mm = depth;
      track.gauge_mm = 1433.0;
      const Pairing pairing = pair_with(track);
      for (const Side side : {Side::left, Side::right}) {
        double face = 1e9, top = -1e9;
        for (const CurvePoint& p : even_samples(*pairing.rail(side).curve, kSample_mm)) {
          const Vec2 q = pairing.mount(side).outward(p.position);
          top = std::max(top, q.y());
          if (q.y() >= -depth && p.y() < 0.0) face = std::min(face, q.x());
        }
        EXPECT_NEAR(top, 0.0, 1e-6) << inclination << ' ' << depth;
        EXPECT_NEAR(face, 1433.0 / 2.0, 0.5 * kSample_mm) << inclination << ' ' << depth;
        EXPECT_GE(face, 1433.0 / 2.0 - 1e-9);
      }
    }
  }
}

// 60E1 without inclination: the point of the gauge face 14 mm down is 35.9813349 mm from the rail's axis (tangent-arc
// construction from the dimensions of EN 13674-1).
TEST(Pairing, UprightRailStandsWhereItsDrawingSays) {
  TrackGeometry track;
  track.inclination_rad = 0.0;
  const Pairing pairing = pair_with(track);
  EXPECT_NEAR(pairing.mount(Side::left).shift.x(), 717.5 + 35.9813349, 1e-6);
  EXPECT_NEAR(pairing.mount(Side::left).shift.y(), 0.0, 1e-12);
}

TEST(Pairing, InclinationLeansTheRailTowardsTheTrackCentre) {
  const Pairing pairing = pair_with({});
  const RailMount& mount = pairing.mount(Side::right);
  const Vec2 head = mount.outward({0.0, 0.0}), foot = mount.outward({0.0, -172.0});
  EXPECT_NEAR(foot.x() - head.x(), 172.0 * std::sin(0.025), 1e-9);
  EXPECT_GT(foot.x(), head.x());
}

TEST(Pairing, ALipBelowTheCornerSetsTheGauge) {
  // The lip at 8 mm reaches 2 mm further in than the face below it.
  const auto rail = polyline(ProfileKind::rail, {{-34, -20}, {-34, -10}, {-36, -8}, {-33, -3}, {0, 0}, {36, -2}});
  const auto wheel = wheel_profile();
  TrackGeometry track;
  track.inclination_rad = 0.0;
  const Pairing pairing({wheel, wheel}, {rail, rail}, track, {});
  EXPECT_NEAR(pairing.mount(Side::left).outward({-36.0, -8.0}).x(), 717.5, 1e-9);
}

TEST(Pairing, SidesAreMountedEachByItsOwnProfile) {
  const auto wheel = wheel_profile();
  const auto other = load_profile("standard:49E1", ProfileKind::rail);
  WheelsetGeometry wheelset;
  wheelset.rolling_radius_mm = {460.0, 455.0};
  const Pairing pairing({wheel, wheel}, {rail_profile(), other}, {}, wheelset);
  EXPECT_NE(pairing.mount(Side::left).shift.x(), pairing.mount(Side::right).shift.x());
  EXPECT_EQ(pairing.rolling_radius_mm(Side::right), 455.0);
  EXPECT_EQ(&pairing.rail(Side::right), other.get());
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

TEST(Pairing, SaysWhatIsWrong) {
  std::string text;
  TrackGeometry track;
  track.gauge_mm = 1420.0;
  EXPECT_EQ(code_of([&] { pair_with(track); }, &text), ErrorCode::no_contact);
  EXPECT_NE(text.find("1425"), std::string::npos) << text;  // 1360 + 2 x 32.5, EN 13715
  track = {};
  track.gauge_depth_mm = std::nan("");
  EXPECT_EQ(code_of([&] { pair_with(track); }, &text), ErrorCode::out_of_range);
  EXPECT_NE(text.find("gauge_depth_mm"), std::string::npos) << text;
  track = {};
  track.curve_radius_m = 2.0;
  EXPECT_EQ(code_of([&] { pair_with(track); }), ErrorCode::out_of_range);
  WheelsetGeometry wheelset;
  wheelset.rolling_radius_mm[1] = -460.0;
  EXPECT_EQ(code_of([&] { pair_with({}, wheelset); }, &text), ErrorCode::out_of_range);
  EXPECT_NE(text.find("right_rolling_radius_mm"), std::string::npos) << text;

  const auto wheel = wheel_profile();
  const auto shallow = polyline(ProfileKind::rail, {{-33, -6}, {0, 0}, {36, -2}});
  EXPECT_EQ(code_of(
                [&] {
                  Pairing({wheel, wheel}, {shallow, shallow}, {}, {});
                },
                &text),
            ErrorCode::profile_not_covering);
  EXPECT_NE(text.find("left rail"), std::string::npos) << text;
  EXPECT_EQ(code_of([&] {
              Pairing({rail_profile(), wheel}, {rail_profile(), rail_profile()}, {}, {});
            }),
            ErrorCode::conflicting_keys);
  EXPECT_EQ(code_of([&] {
              Pairing({wheel, nullptr}, {rail_profile(), rail_profile()}, {}, {});
            }),
            ErrorCode::missing_key);
}

}  // namespace
}  // namespace runband
