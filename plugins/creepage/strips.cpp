#include "plugins/creepage/strips.h"

#include <algorithm>
#include <cmath>
#include <limits>

namespace runband {

// The point of the curve nearest to (y, z), which lies on it.
CommonSurface::Body CommonSurface::body(const ProfileCurve& curve, double y_mm, double z_mm) {
  constexpr int kSamples = 256;
  const Vec2 wanted(y_mm, z_mm);
  const double begin = curve.t_begin(), end = curve.t_end();
  double t = begin, nearest = std::numeric_limits<double>::infinity();
  for (int k = 0; k <= kSamples; ++k) {
    const double here = begin + (end - begin) * k / kSamples;
    const double apart = (curve.at(here).position - wanted).squaredNorm();
    if (apart < nearest) nearest = apart, t = here;
  }
  for (int k = 0; k < 20; ++k) {
    const CurvePoint p = curve.at(t);
    const double step = (wanted - p.position).dot(p.d1) / p.d1.squaredNorm();
    t = std::clamp(t + step, begin, end);
    if (std::abs(step) < 1e-12) break;
  }
  return {&curve, curve.at(t)};
}

CommonSurface::CommonSurface(const Pairing& pairing, const ContactZone& zone)
    : wheel_(body(*pairing.wheel(zone.side).curve, zone.wheel_y_mm, zone.wheel_z_mm)),
      rail_(body(*pairing.rail(zone.side).curve, zone.rail_y_mm, zone.rail_z_mm)) {}

CommonSurface::Strip CommonSurface::Body::at(double s_mm) const {
  if (curve == nullptr) return {};
  const Vec2 along = origin.d1.normalized(), up(-along.y(), along.x());
  CurvePoint p = origin;
  double t = origin.t + s_mm / origin.d1.norm();
  for (int k = 0; k < 12; ++k) {
    p = curve->at(t);
    const double error = (p.position - origin.position).dot(along) - s_mm, speed = p.d1.dot(along);
    if (std::abs(error) < 1e-9 || p.t != t || !(speed > 0.1 * p.d1.norm())) break;
    t -= error / speed;
  }
  const double speed = std::max(p.d1.dot(along), 0.1 * p.d1.norm());
  return {(p.position - origin.position).dot(up), p.d1.dot(up) / speed};
}

CommonSurface::Strip CommonSurface::at(double s_mm) const {
  const Strip w = wheel_.at(s_mm), r = rail_.at(s_mm);
  return {0.5 * (w.height_mm + r.height_mm), 0.5 * (w.slope + r.slope)};
}

}  // namespace runband
