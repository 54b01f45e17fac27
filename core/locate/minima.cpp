// Local minima of the gap between the contact locus and the rail: found on samples, polished on the exact curves.
#include <algorithm>
#include <cmath>
#include <limits>

#include "core/locate/side.h"

namespace runband {

namespace {

constexpr double kTableError_mm = 2e-4;  // of the scan, generously
constexpr double kNearEdge = 1e-3;       // slope difference below which a minimum is smooth, not a corner

// Whether sample i is no higher than its neighbours (on a plateau, its flange-side end).
bool is_minimum(const Eigen::ArrayXd& gap, Eigen::Index i) {
  if (!std::isfinite(gap[i])) return false;
  const bool left = i == 0 || gap[i - 1] > gap[i];
  const bool right = i + 1 == gap.size() || gap[i + 1] >= gap[i];
  return left && right;
}

// How far below sample i the minimum between its neighbours can lie.
double depth_below(const Eigen::ArrayXd& gap, Eigen::Index i) {
  double rise = 0.0;
  for (const Eigen::Index k : {i - 1, i + 1})
    if (k >= 0 && k < gap.size() && std::isfinite(gap[k])) rise = std::max(rise, gap[k] - gap[i]);
  return 0.5 * rise + kTableError_mm;
}

}  // namespace

Touch SideGeometry::polish(Eigen::Index i, const SidePose& pose, const SearchSpace& space) const {
  const Eigen::Index n = t_.size();
  // Bracket: the neighbouring samples, or as far as both profiles reach.
  const auto reach = [&](Eigen::Index neighbour) {
    if (neighbour < 0 || neighbour >= n) return t_[i];
    if (std::isfinite(space.gap[neighbour])) return t_[neighbour];
    double inside = t_[i], outside = t_[neighbour];
    for (int k = 0; k < 50; ++k) {
      const double middle = 0.5 * (inside + outside);
      (std::isfinite(sample(middle, pose).gap) ? inside : outside) = middle;
    }
    return inside;
  };
  double a = reach(i - 1), b = reach(i + 1);
  Sampled at_a = sample(a, pose), at_b = sample(b, pose), best;
  double t = t_[i];
  bool smooth = true;
  if (at_a.slope_difference < 0.0 && at_b.slope_difference > 0.0) {
    // The gap falls at a and rises at b: the root of the slope difference, by false position with bisection behind it.
    double fa = at_a.slope_difference, fb = at_b.slope_difference;
    const double tolerance = 1e-10 * (b - a);
    int side = 0;
    for (int k = 0; k < 80; ++k) {
      t = k % 8 == 7 ? 0.5 * (a + b) : (a * fb - b * fa) / (fb - fa);
      if (!(t > a && t < b)) t = 0.5 * (a + b);
      best = sample(t, pose);
      const double f = best.slope_difference;
      if (f == 0.0 || std::abs(f) < 1e-13 || b - a < tolerance) break;
      if (f > 0.0) {
        b = t;
        fb = f;
        if (side == 1) fa *= 0.5;
        side = 1;
      } else {
        a = t;
        fa = f;
        if (side == -1) fb *= 0.5;
        side = -1;
      }
    }
    smooth = std::abs(best.slope_difference) < kNearEdge;
  } else {
    // An end of a profile, or a fold of the locus: golden section on the gap itself.
    constexpr double kGolden = 0.6180339887498949;
    double c = b - kGolden * (b - a), d = a + kGolden * (b - a);
    Sampled at_c = sample(c, pose), at_d = sample(d, pose);
    while (b - a > 1e-9) {
      if (at_c.gap < at_d.gap) {
        b = d;
        at_b = at_d;
        d = c;
        at_d = at_c;
        c = b - kGolden * (b - a);
        at_c = sample(c, pose);
      } else {
        a = c;
        at_a = at_c;
        c = d;
        at_c = at_d;
        d = a + kGolden * (b - a);
        at_d = sample(d, pose);
      }
    }
    best = at_a.gap <= at_b.gap ? at_a : at_b;
    t = at_a.gap <= at_b.gap ? a : b;
    if (best.gap > space.gap[i] + kTableError_mm) {
      best = sample(t_[i], pose);
      t = t_[i];
    }
    smooth = std::abs(best.slope_difference) < kNearEdge;
  }
  Touch touch;
  touch.t = t;
  touch.tau = best.rail.tau;
  touch.wheel = best.wheel.position;
  touch.rail = best.rail.position;
  touch.tangent = best.rail.tangent;
  touch.gap = best.gap;
  touch.at_edge = !smooth;
  return touch;
}

bool SideGeometry::lowest(const SidePose& pose, SearchSpace& space, Touch& touch) const {
  scan(pose, space);
  const Eigen::ArrayXd& gap = space.gap;
  Eigen::Index least = 0;
  const double bound = gap.minCoeff(&least);
  if (!std::isfinite(bound)) return false;
  touch = polish(least, pose, space);
  for (Eigen::Index i = 0; i < gap.size(); ++i) {
    if (i == least || !is_minimum(gap, i) || gap[i] - depth_below(gap, i) > touch.gap) continue;
    const Touch other = polish(i, pose, space);
    if (other.gap < touch.gap) touch = other;
  }
  return true;
}

std::vector<Touch> SideGeometry::minima(const SidePose& pose, SearchSpace& space, double within_mm) const {
  scan(pose, space);
  const Eigen::ArrayXd& gap = space.gap;
  std::vector<Touch> touches;
  const double bound = gap.minCoeff();
  if (!std::isfinite(bound)) return touches;
  for (Eigen::Index i = 0; i < gap.size(); ++i) {
    if (!is_minimum(gap, i) || gap[i] - depth_below(gap, i) > bound + within_mm) continue;
    const Touch touch = polish(i, pose, space);
    if (!std::isfinite(touch.gap)) continue;
    constexpr double kSame_mm = 1e-3;
    if (!touches.empty() && (touches.back().wheel - touch.wheel).norm() < kSame_mm) {
      if (touch.gap < touches.back().gap) touches.back() = touch;
      continue;
    }
    touches.push_back(touch);
  }
  double lowest = std::numeric_limits<double>::infinity();
  for (const Touch& touch : touches) lowest = std::min(lowest, touch.gap);
  std::erase_if(touches, [&](const Touch& touch) { return touch.gap > lowest + within_mm; });
  return touches;
}

}  // namespace runband
