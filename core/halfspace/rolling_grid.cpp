#include "core/halfspace/rolling_grid.h"

#include <algorithm>
#include <cmath>

namespace runband::halfspace {
namespace {

std::size_t index(int i, int j, int nx) {
  return static_cast<std::size_t>(j) * static_cast<std::size_t>(nx) + static_cast<std::size_t>(i);
}

double friction_at(const RollingProblem& problem, std::size_t c) {
  return problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c];
}

}  // namespace

void check_problem(const std::string& where, const RollingProblem& problem, const RollingOptions& options) {
  const Grid& g = problem.grid;
  if (g.nx < 1 || g.ns < 1) throw out_of_range(where, "number of cells", g.nx < 1 ? g.nx : g.ns, "", "at least 1");
  require_positive(where, "cell size along x", g.dx_mm, "mm");
  require_positive(where, "cell size along s", g.ds_mm, "mm");
  require_positive(where, "shear modulus", problem.elastic.shear_modulus_MPa, "MPa");
  const double nu = problem.elastic.poisson_ratio;
  if (!(nu >= 0 && nu <= 0.5)) throw out_of_range(where, "Poisson's ratio", nu, "", "0 to 0.5");
  if (!(options.tolerance >= 1e-10 && options.tolerance <= 1e-2)) {
    throw out_of_range(where, "tolerance", options.tolerance, "", "1e-10 to 1e-2");
  }
  const auto cells = static_cast<std::size_t>(g.nx) * static_cast<std::size_t>(g.ns);
  const auto size = [&](const char* name, std::size_t have, std::size_t want) {
    if (have != want)
      throw out_of_range(where, name, static_cast<double>(have), "", std::to_string(want) + " as the grid says");
  };
  size("number of pressures", problem.pressure_MPa.size(), cells);
  size("number of rigid slips", problem.slip.size(), 2 * cells);
  if (problem.friction.size() != 1) size("number of friction coefficients", problem.friction.size(), cells);
  if (!problem.area_fraction.empty()) size("number of area fractions", problem.area_fraction.size(), cells);
  const auto all = [&](const char* name, const std::vector<double>& v, const char* unit, double low, double high,
                       const char* range) {
    for (const double x : v) {
      if (!(x >= low && x <= high)) throw out_of_range(where, name, x, unit, range);
    }
  };
  constexpr double kHuge = 1e300;
  all("pressure", problem.pressure_MPa, "MPa", 0, kHuge, "finite and not negative");
  all("friction coefficient", problem.friction, "", 0, kHuge, "finite and not negative");
  all("rigid slip", problem.slip, "", -kHuge, kHuge, "finite");
  all("area fraction", problem.area_fraction, "", 0, 1, "0 to 1");
}

RollingBox make_box(const RollingProblem& problem, const SlipStencil& stencil, bool steady) {
  const Grid& grid = problem.grid;
  const auto fraction = [&](std::size_t c) { return problem.area_fraction.empty() ? 1.0 : problem.area_fraction[c]; };
  int i0 = grid.nx, i1 = -1, j0 = grid.ns, j1 = -1;
  RollingBox box;
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      const std::size_t c = index(i, j, grid.nx);
      const double bound = problem.pressure_MPa[c] * friction_at(problem, c);
      if (!(bound > 0) || fraction(c) <= kLeastFraction) continue;
      i0 = std::min(i0, i), i1 = std::max(i1, i), j0 = std::min(j0, j), j1 = std::max(j1, j);
      box.unit_traction_MPa = std::max(box.unit_traction_MPa, bound);
    }
  }
  if (i1 < 0) return box;
  box.i0 = i0;
  box.j0 = j0;
  const int nx = i1 - i0 + 1, ns = j1 - j0 + 1;
  RollingLevel& level = box.level;
  level.op = std::make_shared<const RollingOperator>(
      OperatorShape{nx, ns, grid.ds_mm / grid.dx_mm, problem.elastic.poisson_ratio, stencil});
  const auto n = static_cast<std::size_t>(nx) * static_cast<std::size_t>(ns);
  level.in.assign(n, 0);
  level.bound.assign(n, 0);
  level.edge.assign(2 * n, 0);
  level.fraction.assign(n, 0);
  level.rigid.assign(2 * n, 0);
  const double unit = problem.elastic.shear_modulus_MPa / (box.unit_traction_MPa * (steady ? 1.0 : grid.dx_mm));
  for (int j = 0; j < ns; ++j) {
    for (int i = 0; i < nx; ++i) {
      const std::size_t c = index(i + i0, j + j0, grid.nx), k = index(i, j, nx);
      const double bound = problem.pressure_MPa[c] * friction_at(problem, c), f = fraction(c);
      if (!(bound > 0) || f <= kLeastFraction) continue;
      level.in[k] = 1;
      level.bound[k] = bound / box.unit_traction_MPa;
      level.fraction[k] = f;
      level.rigid[2 * k] = problem.slip[2 * c] * unit;
      level.rigid[2 * k + 1] = problem.slip[2 * c + 1] * unit;
    }
  }
  set_edge_compliance(level);
  return box;
}

RollingProblem halved(const RollingProblem& problem) {
  const Grid& fine = problem.grid;
  RollingProblem coarse;
  coarse.elastic = problem.elastic;
  coarse.grid = {(fine.nx + 1) / 2, (fine.ns + 1) / 2, fine.x0_mm + 0.5 * fine.dx_mm, fine.s0_mm + 0.5 * fine.ds_mm,
                 2 * fine.dx_mm,    2 * fine.ds_mm};
  const auto cells = static_cast<std::size_t>(coarse.grid.cells());
  coarse.pressure_MPa.assign(cells, 0);
  coarse.slip.assign(2 * cells, 0);
  coarse.area_fraction.assign(cells, 0);
  coarse.friction.assign(cells, 0);
  for (int j = 0; j < coarse.grid.ns; ++j) {
    for (int i = 0; i < coarse.grid.nx; ++i) {
      const std::size_t k = index(i, j, coarse.grid.nx);
      double load = 0, bound = 0, covered = 0, wx = 0, ws = 0;
      for (int v = 2 * j; v < std::min(2 * j + 2, fine.ns); ++v) {
        for (int u = 2 * i; u < std::min(2 * i + 2, fine.nx); ++u) {
          const std::size_t c = index(u, v, fine.nx);
          const double f =
              problem.area_fraction.empty() ? (problem.pressure_MPa[c] > 0 ? 1.0 : 0.0) : problem.area_fraction[c];
          load += problem.pressure_MPa[c] / 4;
          bound += problem.pressure_MPa[c] * friction_at(problem, c) / 4;
          covered += f / 4;
          wx += problem.slip[2 * c] / 4;  // to the centre of the coarse cell, covered or not
          ws += problem.slip[2 * c + 1] / 4;
        }
      }
      coarse.pressure_MPa[k] = load;
      coarse.friction[k] = load > 0 ? bound / load : 0;
      coarse.area_fraction[k] = std::min(1.0, covered);
      coarse.slip[2 * k] = wx;
      coarse.slip[2 * k + 1] = ws;
    }
  }
  return coarse;
}

}  // namespace runband::halfspace
