// Finding the box and the resolution; what a level answers is turned into the solution in normal_measure.cpp.
#include "core/halfspace/normal.h"

#include <algorithm>
#include <cmath>
#include <numbers>
#include <string>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/halfspace/normal_level.h"
#include "core/halfspace/normal_measure.h"

namespace runband::halfspace {

namespace {

const std::string kWhere = "normal contact";

void check(const NormalProblem& problem, const NormalOptions& options) {
  require_positive(kWhere, "contact modulus", problem.contact_modulus_MPa, "MPa");
  if (problem.load_N.has_value() == problem.approach_mm.has_value()) {
    throw InputError(ErrorCode::conflicting_keys, kWhere + ": the load and the approach are both given, or neither.",
                     "give one of them; the other is the answer.");
  }
  if (problem.load_N) require_positive(kWhere, "load", *problem.load_N, "N");
  if (problem.approach_mm && !std::isfinite(*problem.approach_mm)) {
    throw out_of_range(kWhere, "approach", *problem.approach_mm, "mm", "finite");
  }
  if (problem.hardness_MPa) require_positive(kWhere, "hardness", *problem.hardness_MPa, "MPa");
  if (options.cells < 4 || options.cells > 1024) throw out_of_range(kWhere, "cells", options.cells, "", "4 to 1024");
  if (options.coarse_cells < 16 || options.coarse_cells > 128) {
    throw out_of_range(kWhere, "coarse cells", options.coarse_cells, "", "16 to 128");
  }
  if (!(options.tolerance >= 1e-12 && options.tolerance <= 0.1)) {
    throw out_of_range(kWhere, "tolerance", options.tolerance, "", "1e-12 to 0.1");
  }
  if (options.cell_ratio) require_positive(kWhere, "ratio of the cell's sides", *options.cell_ratio, "");
}

void check_gap(const std::vector<double>& gap) {
  bool any = false;
  for (const double h : gap) {
    if (std::isnan(h) || h == -std::numeric_limits<double>::infinity()) {
      throw InputError(ErrorCode::no_contact, kWhere + ": the gap is not a number somewhere.",
                       "check the surfaces or the file the gap came from.");
    }
    any = any || std::isfinite(h);
  }
  if (!any) {
    throw InputError(ErrorCode::no_contact, kWhere + ": no part of the two surfaces faces the other.",
                     "look at the place of the contact and at the extent of the surfaces.");
  }
}

// Scaled pressure per real one: q = p * factor (normal_level.h).
double scale_of(const NormalProblem& problem, const Grid& grid) {
  return grid.ds_mm / (std::numbers::pi * problem.contact_modulus_MPa);
}

LevelProblem level_problem(const NormalProblem& problem, const Grid& grid, std::vector<double> gap, double tolerance) {
  const double scale = scale_of(problem, grid);
  LevelProblem level{NormalKernel::of(grid.nx, grid.ns, grid.dx_mm / grid.ds_mm),
                     std::move(gap),
                     std::nullopt,
                     problem.approach_mm,
                     problem.hardness_MPa ? *problem.hardness_MPa * scale : std::numeric_limits<double>::infinity(),
                     tolerance};
  if (problem.load_N) level.sum = *problem.load_N * scale / (grid.dx_mm * grid.ds_mm);
  return level;
}

// A start from the gap alone: the body that overlaps by delta carries p = 2 E* delta/(pi a) sqrt(1 - 2h/delta), exact
// for a sphere, and of the right load for a flat punch.
std::vector<double> first_guess(const NormalProblem& problem, const Grid& grid, const LevelProblem& level) {
  const double lowest = *std::min_element(level.gap.begin(), level.gap.end());
  const double cell = grid.dx_mm * grid.ds_mm, scale = scale_of(problem, grid);
  std::vector<double> q(level.gap.size());
  const auto fill = [&](double delta) {
    std::size_t count = 0;
    for (const double h : level.gap) count += h - lowest < 0.5 * delta;
    const double radius = std::sqrt(std::max<double>(static_cast<double>(count), 1.0) * cell / std::numbers::pi);
    const double peak = 2.0 * problem.contact_modulus_MPa * delta / (std::numbers::pi * radius) * scale;
    double sum = 0;
    for (std::size_t k = 0; k < q.size(); ++k) {
      const double depth = 1.0 - 2.0 * (level.gap[k] - lowest) / delta;
      q[k] = depth > 0 ? std::min(peak * std::sqrt(depth), level.cap) : 0.0;
      sum += q[k];
    }
    return sum;
  };
  if (problem.approach_mm) {
    if (*problem.approach_mm <= lowest) return std::vector<double>(q.size(), 0.0);
    fill(*problem.approach_mm - lowest);
    return q;
  }
  double low = 0, high = *problem.load_N / (problem.contact_modulus_MPa * std::sqrt(cell));
  for (int k = 0; k < 200 && fill(high) < *level.sum; ++k) low = high, high *= 2;
  for (int k = 0; k < 20 && high - low > 0.01 * high; ++k) {
    const double middle = 0.5 * (low + high);
    (fill(middle) < *level.sum ? low : high) = middle;
  }
  fill(high);
  return q;
}

// p^2, which falls linearly through a smooth edge, continued one cell beyond the contact (to negative values), so that
// interpolation puts the edge where it belongs and not at the next cell.
std::vector<double> continued_squares(const Grid& grid, const std::vector<double>& p) {
  const int nx = grid.nx + 4, ns = grid.ns + 4;  // two empty cells around
  const auto at = [nx](int i, int j) { return static_cast<std::size_t>((j + 2) * nx + i + 2); };
  std::vector<double> squares(static_cast<std::size_t>(nx) * static_cast<std::size_t>(ns), 0.0);
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      const double v = p[static_cast<std::size_t>(j * grid.nx + i)];
      squares[at(i, j)] = v * v;
    }
  }
  std::vector<double> result = squares;
  for (int j = -1; j <= grid.ns; ++j) {
    for (int i = -1; i <= grid.nx; ++i) {
      if (squares[at(i, j)] > 0) continue;
      double sum = 0;
      int count = 0;
      for (const auto& [di, dj] : {std::pair{1, 0}, {-1, 0}, {0, 1}, {0, -1}}) {
        const double near = squares[at(i + di, j + dj)];
        if (!(near > 0)) continue;
        const int far_i = i + 2 * di, far_j = j + 2 * dj;
        const bool inside = far_i >= -2 && far_j >= -2 && far_i < grid.nx + 2 && far_j < grid.ns + 2;
        const double far = inside ? squares[at(far_i, far_j)] : 0.0;
        sum += far > 0 ? std::min(0.0, 2.0 * near - far) : -near;
        ++count;
      }
      if (count > 0) result[at(i, j)] = sum / count;
    }
  }
  // Steps of the edge: a cell that meets the contact only at a corner continues the plane of the other three.
  for (int j = -1; j <= grid.ns; ++j) {
    for (int i = -1; i <= grid.nx; ++i) {
      if (result[at(i, j)] != 0.0) continue;
      for (const auto& [di, dj] : {std::pair{1, 1}, {-1, 1}, {1, -1}, {-1, -1}}) {
        if (!(squares[at(i + di, j + dj)] > 0)) continue;
        const double plane = result[at(i + di, j)] + result[at(i, j + dj)] - squares[at(i + di, j + dj)];
        result[at(i, j)] = std::min(result[at(i, j)], plane);
      }
    }
  }
  return result;
}

