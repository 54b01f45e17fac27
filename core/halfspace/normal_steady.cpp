// The fallback of the normal problem: conjugate gradients over the changing set of loaded cells, in double precision.
// Source: I. A. Polonsky & L. M. Keer, Wear 231 (1999) 206; the cap on the pressure is treated like the floor at zero.
#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>

#include "core/halfspace/normal_level.h"

namespace runband::halfspace {

namespace {

// Brings the sum of q to `sum` also where the loaded cells alone cannot: fills empty cells, smallest gap first.
bool refill(const LevelProblem& problem, std::vector<double>& q) {
  if (rescale(q, *problem.sum, problem.cap)) return true;
  double missing = *problem.sum - std::accumulate(q.begin(), q.end(), 0.0);
  std::vector<std::size_t> order(q.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::stable_sort(order.begin(), order.end(),
                   [&](std::size_t a, std::size_t b) { return problem.gap[a] < problem.gap[b]; });
  const double share = std::isfinite(problem.cap) ? problem.cap : *problem.sum;
  for (const std::size_t k : order) {
    if (missing <= 0) break;
    if (q[k] > 0 || !std::isfinite(problem.gap[k])) continue;
    q[k] = std::min(share, missing);
    missing -= q[k];
  }
  return missing <= 1e-12 * *problem.sum;
}

}  // namespace

void solve_level_steadily(const LevelProblem& problem, LevelState& state, const Progress& progress) {
  constexpr int kMostSteps = 2000;
  const std::size_t n = problem.gap.size();
  const bool keeps_sum = problem.sum.has_value();
  auto work = problem.kernel->exact.workspace();
  std::vector<double>&q = state.q, &g = state.g;
  g.resize(n);
  std::vector<double> t(n, 0.0), r(n);
  if (keeps_sum && !refill(problem, q)) return;  // more load than the hardness allows on these cells
  double previous = 1.0;
  bool keeps_direction = false;
  for (int step = 0; step < kMostSteps; ++step) {
    progress.check();
    const auto free = [&](std::size_t k) { return q[k] > 0 && q[k] < problem.cap; };
    problem.kernel->exact.apply(q.data(), g.data(), work);
    ++state.iterations;
    state.work += 1;
    if (keeps_sum) {
      double sum = 0, count = 0, low = -std::numeric_limits<double>::infinity(), high = -low;
      for (std::size_t k = 0; k < n; ++k) {
        const double level = g[k] + problem.gap[k];
        if (free(k)) {
          sum += level;
          count += 1;
        } else if (q[k] > 0) {
          low = std::max(low, level);
        } else {
          high = std::min(high, level);
        }
      }
      state.approach = count > 0 ? sum / count : (std::isfinite(high) ? std::max(low, 0.5 * (low + high)) : low);
    }
    double remaining = 0, scale = 0, square = 0;
    bool any = false;
    for (std::size_t k = 0; k < n; ++k) {
      const double u = g[k];
      g[k] += problem.gap[k] - state.approach;
      const bool wrong = (q[k] <= 0 && g[k] < 0) || (q[k] >= problem.cap && g[k] > 0);
      if (free(k) || wrong) {
        remaining += g[k] * g[k];
        any = true;
      }
      if (free(k)) square += g[k] * g[k];
      if (q[k] > 0 || wrong) scale += u * u;
    }
    state.residual = !any ? 0.0 : scale > 0 ? std::sqrt(remaining / scale) : 1.0;
    if (state.residual <= problem.tolerance) {
      state.converged = true;
      return;
    }
    const double beta = keeps_direction ? square / previous : 0.0;
    previous = std::max(square, 1e-300);
    for (std::size_t k = 0; k < n; ++k) t[k] = free(k) ? g[k] + beta * t[k] : 0.0;
    problem.kernel->exact.apply(t.data(), r.data(), work);
    state.work += 1;
    double mean = 0, count = 0;
    for (std::size_t k = 0; k < n; ++k) {
      if (free(k)) {
        mean += r[k];
        count += 1;
      }
    }
    mean = keeps_sum && count > 0 ? mean / count : 0.0;
    double gt = 0, rt = 0;
    for (std::size_t k = 0; k < n; ++k) {
      if (!free(k)) continue;
      gt += g[k] * t[k];
      rt += (r[k] - mean) * t[k];
    }
    // Without a curvature to go by (no free cell), a step of the size of one cell's own flexibility.
    const double own = 1.0 / 3.5;
    const double tau = rt > 0 ? gt / rt : own;
    keeps_direction = true;
    for (std::size_t k = 0; k < n; ++k) {
      if (free(k)) {
        const double value = q[k] - tau * t[k];
        q[k] = std::clamp(value, 0.0, problem.cap);
      } else if ((q[k] <= 0 && g[k] < 0) || (q[k] >= problem.cap && g[k] > 0)) {
        q[k] = std::clamp(q[k] - tau * g[k], 0.0, problem.cap);
        keeps_direction = false;
      }
    }
    if (keeps_sum && !refill(problem, q)) return;
  }
}

}  // namespace runband::halfspace
