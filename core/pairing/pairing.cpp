#include "core/pairing/pairing.h"

#include <algorithm>
#include <cmath>
#include <limits>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/pairing/outline.h"

namespace runband {

namespace {

constexpr double kSearchStep_mm = 0.1;     // fine enough to separate the features of a rail head
constexpr double kFlangeDepth_mm = 10.0;   // flange thickness is read this far below the running circle (EN 15313)
constexpr double kSteepestRail_rad = 0.3;  // rails lean by 1:20 or 1:40; this is far outside

void require_between(const char* where, const char* name, double value, const char* unit, double low, double high) {
  if (std::isfinite(value) && value >= low && value <= high) return;
  throw out_of_range(where, name, value, unit, number_text(low) + " to " + number_text(high));
}

// Parameter between a and b where f changes sign (f(a) <= 0 < f(b) or the reverse), halved down to rounding.
template <class Function>
double halve(double a, double b, const Function& f) {
  const bool rising = f(b) > 0.0;
  for (int k = 0; k < 200 && b > a; ++k) {
    const double middle = 0.5 * (a + b);
    if (middle <= a || middle >= b) break;
    ((f(middle) > 0.0) == rising ? b : a) = middle;
  }
  return 0.5 * (a + b);
}

// Largest value of `value(point)` over the samples, polished where its derivative `slope(point)` changes sign.
template <class Value, class Slope>
double largest(const ProfileCurve& curve, const std::vector<CurvePoint>& samples, const Value& value,
               const Slope& slope) {
  std::size_t best = 0;
  for (std::size_t i = 1; i < samples.size(); ++i)
    if (value(samples[i]) > value(samples[best])) best = i;
  double result = value(samples[best]);
  const std::size_t first = best > 0 ? best - 1 : best, last = std::min(best + 1, samples.size() - 1);
  for (std::size_t i = first; i < last; ++i) {
    const double t0 = samples[i].t, t1 = samples[i + 1].t;
    if (!(slope(samples[i]) > 0.0 && slope(samples[i + 1]) <= 0.0)) continue;
    const double t = halve(t0, t1, [&](double at) { return slope(curve.at(at)); });
    result = std::max(result, value(curve.at(t)));
  }
  return result;
}

// Height of the top and distance inward of the gauge face of a rail that is inclined but not yet shifted.
RailMount mount_rail(const Profile& rail, Side side, const TrackGeometry& track) {
  RailMount mount;
  mount.inclination_rad = track.inclination_rad;
  const std::vector<CurvePoint> samples = even_samples(*rail.curve, kSearchStep_mm);
  const auto height = [&](const CurvePoint& p) { return mount.outward(p.position).y(); };
  const auto climb = [&](const CurvePoint& p) { return mount.outward_direction(p.d1).y(); };
  const double top = largest(*rail.curve, samples, height, climb);

  // The gauge face: the innermost point of the gauge side that is not deeper than the gauge depth.
  const double floor = top - track.gauge_depth_mm;
  const auto inward = [&](const CurvePoint& p) { return -mount.outward(p.position).x(); };
  const auto advance = [&](const CurvePoint& p) { return -mount.outward_direction(p.d1).x(); };
  std::size_t crown = 0;
  for (std::size_t i = 1; i < samples.size(); ++i)
    if (height(samples[i]) > height(samples[crown])) crown = i;
  double face = -std::numeric_limits<double>::infinity();
  bool reaches = false;
  std::vector<CurvePoint> above;  // a stretch of the gauge side above the floor
  const auto close_stretch = [&] {
    if (!above.empty()) face = std::max(face, largest(*rail.curve, above, inward, advance));
    above.clear();
  };
  for (std::size_t i = 0; i <= crown; ++i) {
    const bool now_above = height(samples[i]) >= floor;
    if (i > 0 && now_above != (height(samples[i - 1]) >= floor)) {
      reaches = true;
      const double t =
          halve(samples[i - 1].t, samples[i].t, [&](double at) { return height(rail.curve->at(at)) - floor; });
      if (now_above) {
        above.push_back(rail.curve->at(t));
      } else {
        above.push_back(rail.curve->at(t));
        close_stretch();
      }
    }
    if (now_above) above.push_back(samples[i]);
  }
  close_stretch();
  if (!reaches)
    throw InputError(ErrorCode::profile_not_covering,
                     std::string(side_name(side)) + " rail (" + rail.origin + "): the gauge side ends " +
                         number_text(top - height(samples.front()), 4) +
                         " mm below the running surface, above the gauge depth of " +
                         number_text(track.gauge_depth_mm) + " mm.",
                     "measure the rail further down its gauge face, or lower track.gauge_depth_mm.");
  mount.shift = Vec2(track.gauge_mm / 2.0 + face, -top);
  return mount;
}

// Distance of the flange's active face from the wheelset's centre plane, ten millimetres below the running circle;
// minus infinity for a wheel without a flange.
double active_face(const Profile& wheel, const WheelsetGeometry& wheelset) {
  const std::vector<CurvePoint> samples = even_samples(*wheel.curve, kSearchStep_mm);
  double face = -std::numeric_limits<double>::infinity();
  for (std::size_t i = 1; i < samples.size(); ++i) {
    if (samples[i - 1].y() > 0.0) break;
    const bool leaves = samples[i - 1].z() < -kFlangeDepth_mm && samples[i].z() >= -kFlangeDepth_mm;
    if (!leaves) continue;
    const double t =
        halve(samples[i - 1].t, samples[i].t, [&](double at) { return wheel.curve->at(at).z() + kFlangeDepth_mm; });
    face = std::max(face, wheelset.running_circle_y_mm() + wheel.curve->at(t).y());
  }
  return face;
}

void require_sane(const TrackGeometry& track, const WheelsetGeometry& wheelset) {
  require_between("track", "gauge_mm", track.gauge_mm, "mm", 200.0, 4000.0);
  require_between("track", "gauge_depth_mm", track.gauge_depth_mm, "mm", 1.0, 60.0);
  require_between("track", "inclination", track.inclination_rad, "rad", -kSteepestRail_rad, kSteepestRail_rad);
  require_between("track", "cant_mm", track.cant_mm, "mm", -400.0, 400.0);
  if (track.curve_radius_m != 0.0 && !(std::isfinite(track.curve_radius_m) && std::abs(track.curve_radius_m) >= 5.0))
    throw out_of_range("track", "curve_radius_m", track.curve_radius_m, "m", "0 (straight) or at least 5 either way");
  require_between("wheelset", "back_to_back_mm", wheelset.back_to_back_mm, "mm", 150.0, 4000.0);
  require_between("wheelset", "running_circle_offset_mm", wheelset.running_circle_offset_mm, "mm", 1.0, 200.0);
  for (const Side side : {Side::left, Side::right})
    require_between("wheelset", side == Side::left ? "left_rolling_radius_mm" : "right_rolling_radius_mm",
                    wheelset.rolling_radius_mm[side == Side::left ? 0 : 1], "mm", 40.0, 3000.0);
}

}  // namespace

Vec2 RailMount::outward_direction(const Vec2& d) const {
  const double c = std::cos(inclination_rad), s = std::sin(inclination_rad);
  return {c * d.x() - s * d.y(), s * d.x() + c * d.y()};
}

Vec2 RailMount::outward(const Vec2& p) const { return outward_direction(p) + shift; }

Pairing::Pairing(std::array<std::shared_ptr<const Profile>, 2> wheels,
                 std::array<std::shared_ptr<const Profile>, 2> rails, const TrackGeometry& track,
                 const WheelsetGeometry& wheelset)
    : wheels_(std::move(wheels)), rails_(std::move(rails)), track_(track), wheelset_(wheelset) {
  require_sane(track, wheelset);
  double faces = 0.0;
  for (const Side side : {Side::left, Side::right}) {
    const std::size_t k = index(side);
    if (!wheels_[k] || !rails_[k] || !wheels_[k]->curve || !rails_[k]->curve)
      throw InputError(ErrorCode::missing_key, std::string("the ") + side_name(side) + " wheel or rail has no profile.",
                       "name one profile for the wheels and one for the rails.");
    if (wheels_[k]->kind != ProfileKind::wheel || rails_[k]->kind != ProfileKind::rail)
      throw InputError(
          ErrorCode::conflicting_keys,
          std::string("the ") + side_name(side) + " pairing has a " +
              (wheels_[k]->kind != ProfileKind::wheel ? "rail profile on the wheel" : "wheel profile on the rail") +
              ".",
          "exchange the two profiles.");
    mounts_[k] = mount_rail(*rails_[k], side, track);
    faces += active_face(*wheels_[k], wheelset);
  }
  if (faces >= track.gauge_mm)
    throw InputError(ErrorCode::no_contact,
                     "the flanges do not fit between the rails: their faces are " + number_text(faces, 6) +
                         " mm apart, ten millimetres below the running circle, and the gauge is " +
                         number_text(track.gauge_mm) + " mm.",
                     "check track.gauge_mm, wheelset.back_to_back_mm and wheelset.running_circle_offset_mm.");
}

}  // namespace runband
