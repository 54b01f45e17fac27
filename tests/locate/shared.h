// Profiles and pairings that the tests of this folder share.
#pragma once

#include <algorithm>
#include <cmath>
#include <memory>
#include <vector>

#include "core/locate/locate.h"

namespace runband::test {

/// z = shape(y) over [from, to], by y.
class Graph final : public ProfileCurve {
 public:
  struct Value {
    double z = 0, slope = 0, bend = 0;
  };
  using Shape = Value (*)(double y, double parameter);
  Graph(Shape shape, double parameter, double from, double to)
      : shape_(shape), parameter_(parameter), from_(from), to_(to) {}
  double t_begin() const override { return from_; }
  double t_end() const override { return to_; }
  CurvePoint at(double t) const override {
    CurvePoint p;
    p.t = std::clamp(t, from_, to_);
    const Value v = shape_(p.t, parameter_);
    p.position = {p.t, v.z};
    p.d1 = {1.0, v.slope};
    p.d2 = {0.0, v.bend};
    return p;
  }
  std::vector<double> breaks() const override { return {from_, to_}; }

 private:
  Shape shape_;
  double parameter_, from_, to_;
};

/// Rising towards the field side by `parameter`.
inline Graph::Value slanted(double y, double parameter) { return {parameter * y, parameter, 0.0}; }
/// Arc through the origin, horizontal there, of radius |parameter|; bends up for positive parameters.
inline Graph::Value arc(double y, double parameter) {
  const double root = std::sqrt(parameter * parameter - y * y), sign = parameter > 0.0 ? 1.0 : -1.0;
  return {parameter - sign * root, sign * y / root, sign * parameter * parameter / (root * root * root)};
}

inline std::shared_ptr<const Profile> graph(ProfileKind kind, Graph::Shape shape, double parameter, double from = -35.0,
                                            double to = 35.0) {
  auto profile = std::make_shared<Profile>();
  profile->kind = kind;
  profile->origin = "test shape";
  profile->curve = std::make_shared<Graph>(shape, parameter, from, to);
  return profile;
}

inline std::shared_ptr<const Profile> standard(ProfileKind kind, const char* name) {
  return load_profile(std::string("standard:") + name, kind);
}

inline TrackGeometry track_of(double inclination, double gauge_mm = 1435.0) {
  TrackGeometry track;
  track.inclination_rad = std::atan(inclination);
  track.gauge_mm = gauge_mm;
  return track;
}

/// Shapes without a gauge face: the gauge depth is 1 mm and the running circles stand over the middles of the rails.
inline Locator bare(const std::shared_ptr<const Profile>& wheel, const std::shared_ptr<const Profile>& rail,
                    double inclination = 0.0) {
  TrackGeometry track = track_of(inclination);
  track.gauge_depth_mm = 1.0;
  WheelsetGeometry wheelset;
  const Pairing first({wheel, wheel}, {rail, rail}, track, wheelset);
  wheelset.back_to_back_mm =
      2.0 * (first.mount(Side::left).outward(Vec2::Zero()).x() - wheelset.running_circle_offset_mm);
  return Locator(std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, track, wheelset));
}

inline Locator s1002_on_60e1(double inclination = 1.0 / 40.0, const WheelsetGeometry& wheelset = {}) {
  const auto wheel = standard(ProfileKind::wheel, "S1002");
  const auto rail = standard(ProfileKind::rail, "60E1");
  return Locator(
      std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, track_of(inclination), wheelset));
}

inline double radius_difference(const RigidContact& c) {
  return c.touch[0].rolling_radius_mm - c.touch[1].rolling_radius_mm;
}

}  // namespace runband::test