// p on another grid by bilinear interpolation of the continued p^2, then the root. Zero outside the old grid.
std::vector<double> prolong(const Grid& from, const std::vector<double>& p, const Grid& to) {
  std::vector<double> result(static_cast<std::size_t>(to.cells()), 0.0);
  const std::vector<double> squares = continued_squares(from, p);
  const int nx = from.nx + 4;
  for (int j = 0; j < to.ns; ++j) {
    const double fj = (to.s(j) - from.s0_mm) / from.ds_mm;
    if (!(fj > -1 && fj < from.ns)) continue;
    const int j0 = static_cast<int>(std::floor(fj));
    for (int i = 0; i < to.nx; ++i) {
      const double fi = (to.x(i) - from.x0_mm) / from.dx_mm;
      if (!(fi > -1 && fi < from.nx)) continue;
      const int i0 = static_cast<int>(std::floor(fi));
      const double a = fi - i0, b = fj - j0;
      const double* corner = &squares[static_cast<std::size_t>((j0 + 2) * nx + i0 + 2)];
      const double square =
          (1 - b) * ((1 - a) * corner[0] + a * corner[1]) + b * ((1 - a) * corner[nx] + a * corner[nx + 1]);
      result[static_cast<std::size_t>(j * to.nx + i)] = std::sqrt(std::max(square, 0.0));
    }
  }
  return result;
}

