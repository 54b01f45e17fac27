// The fallbacks of the normal problem, for gaps whose active sets do not settle. Given load: a search over the
// approach. Given approach: a quadratic problem with bounds, solved by projected conjugate gradients that cannot cycle.
// Source: Z. Dostal, Optimal Quadratic Programming Algorithms (2009), section 5.6 (MPRGP).
#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>

#include "core/halfspace/normal_level.h"

namespace runband::halfspace {

namespace {

double sum_of(const std::vector<double>& q) { return std::accumulate(q.begin(), q.end(), 0.0); }

}  // namespace

void solve_level_by_approach(const LevelProblem& problem, LevelState& state, const Progress& progress) {
  constexpr int kMostSolves = 100;
  LevelProblem given = problem;
  given.sum.reset();
  given.tolerance = std::min(1e-10, problem.tolerance);  // or the load would be noise to the search
  double low = *std::min_element(problem.gap.begin(), problem.gap.end()), low_excess = -*problem.sum;
  double high = std::max(state.approach, low), high_excess = 0;
  if (!(high > low) || !std::isfinite(high)) high = low + *problem.sum;
  state.converged = false;
  const auto excess = [&](double approach) {
    given.approach = approach;
    solve_level(given, state, progress);
    return sum_of(state.q) - *problem.sum;
  };
  int solves = 0;
  for (; solves < kMostSolves; ++solves) {  // the load grows with the approach
    high_excess = excess(high);
    if (!state.converged) return;
    if (high_excess >= 0) break;
    const double step = high - low;
    low = high;
    low_excess = high_excess;
    high += 2.0 * step;
  }
  // Regula falsi, halving the weight of the end that stays (Illinois).
  int stays = 0;
  double here = high_excess;
  for (; solves < kMostSolves && std::abs(here) > 1e-9 * *problem.sum && high - low > 1e-15 * std::abs(high);
       ++solves) {
    const double approach = (low * high_excess - high * low_excess) / (high_excess - low_excess);
    here = excess(approach);
    if (!state.converged) return;
    if (here > 0) {
      high = approach;
      high_excess = here;
      if (stays == 1) low_excess *= 0.5;
      stays = 1;
    } else {
      low = approach;
      low_excess = here;
      if (stays == -1) high_excess *= 0.5;
      stays = -1;
    }
  }
  state.converged = std::abs(here) <= 1e-8 * *problem.sum && rescale(state.q, *problem.sum, problem.cap, state.g);
}

void solve_level_steadily(const LevelProblem& problem, LevelState& state, const Progress& progress) {
  constexpr int kMostSteps = 20000;
  constexpr int kRefresh = 50;  // steps after which the gradient is computed anew: updates gather rounding
  const std::size_t n = problem.gap.size();
  const Convolver<double>& kernel = problem.kernel->exact;
  auto work = kernel.workspace();
  std::vector<double>&q = state.q, &g = state.g;
  state.approach = *problem.approach;
  g.resize(n);
  std::vector<double> p(n), kp(n);
  const int spectrum = kernel.transform().spectrum_size();
  const double norm = *std::max_element(kernel.symbol(), kernel.symbol() + spectrum) *
                      (static_cast<double>(kernel.transform().px()) * kernel.transform().ps());
  const double fixed_step = 1.9 / norm;  // below 2/||K||: every such step goes downhill
  const auto is_free = [&](std::size_t k) { return q[k] > 0 && q[k] < problem.cap; };
  const auto chopped = [&](std::size_t k) {  // what pulls a cell off its bound
    if (q[k] <= 0) return std::min(g[k], 0.0);
    return q[k] >= problem.cap ? std::max(g[k], 0.0) : 0.0;
  };
  const auto gradient = [&] {
    kernel.apply(q.data(), g.data(), work);
    state.work += 1;
    for (std::size_t k = 0; k < n; ++k) g[k] += problem.gap[k] - state.approach;
  };
  const auto along = [&] {  // curvature along p
    kernel.apply(p.data(), kp.data(), work);
    state.work += 1;
    double sum = 0;
    for (std::size_t k = 0; k < n; ++k) sum += p[k] * kp[k];
    return sum;
  };
  const auto feasible = [&] {  // longest step along -p within the bounds
    double step = std::numeric_limits<double>::infinity();
    for (std::size_t k = 0; k < n; ++k) {
      if (p[k] > 0) step = std::min(step, q[k] / p[k]);
      if (p[k] < 0) step = std::min(step, (q[k] - problem.cap) / p[k]);
    }
    return step;
  };
  const auto go = [&](double step) {
    for (std::size_t k = 0; k < n; ++k) {
      q[k] = std::clamp(q[k] - step * p[k], 0.0, problem.cap);
      g[k] -= step * kp[k];
    }
  };
  gradient();
  bool restart = true;
  for (int step = 0; step < kMostSteps; ++step) {
    progress.check();
    ++state.iterations;
    if (step % kRefresh == kRefresh - 1) gradient();
    double free_square = 0, reduced = 0, chopped_square = 0, scale = 0;
    for (std::size_t k = 0; k < n; ++k) {
      if (is_free(k)) {
        const double most = (g[k] > 0 ? q[k] : q[k] - problem.cap) / fixed_step;
        free_square += g[k] * g[k];
        reduced += g[k] * (g[k] > 0 ? std::min(most, g[k]) : std::max(most, g[k]));
      } else if (const double c = chopped(k); c != 0.0) {
        chopped_square += c * c;
      }
      if (q[k] > 0) {
        const double u = g[k] - problem.gap[k] + state.approach;
        scale += u * u;
      }
    }
    const double remaining = free_square + chopped_square;
    state.residual = remaining <= 0 ? 0.0 : scale > 0 ? std::sqrt(remaining / scale) : 1.0;
    if (state.residual <= 0.5 * problem.tolerance) {
      gradient();
      state.converged = true;
      return;
    }
    if (chopped_square > reduced) {  // proportioning: release cells
      for (std::size_t k = 0; k < n; ++k) p[k] = chopped(k);
      const double curvature = along();
      go(std::min(chopped_square / curvature, feasible()));
      restart = true;
      continue;
    }
    if (restart) {
      for (std::size_t k = 0; k < n; ++k) p[k] = is_free(k) ? g[k] : 0.0;
      restart = false;
    }
    const double curvature = along();
    double slope = 0;
    for (std::size_t k = 0; k < n; ++k) slope += is_free(k) ? g[k] * p[k] : 0.0;
    const double wanted = slope / curvature, most = feasible();
    if (wanted <= most) {  // conjugate gradients on the face
      go(wanted);
      double coupling = 0;
      for (std::size_t k = 0; k < n; ++k) coupling += is_free(k) ? g[k] * kp[k] : 0.0;
      for (std::size_t k = 0; k < n; ++k) p[k] = is_free(k) ? g[k] - coupling / curvature * p[k] : 0.0;
    } else {  // expansion: to the bound, then a projected step of fixed length
      go(most);
      for (std::size_t k = 0; k < n; ++k) {
        if (is_free(k)) q[k] = std::clamp(q[k] - fixed_step * g[k], 0.0, problem.cap);
      }
      gradient();
      restart = true;
    }
  }
}

}  // namespace runband::halfspace
