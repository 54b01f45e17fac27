#include "core/halfspace/rolling.h"

#include <algorithm>
#include <cmath>

#include "core/halfspace/rolling_grid.h"
#include "core/halfspace/rolling_multilevel.h"

namespace runband::halfspace {
namespace {

/// The slip stencil of a discretisation. b = 0: first-order upwind, b = 1: second order.
SlipStencil steady_stencil(UpwindOrder order) {
  const double b = order == UpwindOrder::second ? 1.0 : 0.0;
  return {1 + b / 2, 1 + b, b / 2};
}

// 1 / (2^p - 1). The error of the forces falls with the power p = 1 to 1.9 of the cell size, measured on the linear creep
// coefficients; this p is 1.58.
constexpr double kRichardson = 0.5;

/// Cells too little covered to be solved for take the traction of their best neighbour in proportion to the bound.
void fill_slivers(const RollingProblem& problem, RollingResult& result) {
  if (problem.area_fraction.empty()) return;
  const Grid& g = problem.grid;
  const auto index = [&](int i, int j) {
    return static_cast<std::size_t>(j) * static_cast<std::size_t>(g.nx) + static_cast<std::size_t>(i);
  };
  const auto bound = [&](std::size_t c) {
    return problem.pressure_MPa[c] * (problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c]);
  };
  const std::vector<RollingState> solved = result.state;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const std::size_t c = index(i, j);
      if (solved[c] != RollingState::open || !(bound(c) > 0)) continue;
      std::size_t best = c;
      double covered = 0;
      for (int v = std::max(0, j - 1); v <= std::min(g.ns - 1, j + 1); ++v) {
        for (int u = std::max(0, i - 1); u <= std::min(g.nx - 1, i + 1); ++u) {
          const std::size_t k = index(u, v);
          if (solved[k] == RollingState::open || problem.area_fraction[k] <= covered) continue;
          covered = problem.area_fraction[k];
          best = k;
        }
      }
      if (best == c) continue;
      const double scale = bound(c) / bound(best);
      for (std::size_t k = 0; k < 2; ++k) {
        result.traction_MPa[2 * c + k] = scale * result.traction_MPa[2 * best + k];
        result.slip[2 * c + k] = result.slip[2 * best + k];
      }
      result.state[c] = solved[best];
    }
  }
}

void sum_forces(const Grid& g, RollingResult& result) {
  const double area = g.dx_mm * g.ds_mm;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const std::size_t c = static_cast<std::size_t>(j) * static_cast<std::size_t>(g.nx) + static_cast<std::size_t>(i);
      const double px = result.traction_MPa[2 * c], ps = result.traction_MPa[2 * c + 1];
      result.force_rolling_N += area * px;
      result.force_across_N += area * ps;
      result.moment_normal_Nmm += area * (g.x(i) * ps - g.s(j) * px);
    }
  }
}

RollingResult solve(const RollingProblem& problem, const RollingOptions& options, bool steady,
                    const Progress& progress) {
  const Grid& grid = problem.grid;
  const auto cells = static_cast<std::size_t>(grid.nx) * static_cast<std::size_t>(grid.ns);
  RollingResult result;
  result.traction_MPa.assign(2 * cells, 0);
  result.slip.assign(2 * cells, 0);
  result.state.assign(cells, RollingState::open);
  const RollingBox box = make_box(problem, steady ? steady_stencil(options.order) : SlipStencil{1, 0, 0}, steady);
  if (!box.level.op) return result;
  const MultilevelResult m = solve_multilevel(box.level, {options.tolerance, options.max_steps}, progress);
  result.iterations = m.steps;
  result.convolutions = m.convolutions;
  result.residual = m.residual;
  result.grids = m.grids;
  result.used_fallback = m.used_fallback;
  const RollingLevel& level = box.level;
  const double slip_unit = box.unit_traction_MPa / problem.elastic.shear_modulus_MPa * (steady ? 1.0 : grid.dx_mm);
  for (int j = 0; j < level.ns(); ++j) {
    for (int i = 0; i < level.nx(); ++i) {
      const auto k = static_cast<std::size_t>(j) * static_cast<std::size_t>(level.nx()) + static_cast<std::size_t>(i);
      if (level.in[k] == 0) continue;
      const auto c = static_cast<std::size_t>(j + box.j0) * static_cast<std::size_t>(grid.nx) +
                     static_cast<std::size_t>(i + box.i0);
      const double px = m.traction[2 * k], ps = m.traction[2 * k + 1];
      result.traction_MPa[2 * c] = px * box.unit_traction_MPa;
      result.traction_MPa[2 * c + 1] = ps * box.unit_traction_MPa;
      result.slip[2 * c] = m.slip[2 * k] * slip_unit;
      result.slip[2 * c + 1] = m.slip[2 * k + 1] * slip_unit;
      const bool slips =
          std::hypot(px, ps) >= level.bound[k] * (1 - 1e-12) && px * m.slip[2 * k] + ps * m.slip[2 * k + 1] < 0;
      result.state[c] = slips ? RollingState::slip : RollingState::stick;
    }
  }
  fill_slivers(problem, result);
  sum_forces(grid, result);
  return result;
}

