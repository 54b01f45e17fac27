#include "core/halfspace/rolling_newton.h"

#include <algorithm>
#include <cmath>

namespace runband::halfspace {
namespace {

constexpr double kSaturated = 1.0 - 1e-12;  // |p| at least this part of g may slip
constexpr int kMaxKrylov = 40;
constexpr double kOuterCost = 2.0;  // of a double convolution in float ones

/// Classifies the cells and fills the rows of one step; returns the number of cells whose state changed.
std::size_t linearise(const RollingLevel& level, const std::vector<double>& p, const std::vector<double>& slip,
                      double sigma, std::vector<SlipState>& state, LinearSystem& system, std::vector<float>& rhs) {
  const std::size_t n = level.cells();
  const double d = level.op->own_xx(), kappa = 2.0 * level.op->influence_own(), here = level.op->shape().stencil.here;
  std::size_t changed = 0;
  system.sigma = sigma;
  for (std::size_t c = 0; c < n; ++c) {
    if (level.in[c] == 0) continue;
    const double px = p[2 * c], ps = p[2 * c + 1], sx = slip[2 * c], ss = slip[2 * c + 1], g = level.bound[c];
    const double size = std::sqrt(px * px + ps * ps);
    const bool slips = size >= g * kSaturated && sx * px + ss * ps < 0;
    const SlipState now = slips ? SlipState::slip : SlipState::stick;
    changed += now != state[c] ? 1U : 0U;
    state[c] = now;
    const double ex = level.edge[2 * c], es = level.edge[2 * c + 1];
    double tx = 0, ts = 0, own_x = ex, own_s = es, wx = 1.0 / std::sqrt(1.0 + ex / kappa),
           ws = 1.0 / std::sqrt(1.0 + es / kappa);
    if (slips) {
      tx = -ps / size;
      ts = px / size;
      const double lambda = std::max(0.0, -(sx * px + ss * ps) / (size * g));
      own_x += lambda;
      own_s += lambda;
      wx = ws = 1.0 / std::sqrt(1.0 + (lambda + tx * tx * ex + ts * ts * es) / kappa);
      const double along = -wx * (tx * sx + ts * ss) / d;
      rhs[2 * c] = static_cast<float>(along * tx);
      rhs[2 * c + 1] = static_cast<float>(along * ts);
    } else {
      rhs[2 * c] = static_cast<float>(-wx * sx / d);
      rhs[2 * c + 1] = static_cast<float>(-ws * ss / d);
    }
    system.mask[2 * c] = system.mask[2 * c + 1] = slips ? 0.0F : 1.0F;
    system.tangent[2 * c] = static_cast<float>(tx);
    system.tangent[2 * c + 1] = static_cast<float>(ts);
    system.own[2 * c] = static_cast<float>(own_x);
    system.own[2 * c + 1] = static_cast<float>(own_s);
    system.weight[2 * c] = static_cast<float>(wx);
    system.weight[2 * c + 1] = static_cast<float>(ws);
    system.gain[2 * c] = static_cast<float>(d / wx);
    system.gain[2 * c + 1] = static_cast<float>(d / ws);
    system.pivot[2 * c] = static_cast<float>(1.0 / (here + (own_x + sigma) / kappa));
    system.pivot[2 * c + 1] = static_cast<float>(1.0 / (here + (own_s + sigma) / kappa));
  }
  return changed;
}

/// p += dp; slip cells back onto |p| = g, stick cells above it clipped.
void update(const RollingLevel& level, const std::vector<SlipState>& state, const std::vector<float>& dp,
            std::vector<double>& p) {
  for (std::size_t c = 0; c < level.cells(); ++c) {
    if (level.in[c] == 0) continue;
    double x = p[2 * c] + static_cast<double>(dp[2 * c]), s = p[2 * c + 1] + static_cast<double>(dp[2 * c + 1]);
    const double size = std::sqrt(x * x + s * s), g = level.bound[c];
    if ((state[c] == SlipState::slip && size > 0) || size > g) {
      x *= g / size;
      s *= g / size;
    }
    p[2 * c] = x;
    p[2 * c + 1] = s;
  }
}

}  // namespace

void slip_of(const RollingLevel& level, const std::vector<double>& p, PairScratch<double>& scratch,
             std::vector<double>& slip) {
  slip.resize(p.size());
  level.op->apply(p.data(), slip.data(), scratch);
  for (std::size_t i = 0; i < p.size(); ++i) {
    slip[i] = level.in[i / 2] != 0 ? slip[i] + level.rigid[i] + level.edge[i] * p[i] : 0.0;
  }
}

namespace {

/// The same in single precision: good to a few 1e-6 of the largest slip.
void rough_slip_of(const RollingLevel& level, const std::vector<double>& p, RollingScratch& scratch,
                   std::vector<double>& slip) {
  scratch.step.resize(p.size());
  for (std::size_t i = 0; i < p.size(); ++i) scratch.step[i] = static_cast<float>(p[i]);
  level.op->apply(scratch.step.data(), scratch.step.data(), scratch.fast);
  slip.resize(p.size());
  for (std::size_t i = 0; i < p.size(); ++i) {
    slip[i] = level.in[i / 2] != 0 ? static_cast<double>(scratch.step[i]) + level.rigid[i] + level.edge[i] * p[i] : 0.0;
  }
}

// Above this residual single precision is good enough to evaluate one.
constexpr double kRough = 5e-5;

/// Slip and residual of p, in double precision where the residual asks for it. Adds its cost to `convolutions`.
double evaluate(const RollingLevel& level, const std::vector<double>& p, double last, RollingScratch& scratch,
                std::vector<double>& slip, double& convolutions) {
  if (last > 20 * kRough) {
    rough_slip_of(level, p, scratch, slip);
    convolutions += 1;
    const double err = friction_residual(level, p, slip);
    if (err > kRough) return err;
  }
  slip_of(level, p, scratch.fine, slip);
  convolutions += kOuterCost;
  return friction_residual(level, p, slip);
}

}  // namespace

double friction_residual(const RollingLevel& level, const std::vector<double>& p, const std::vector<double>& slip) {
  const double inverse_d = 1.0 / level.op->own_xx();
  double off = 0, all = 0;
  for (std::size_t c = 0; c < level.cells(); ++c) {
    if (level.in[c] == 0) continue;
    double x = p[2 * c] - slip[2 * c] * inverse_d, s = p[2 * c + 1] - slip[2 * c + 1] * inverse_d;
    const double size = std::sqrt(x * x + s * s), g = level.bound[c];
    if (size > g) {
      x *= g / size;
      s *= g / size;
    }
    off += (x - p[2 * c]) * (x - p[2 * c]) + (s - p[2 * c + 1]) * (s - p[2 * c + 1]);
    all += p[2 * c] * p[2 * c] + p[2 * c + 1] * p[2 * c + 1];
  }
  if (off == 0) return 0;
  return all > 0 ? std::sqrt(off / all) : 1.0;
}

NewtonResult solve_newton(const RollingLevel& level, const NewtonOptions& options, const Progress& progress,
                          RollingScratch& scratch, std::vector<double>& p, std::vector<double>& slip) {
  const std::size_t n = level.cells();
  const double d = level.op->own_xx();
  const double inner_cost = 1.0 + level.op->circulant_cost();

  LinearSystem system;
  system.level = &level;
  system.mask.assign(2 * n, 0.0F);
  system.tangent.assign(2 * n, 0.0F);
  system.own.assign(2 * n, 0.0F);
  system.weight.assign(2 * n, 0.0F);
  system.gain.assign(2 * n, 0.0F);
  system.pivot.assign(2 * n, 0.0F);
  scratch.rhs.assign(2 * n, 0.0F);
  std::vector<SlipState> state(n, SlipState::open);
  std::vector<double> best_p = p;

  NewtonResult result;
  double err = evaluate(level, p, 1.0, scratch, slip, result.convolutions), last = err, best = err;
  double sigma = 0;
  int stalled = 0;
  const auto in_contact = static_cast<double>(std::count(level.in.begin(), level.in.end(), 1));
  while (err > options.tolerance && result.steps < options.max_steps) {
    progress.check();
    const std::size_t changed = linearise(level, p, slip, sigma, state, system, scratch.rhs);
    const double forcing = std::max({0.5 * (err / last) * (err / last), 0.3 * options.tolerance / err, 2e-3});
    double tolerance = std::min(forcing, 0.1);
    if (static_cast<double>(changed) > 0.002 * in_contact) tolerance = 0.15;
    if (stalled >= 2) tolerance = std::min(tolerance, stalled >= 6 ? 0.003 : 0.02);
    const KrylovResult krylov =
        solve_fgmres(system, scratch.rhs, tolerance, kMaxKrylov, scratch.krylov, scratch.fast, scratch.step);
    result.convolutions += krylov.iterations * inner_cost;
    update(level, state, scratch.step, p);
    ++result.steps;
    last = err;
    err = evaluate(level, p, last, scratch, slip, result.convolutions);
    if (err < best) {
      best = err;
      stalled = 0;
      best_p = p;
      sigma *= 0.3;
      if (sigma < 0.01 * d) sigma = 0;
    } else {
      ++stalled;
      if (stalled >= 2) sigma = std::min(std::max(0.05 * d, 1.7 * sigma), 2.0 * d);
    }
  }
  if (err > best) {
    p = best_p;
    slip_of(level, p, scratch.fine, slip);
  }
  result.residual = best;
  result.converged = best <= options.tolerance;
  return result;
}

}  // namespace runband::halfspace