// A grid of cells dx by ds that covers the box, with a friendly number of cells each way, kept within the limits where
// these are given (then with the exact number that fits).
Grid grid_over(const Box& box, double dx, double ds, const std::optional<Box>& limits) {
  const auto side = [](double low, double high, double d, double limit_low, double limit_high) {
    const double slack = 1e-9 * d;
    int n = friendly_size(static_cast<int>(std::ceil((high - low) / d - 1e-9)));
    double start = 0.5 * (low + high) - 0.5 * n * d;
    if (n * d > limit_high - limit_low + slack) {
      n = std::max(1, static_cast<int>(std::floor((limit_high - limit_low) / d + 1e-9)));
      start = 0.5 * (limit_low + limit_high) - 0.5 * n * d;
    }
    start = std::clamp(start, limit_low, std::max(limit_low, limit_high - n * d));
    return std::pair{n, start + 0.5 * d};
  };
  constexpr double kFar = 1e300;
  const Box wide = limits.value_or(Box{-kFar, kFar, -kFar, kFar});
  const auto [nx, x0] = side(box.x_min_mm, box.x_max_mm, dx, wide.x_min_mm, wide.x_max_mm);
  const auto [ns, s0] = side(box.s_min_mm, box.s_max_mm, ds, wide.s_min_mm, wide.s_max_mm);
  return {nx, ns, x0, s0, dx, ds};
}

// Sides in which contact reaches the outermost cells while the box could still grow there.
struct Borders {
  bool x_min = false, x_max = false, s_min = false, s_max = false;
  bool any() const { return x_min || x_max || s_min || s_max; }
};

Borders touched(const Grid& grid, const std::vector<double>& p) {
  Borders b;
  for (int j = 0; j < grid.ns; ++j) {
    b.x_min = b.x_min || p[static_cast<std::size_t>(j * grid.nx)] > 0;
    b.x_max = b.x_max || p[static_cast<std::size_t>(j * grid.nx + grid.nx - 1)] > 0;
  }
  for (int i = 0; i < grid.nx; ++i) {
    b.s_min = b.s_min || p[static_cast<std::size_t>(i)] > 0;
    b.s_max = b.s_max || p[static_cast<std::size_t>((grid.ns - 1) * grid.nx + i)] > 0;
  }
  return b;
}

Box outline(const Grid& g) {
  return {g.x0_mm - 0.5 * g.dx_mm, g.x0_mm + (g.nx - 0.5) * g.dx_mm, g.s0_mm - 0.5 * g.ds_mm,
          g.s0_mm + (g.ns - 0.5) * g.ds_mm};
}

// The side at which the limits end the grid cannot grow.
Borders growable(const Borders& b, const Grid& grid, const std::optional<Box>& limits) {
  if (!limits) return b;
  const Box box = outline(grid);
  return {
      b.x_min && box.x_min_mm > limits->x_min_mm + grid.dx_mm, b.x_max && box.x_max_mm < limits->x_max_mm - grid.dx_mm,
      b.s_min && box.s_min_mm > limits->s_min_mm + grid.ds_mm, b.s_max && box.s_max_mm < limits->s_max_mm - grid.ds_mm};
}

// Cells wider than high by a power of the root of two, so that the shorter side of the contact has at least half as
// many cells as the longer one. Few different ratios: prepared kernels are used again.
double ratio_for(double length_x, double length_s) {
  const double elongation = std::log2(length_x / length_s);
  const double surplus = std::max(0.0, std::abs(elongation) - 1.0);
  return std::exp2(std::copysign(std::min(8.0, std::ceil(2.0 * surplus - 0.25) / 2.0), elongation));
}

struct Run {
  const NormalProblem& problem;
  const Progress& progress;
  int iterations = 0;
  double work = 0;  // in cells times their logarithm

