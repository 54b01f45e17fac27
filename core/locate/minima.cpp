// Local minima of the gap between the contact locus and the rail: found on samples, polished on the exact curves.
#include <algorithm>
#include <cmath>
#include <limits>

#include "core/locate/side.h"

namespace runband {

namespace {

constexpr double kInfinity = std::numeric_limits<double>::infinity();
constexpr double kTableError_mm = 2e-4;  // of the scan, generously
constexpr double kTangent = 3e-12;       // angle at which the tangents of wheel and rail are one
constexpr double kNearEdge = 1e-3;       // slope difference below which a minimum is smooth, not a corner

// Whether sample i is no higher than its neighbours (on a plateau, its flange-side end).
bool is_minimum(const Eigen::ArrayXd& gap, Eigen::Index i) {
  if (!(gap[i] < kInfinity)) return false;
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

// The neighbours of sample i, or as far as both profiles reach.
SideGeometry::Bracket SideGeometry::bracket(Eigen::Index i, const SidePose& pose, const SearchSpace& space) const {
  const auto reach = [&](Eigen::Index neighbour) {
    if (neighbour < 0 || neighbour >= t_.size()) return t_[i];
    if (std::isfinite(space.gap[neighbour])) return t_[neighbour];
    double inside = t_[i], outside = t_[neighbour];
    for (int k = 0; k < 50; ++k) {
      const double middle = 0.5 * (inside + outside);
      (std::isfinite(sample(middle, pose).gap) ? inside : outside) = middle;
    }
    return inside;
  };
  Bracket found;
  found.a = reach(i - 1);
  found.b = reach(i + 1);
  found.t = t_[i];
  found.at_a = sample(found.a, pose);
  found.at_b = sample(found.b, pose);
  return found;
}

Touch SideGeometry::polish(Eigen::Index i, const SidePose& pose, const SearchSpace& space, const double* known) const {
  Bracket here = bracket(i, pose, space);
  // The scan's table may be off by a sample where wheel and rail nearly fit: on, downhill.
  while (here.at_a.slope_difference * here.at_b.slope_difference > 0.0) {
    const int down = here.at_a.slope_difference > 0.0 ? -2 : 2;
    const Eigen::Index on = i + down;
    if (on < 1 || on + 1 >= t_.size() || !std::isfinite(space.gap[on - 1]) || !std::isfinite(space.gap[on + 1])) break;
    if (sample(here.t, pose).gap < std::min(here.at_a.gap, here.at_b.gap)) break;  // a dip after all
    i = on;
    (down < 0 ? here.b : here.a) = down < 0 ? here.a : here.b;
    (down < 0 ? here.at_b : here.at_a) = down < 0 ? here.at_a : here.at_b;
    here.t = t_[i];
    (down < 0 ? here.a : here.b) = t_[down < 0 ? i - 1 : i + 1];
    (down < 0 ? here.at_a : here.at_b) = sample(down < 0 ? here.a : here.b, pose);
    if (known && *known >= here.a && *known <= here.b) return {.t = *known, .gap = kInfinity};
  }
  double a = here.a, b = here.b, t = here.t;
  Sampled at_a = here.at_a, at_b = here.at_b, best;
  bool smooth = true;
  if (std::abs(at_a.slope_difference) < kTangent && std::abs(at_b.slope_difference) < kTangent) {
    best = sample(t, pose);  // wheel and rail fit here: one point is as good as another
  } else if (at_a.slope_difference < 0.0 && at_b.slope_difference > 0.0) {
    // The gap falls at a and rises at b: the root of the slope difference, by false position with bisection behind it.
    double fa = at_a.slope_difference, fb = at_b.slope_difference;
    const double tolerance = 1e-10 * (b - a);
    int side = 0;
    for (int k = 0; k < 80; ++k) {
      t = k % 8 == 7 ? 0.5 * (a + b) : (a * fb - b * fa) / (fb - fa);
      if (!(t > a && t < b)) t = 0.5 * (a + b);
      best = sample(t, pose);
      const double f = best.slope_difference;
      if (std::abs(f) < kTangent || b - a < tolerance) break;
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
  touch.miss = best.slope_difference;
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
  for (Eigen::Index i = space.first; i < space.last; ++i) {
    if (i == least || !is_minimum(gap, i) || gap[i] - depth_below(gap, i) > touch.gap) continue;
    const Touch other = polish(i, pose, space, &touch.t);
    if (other.gap < touch.gap) touch = other;
  }
  return true;
}

bool SideGeometry::undercut(const SidePose& pose, SearchSpace& space, Touch& touch, double& margin_mm) const {
  scan(pose, space);
  const Eigen::ArrayXd& gap = space.gap;
  const Eigen::Index n = gap.size();
  margin_mm = kInfinity;
  const double own = touch.t;
  bool lower = false;
  // Between neighbouring samples the gap changes by less than this, down the steepest gauge face.
  constexpr double kSteep_mm = 10.0;
  const double high = touch.gap + kSteep_mm;
  for (Eigen::Index i = space.first; i < space.last; ++i) {
    if (!(gap[i] < high) || !is_minimum(gap, i)) continue;
    if (own >= t_[std::max<Eigen::Index>(i - 1, 0)] && own <= t_[std::min(i + 1, n - 1)]) continue;
    double other_gap = gap[i];
    if (other_gap - depth_below(gap, i) <= touch.gap) {
      const Touch other = polish(i, pose, space, &own);
      constexpr double kSame_mm = 1e-3;
      if (std::abs(other.t - own) < kSame_mm) continue;
      other_gap = other.gap;
      if (other.gap < touch.gap) {
        margin_mm = touch.gap - other.gap;
        touch = other;
        lower = true;
        continue;
      }
    }
    margin_mm = std::min(margin_mm, other_gap - touch.gap);
  }
  return lower;
}

std::vector<Touch> SideGeometry::minima(const SidePose& pose, SearchSpace& space, double within_mm) const {
  scan(pose, space);
  const Eigen::ArrayXd& gap = space.gap;
  std::vector<Touch> touches;
  const double bound = gap.minCoeff();
  if (!std::isfinite(bound)) return touches;
  for (Eigen::Index i = space.first; i < space.last; ++i) {
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
  double lowest = kInfinity;
  for (const Touch& touch : touches) lowest = std::min(lowest, touch.gap);
  std::erase_if(touches, [&](const Touch& touch) { return touch.gap > lowest + within_mm; });
  return touches;
}

}  // namespace runband
