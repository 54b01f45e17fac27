#include "core/pairing/outline.h"

#include <algorithm>
#include <cmath>

namespace runband {

std::vector<CurvePoint> even_samples(const ProfileCurve& curve, double step_mm) {
  const std::vector<double> breaks = curve.breaks();
  std::vector<CurvePoint> points{curve.at(breaks.front())};
  for (std::size_t i = 1; i < breaks.size(); ++i) {
    const double from = breaks[i - 1], span = breaks[i] - from;
    if (!(span > 0.0)) continue;
    double speed = 0.0;
    constexpr int kProbes = 8;
    for (int k = 0; k <= kProbes; ++k) speed = std::max(speed, curve.at(from + span * k / kProbes).d1.norm());
    const int parts = std::max(1, static_cast<int>(std::ceil(span * speed / step_mm)));
    for (int k = 1; k < parts; ++k) points.push_back(curve.at(from + span * k / parts));
    points.push_back(curve.at(breaks[i]));
  }
  return points;
}

}  // namespace runband