  LevelState solve(const Grid& grid, std::vector<double> gap, std::vector<double> p, double tolerance) {
    const LevelProblem level = level_problem(problem, grid, std::move(gap), tolerance);
    LevelState state;
    const double scale = scale_of(problem, grid);
    if (p.empty()) {
      state.q = first_guess(problem, grid, level);
    } else {
      for (double& v : p) v = std::min(v * scale, level.cap);
      state.q = std::move(p);
      for (std::size_t k = 0; k < state.q.size(); ++k) {
        if (std::isinf(level.gap[k])) state.q[k] = 0.0;  // no surface there
      }
      const bool nothing = std::none_of(state.q.begin(), state.q.end(), [](double v) { return v > 0; });
      if (nothing) state.q = first_guess(problem, grid, level);
    }
    solve_level(level, state, progress);
    iterations += state.iterations;
    work += state.work * cost(grid);
    if (!state.converged) {
      const std::string size = std::to_string(grid.nx) + " by " + std::to_string(grid.ns) + " cells";
      if (level.sum && level.cap * static_cast<double>(grid.cells()) < *level.sum) {
        throw NotConverged(kWhere + ": the hardness times the whole surface of " + size + " is less than the load",
                           iterations, state.residual, "lower the load, raise the hardness or widen the surfaces.");
      }
      throw NotConverged(kWhere + " on " + size, iterations, state.residual,
                         "loosen the tolerance, or look for a gap that jumps from cell to cell.");
    }
    return state;
  }
  static double cost(const Grid& grid) { return grid.cells() * std::log2(4.0 * grid.cells()); }
};

std::vector<double> gap_on(const NormalProblem& problem, const Grid& grid) {
  std::vector<double> gap(static_cast<std::size_t>(grid.cells()));
  problem.gap(grid, gap.data());
  check_gap(gap);
  return gap;
}

// With a hardness the contact is at least load over hardness wide: doubles the first box until its surface can carry
// the load, or until that no longer helps because the bodies end.
Grid with_room_to_yield(const NormalProblem& problem, Grid grid) {
  constexpr double kRoom = 1.5;
  double before = 0;
  for (int k = 0; k < 40; ++k) {
    const std::vector<double> gap = gap_on(problem, grid);
    const auto cells = std::count_if(gap.begin(), gap.end(), [](double h) { return std::isfinite(h); });
    const double capacity = static_cast<double>(cells) * grid.dx_mm * grid.ds_mm * *problem.hardness_MPa;
    if (capacity >= kRoom * *problem.load_N || capacity < 1.05 * before) break;
    before = capacity;
    Box box = outline(grid);
    const double wide = 0.5 * (box.x_max_mm - box.x_min_mm), high = 0.5 * (box.s_max_mm - box.s_min_mm);
    box = {box.x_min_mm - wide, box.x_max_mm + wide, box.s_min_mm - high, box.s_max_mm + high};
    grid = grid_over(box, 2 * grid.dx_mm, 2 * grid.ds_mm, problem.limits);
  }
  return grid;
}

NormalSolution finish(const Run& run, const Grid& grid, LevelState&& state) {
  NormalSolution solution;
  solution.grid = grid;
  const double scale = scale_of(run.problem, grid);
  for (double& q : state.q) q /= scale;
  solution.pressure_MPa = std::move(state.q);
  solution.gap_mm = std::move(state.g);
  solution.approach_mm = state.approach;
  solution.iterations = run.iterations;
  solution.convolutions = run.work / Run::cost(grid);
  solution.residual = state.residual;
  measure(solution, run.problem.hardness_MPa);
  return solution;
}

}  // namespace

NormalSolution solve_normal_on(const Grid& grid, const std::vector<double>& gap_mm, const NormalProblem& problem,
                               double tolerance, const Progress& progress) {
  NormalOptions options;
  options.tolerance = tolerance;
  check(problem, options);
  require_positive(kWhere, "cell size along x", grid.dx_mm, "mm");
  require_positive(kWhere, "cell size along s", grid.ds_mm, "mm");
  if (grid.nx < 1 || grid.ns < 1 || gap_mm.size() != static_cast<std::size_t>(grid.cells())) {
    throw out_of_range(kWhere, "number of gap values", static_cast<double>(gap_mm.size()), "",
                       std::to_string(grid.cells()) + ", one for each cell");
  }
  check_gap(gap_mm);
  Run run{problem, progress};
  return finish(run, grid, run.solve(grid, gap_mm, {}, tolerance));
}