RollingResult solve_and_extrapolate(const RollingProblem& problem, const RollingOptions& options, bool steady,
                                    const Progress& progress) {
  RollingResult result = solve(problem, options, steady, progress);
  if (!options.extrapolate || std::max(problem.grid.nx, problem.grid.ns) < 8) return result;
  const RollingResult coarse = solve(halved(problem), options, steady, progress);
  const auto extrapolated = [](double fine, double coarser) { return fine + kRichardson * (fine - coarser); };
  result.force_rolling_N = extrapolated(result.force_rolling_N, coarse.force_rolling_N);
  result.force_across_N = extrapolated(result.force_across_N, coarse.force_across_N);
  result.moment_normal_Nmm = extrapolated(result.moment_normal_Nmm, coarse.moment_normal_Nmm);
  result.convolutions += coarse.convolutions / 4;
  result.iterations += coarse.iterations;
  result.used_fallback = result.used_fallback || coarse.used_fallback;
  return result;
}

}  // namespace

std::vector<double> rigid_slip(const Grid& grid, double longitudinal, double lateral, double spin_per_mm) {
  std::vector<double> w;
  w.reserve(2 * static_cast<std::size_t>(grid.cells()));
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      w.push_back(longitudinal - spin_per_mm * grid.s(j));
      w.push_back(lateral + spin_per_mm * grid.x(i));
    }
  }
  return w;
}

std::vector<double> ellipse_fraction(const Grid& grid, double semi_axis_rolling_mm, double semi_axis_across_mm) {
  require_positive("ellipse", "semi-axis along rolling", semi_axis_rolling_mm, "mm");
  require_positive("ellipse", "semi-axis across", semi_axis_across_mm, "mm");
  const double a = semi_axis_rolling_mm, b = semi_axis_across_mm;
  // Area between the axis, the circle and x = 0..t in the unit circle's first quadrant.
  const auto under = [](double t) {
    return 0.5 * (t * std::sqrt(std::max(0.0, 1 - t * t)) + std::asin(std::clamp(t, -1.0, 1.0)));
  };
  // Area of the unit circle's part with 0 <= x <= u and 0 <= y <= v, odd in u and in v.
  const auto corner = [&](double u, double v) {
    const double sign = (u < 0) != (v < 0) ? -1.0 : 1.0;
    u = std::min(1.0, std::abs(u)), v = std::min(1.0, std::abs(v));
    const double turn = std::sqrt(std::max(0.0, 1 - v * v));  // where y = v leaves the circle
    return sign * (u <= turn ? u * v : v * turn + under(u) - under(turn));
  };
  std::vector<double> f;
  f.reserve(static_cast<std::size_t>(grid.cells()));
  const double hx = 0.5 * grid.dx_mm / a, hs = 0.5 * grid.ds_mm / b;
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      const double x = grid.x(i) / a, s = grid.s(j) / b;
      const double area =
          corner(x + hx, s + hs) - corner(x - hx, s + hs) - corner(x + hx, s - hs) + corner(x - hx, s - hs);
      f.push_back(std::clamp(area / (4 * hx * hs), 0.0, 1.0));
    }
  }
  return f;
}

RollingResult solve_rolling(const RollingProblem& problem, const RollingOptions& options, const Progress& progress) {
  check_problem("rolling contact", problem, options);
  return solve_and_extrapolate(problem, options, true, progress);
}

RollingResult solve_shift(const RollingProblem& problem, const RollingOptions& options, const Progress& progress) {
  check_problem("contact at rest", problem, options);
  return solve_and_extrapolate(problem, options, false, progress);
}

}  // namespace runband::halfspace
