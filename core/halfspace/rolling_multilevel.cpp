#include "core/halfspace/rolling_multilevel.h"

#include <algorithm>
#include <cmath>
#include <string>

namespace runband::halfspace {
namespace {

constexpr int kCoarsestCells = 27;
constexpr double kCoarseTolerance = 1e-3;
constexpr std::size_t kKeptCells = 256 * 256;

double squared(const std::vector<double>& v) {
  double sum = 0;
  for (const double x : v) sum += x * x;
  return sum;
}

}  // namespace

bool march_to_steady(const RollingLevel& level, const NewtonOptions& options, const Progress& progress,
                     RollingScratch& scratch, std::vector<double>& traction, std::vector<double>& slip,
                     MultilevelResult& account) {
  const SlipStencil steady = level.op->shape().stencil;
  OperatorShape shape = level.op->shape();
  shape.stencil = {steady.here, 0, 0};
  RollingLevel step = level;
  step.op = std::make_shared<const RollingOperator>(shape);
  shape.stencil = {0, steady.ahead, steady.ahead2};
  const RollingOperator before(shape);

  const NewtonOptions inner{std::max(1e-12, 0.01 * options.tolerance), options.max_steps};
  const int limit = 60 * (level.nx() + 10);
  std::vector<double> past(traction.size()), old, step_slip;
  for (int k = 0; k < limit; ++k) {
    progress.check();
    old = traction;
    before.apply(traction.data(), past.data(), scratch.fine);
    for (std::size_t i = 0; i < past.size(); ++i) step.rigid[i] = level.rigid[i] + past[i];
    const NewtonResult r = solve_newton(step, inner, progress, scratch, traction, step_slip);
    account.steps += r.steps;
    account.convolutions += r.convolutions + 2.0;
    double change = 0;
    for (std::size_t i = 0; i < old.size(); ++i) change += (traction[i] - old[i]) * (traction[i] - old[i]);
    if (change <= 1e-16 * squared(traction)) break;
  }
  slip_of(level, traction, scratch.fine, slip);
  account.residual = friction_residual(level, traction, slip);
  return account.residual <= options.tolerance;
}

MultilevelResult solve_multilevel(const RollingLevel& finest, const NewtonOptions& options, const Progress& progress) {
  std::vector<RollingLevel> coarser;  // finest first
  const auto current = [&]() -> const RollingLevel& { return coarser.empty() ? finest : coarser.back(); };
  while (std::max(current().nx(), current().ns()) > kCoarsestCells) {
    RollingLevel next = coarsen(current());
    if (std::count(next.in.begin(), next.in.end(), 1) == 0) break;
    coarser.push_back(std::move(next));
  }

  MultilevelResult result;
  result.grids = static_cast<int>(coarser.size()) + 1;
  // One per thread and kept: fresh memory costs more than a coarse solve. Released when a large problem is done.
  thread_local RollingScratch kept;
  RollingScratch local;
  RollingScratch& scratch = finest.cells() <= kKeptCells ? kept : local;
  std::vector<double> p = simplified_start(current()), slip;
  const auto finest_points = static_cast<double>(finest.op->points());
  const NewtonOptions rough{std::max(kCoarseTolerance, options.tolerance), options.max_steps};
  for (std::size_t k = coarser.size(); k-- > 0;) {
    const RollingLevel& level = coarser[k];
    const NewtonResult r = solve_newton(level, rough, progress, scratch, p, slip);
    result.steps += r.steps;
    result.convolutions += r.convolutions * static_cast<double>(level.op->points()) / finest_points;
    p = prolong(level, p, k == 0 ? finest : coarser[k - 1]);
    if (progress.report) progress.at(1.0 / static_cast<double>(1U << (2 * k)) * 0.2, "rolling on a coarser grid");
  }
  const NewtonResult r = solve_newton(finest, options, progress, scratch, p, slip);
  result.steps += r.steps;
  result.convolutions += r.convolutions;
  result.residual = r.residual;
  if (!r.converged) {
    result.used_fallback = true;
    if (!march_to_steady(finest, options, progress, scratch, p, slip, result)) {
      throw NotConverged(
          "rolling contact on " + std::to_string(finest.nx()) + " x " + std::to_string(finest.ns()) + " cells",
          result.steps, result.residual,
          "try fewer cells, a looser tolerance, or the simplified theory; check pressure and friction for jumps.");
    }
  }
  result.traction = std::move(p);
  result.slip = std::move(slip);
  return result;
}

}  // namespace runband::halfspace
