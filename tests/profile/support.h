// Points on standard profiles, and noise that is the same on every machine.
#pragma once

#include <cmath>
#include <cstdint>
#include <memory>
#include <vector>

#include "core/profile/profile.h"

namespace runband {

/// Points evenly along a curve, moved along the normal by noise of the given standard deviation.
inline std::vector<Vec2> sampled(const ProfileCurve& curve, double spacing_mm, double noise_mm = 0.0,
                                 std::uint64_t seed = 1) {
  // splitmix64 and Box-Muller: the same draw with every library.
  const auto uniform = [&seed] {
    std::uint64_t x = (seed += 0x9e3779b97f4a7c15ULL);
    x = (x ^ (x >> 30)) * 0xbf58476d1ce4e5b9ULL;
    x = (x ^ (x >> 27)) * 0x94d049bb133111ebULL;
    return (static_cast<double>((x ^ (x >> 31)) >> 11) + 0.5) / 9007199254740992.0;
  };
  const int n = static_cast<int>((curve.t_end() - curve.t_begin()) / spacing_mm);
  std::vector<Vec2> points;
  for (int i = 0; i <= n; ++i) {
    const CurvePoint p = curve.at(curve.t_begin() + (curve.t_end() - curve.t_begin()) * i / n);
    const double error = noise_mm * std::sqrt(-2.0 * std::log(uniform())) * std::cos(2.0 * M_PI * uniform());
    points.push_back(p.position + error * Vec2(-p.d1.y(), p.d1.x()).normalized());
  }
  return points;
}

inline std::shared_ptr<const Profile> s1002() { return load_profile("standard:S1002", ProfileKind::wheel); }
inline std::shared_ptr<const Profile> rail60() { return load_profile("standard:60E1", ProfileKind::rail); }

/// Parameter where the curve passes y, for curves whose y increases.
inline double parameter_at_y(const ProfileCurve& curve, double y) {
  double a = curve.t_begin(), b = curve.t_end();
  for (int step = 0; step < 80; ++step) {
    const double middle = 0.5 * (a + b);
    (curve.at(middle).y() < y ? a : b) = middle;
  }
  return 0.5 * (a + b);
}

/// Curvature of the parabola that fits the curve best over a window of the given width, as over a contact patch.
inline double window_curvature(const ProfileCurve& curve, double y, double width_mm) {
  const double t = parameter_at_y(curve, y);
  const CurvePoint middle = curve.at(t);
  const double half = 0.5 * width_mm / middle.d1.norm();
  const Vec2 along = (curve.at(t + half).position - curve.at(t - half).position).normalized();
  double n = 0, x2 = 0, x4 = 0, sum = 0, sum2 = 0;
  for (int k = -50; k <= 50; ++k) {
    const Vec2 d = curve.at(t + half * k / 50.0).position - middle.position;
    const double x = d.dot(along), z = along.x() * d.y() - along.y() * d.x();
    n += 1;
    x2 += x * x;
    x4 += x * x * x * x;
    sum += z;
    sum2 += x * x * z;
  }
  return 2.0 * (n * sum2 - x2 * sum) / (n * x4 - x2 * x2);
}

}  // namespace runband