NormalSolution solve_normal(const NormalProblem& problem, const NormalOptions& options, const Progress& progress) {
  constexpr double kRefine = 2.2;  // most a cell shrinks from one grid to the next
  constexpr double kCoarseTolerance = 1e-3;
  constexpr int kMostGrids = 60;
  constexpr int kResolved = 10;  // cells across the contact from which its extent is good enough to plan the final grid
  check(problem, options);
  require_positive(kWhere, "length of the first box", problem.start.x_max_mm - problem.start.x_min_mm, "mm");
  require_positive(kWhere, "width of the first box", problem.start.s_max_mm - problem.start.s_min_mm, "mm");
  Run run{problem, progress};

  Box box = problem.start;
  double ratio = options.cell_ratio.value_or(ratio_for(box.x_max_mm - box.x_min_mm, box.s_max_mm - box.s_min_mm));
  double ds = std::max((box.x_max_mm - box.x_min_mm) / ratio, box.s_max_mm - box.s_min_mm) / options.coarse_cells;
  Grid grid = grid_over(box, ds * ratio, ds, problem.limits);
  if (problem.hardness_MPa && problem.load_N) grid = with_room_to_yield(problem, grid);
  std::vector<double> pressure;  // start on the next grid
  Grid old_grid;
  bool final = false;
  for (int k = 0; k < kMostGrids; ++k) {
    progress.at(final ? 0.5 : std::min(0.4, 0.1 * k), "pressure");
    std::vector<double> start;
    if (!pressure.empty()) start = prolong(old_grid, pressure, grid);
    LevelState state =
        run.solve(grid, gap_on(problem, grid), std::move(start), final ? options.tolerance : kCoarseTolerance);
    const Borders reached = touched(grid, state.q);
    const Borders grow = growable(reached, grid, problem.limits);
    const Extent extent = extent_of(grid, state.q);
    if (extent.empty || (final && !grow.any())) {
      NormalSolution solution = finish(run, grid, std::move(state));
      solution.reaches_limits = reached.any() && problem.limits.has_value();
      progress.at(1.0, "pressure");
      return solution;
    }
    const double scale = scale_of(problem, grid);
    pressure = std::move(state.q);
    for (double& v : pressure) v /= scale;
    old_grid = grid;
    box = outline(grid);
    if (grow.any()) {  // a finite body that fills the box has an infinite gap beyond: then this ends at the next grid
      const double wide = (final ? 0.125 : 0.5) * (box.x_max_mm - box.x_min_mm);
      const double high = (final ? 0.125 : 0.5) * (box.s_max_mm - box.s_min_mm);
      if (grow.x_min) box.x_min_mm -= wide;
      if (grow.x_max) box.x_max_mm += wide;
      if (grow.s_min) box.s_min_mm -= high;
      if (grow.s_max) box.s_max_mm += high;
      double coarser = 1.0;
      if (!final) {
        coarser = std::max((box.x_max_mm - box.x_min_mm) / grid.dx_mm, (box.s_max_mm - box.s_min_mm) / grid.ds_mm) /
                  options.coarse_cells;
        coarser = std::max(1.0, coarser);
      }
      grid = grid_over(box, grid.dx_mm * coarser, grid.ds_mm * coarser, problem.limits);
      continue;
    }
    const double length_x = extent.x_max_mm - extent.x_min_mm, length_s = extent.s_max_mm - extent.s_min_mm;
    if (!options.cell_ratio) ratio = ratio_for(length_x, length_s);
    const double final_ds = std::max(length_x / ratio, length_s) / options.cells;
    const double now = std::max(grid.ds_mm, grid.dx_mm / ratio);  // as a cell of the new ratio
    const double across = std::max(length_x / grid.dx_mm, length_s / grid.ds_mm);
    const int steps = static_cast<int>(std::ceil(std::log(std::max(now / final_ds, 1.0)) / std::log(kRefine) - 1e-9));
    final = steps <= 1 && (across >= kResolved || across >= 0.7 * options.cells || steps == 0);
    ds = final ? final_ds : now * std::pow(final_ds / now, 1.0 / std::max(steps, 2));
    const double margin_x = 0.75 * grid.dx_mm + ds * ratio, margin_s = 0.75 * grid.ds_mm + ds;
    box = {extent.x_min_mm - margin_x, extent.x_max_mm + margin_x, extent.s_min_mm - margin_s,
           extent.s_max_mm + margin_s};
    grid = grid_over(box, ds * ratio, ds, problem.limits);
  }
  throw NotConverged(kWhere + ": the box of the contact was not found", run.iterations, 1.0,
                     "give a starting box that contains the contact.");
}

}  // namespace runband::halfspace
