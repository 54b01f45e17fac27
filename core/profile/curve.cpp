#include "core/profile/curve.h"

#include <algorithm>
#include <cmath>

namespace runband {

namespace {

// Distance of a point from the straight line through two others, or from the first if they coincide.
double distance_from_chord(const Vec2& point, const Vec2& from, const Vec2& to) {
  const Vec2 chord = to - from, offset = point - from;
  const double length = chord.norm();
  return length > 0.0 ? std::abs(chord.x() * offset.y() - chord.y() * offset.x()) / length : offset.norm();
}

class Sampler {
 public:
  Sampler(const ProfileCurve& curve, double chord_error, double max_step)
      : curve_(curve), chord_error_(chord_error), max_step_(max_step) {}

  // Everything after t0 up to and with t1, halving until the chord is near enough.
  void sample(const CurvePoint& p0, const CurvePoint& p1, int depth, std::vector<CurvePoint>& out) const {
    constexpr int kDeepest = 24;
    bool fine = (p1.position - p0.position).norm() <= max_step_;
    const double step = (p1.t - p0.t) / 8.0;
    for (int k = 1; k < 8 && fine; ++k)
      fine = distance_from_chord(curve_.at(p0.t + k * step).position, p0.position, p1.position) <= chord_error_;
    if (fine || depth >= kDeepest) {
      out.push_back(p1);
      return;
    }
    const CurvePoint middle = curve_.at(0.5 * (p0.t + p1.t));
    sample(p0, middle, depth + 1, out);
    sample(middle, p1, depth + 1, out);
  }

 private:
  const ProfileCurve& curve_;
  double chord_error_, max_step_;
};

}  // namespace

std::vector<CurvePoint> sample_curve(const ProfileCurve& curve, double chord_error_mm, double max_step_mm) {
  // No chord is trusted over more than this before its inside has been looked at (seven points to a piece).
  constexpr double kFirstLook_mm = 4.0;
  const Sampler sampler(curve, chord_error_mm, max_step_mm);
  const std::vector<double> breaks = curve.breaks();
  std::vector<CurvePoint> points{curve.at(breaks.front())};
  for (std::size_t i = 1; i < breaks.size(); ++i) {
    const double span = breaks[i] - breaks[i - 1];
    if (!(span > 0.0)) continue;
    std::vector<CurvePoint> ends{points.back()};
    const int parts = std::max(1, static_cast<int>(std::ceil(span / kFirstLook_mm)));
    for (int k = 1; k <= parts; ++k) ends.push_back(curve.at(breaks[i - 1] + span * k / parts));
    // A straight piece needs no points inside.
    const auto off = [&](const CurvePoint& p) {
      return distance_from_chord(p.position, ends.front().position, ends.back().position);
    };
    bool straight = (ends.back().position - ends.front().position).norm() <= max_step_mm;
    for (int k = 1; k < 8 * parts && straight; ++k)
      straight = off(curve.at(breaks[i - 1] + span * k / (8 * parts))) <= chord_error_mm;
    if (straight) {
      points.push_back(ends.back());
      continue;
    }
    for (int k = 1; k <= parts; ++k)
      sampler.sample(ends[static_cast<std::size_t>(k) - 1], ends[static_cast<std::size_t>(k)], 0, points);
  }
  return points;
}

}  // namespace runband
