// The ellipse's pressure as a patch: the same form in which the half-space answers.
#include <algorithm>
#include <chrono>
#include <cmath>
#include <numbers>
#include <vector>

#include "core/base/error.h"
#include "core/patch/patch.h"

namespace runband {

namespace {

constexpr int kFewestCells = 8;
constexpr int kMostCells = 512;

// Volume over [0, x] x [0, y] below the unit hemisphere z = sqrt(1 - u^2 - v^2), zero outside it; odd in x and in y.
// Elementary integration; beyond the rim what is left is the quarter minus two caps that do not overlap.
double hemisphere_corner(double x, double y) {
  const double sign = (x < 0.0) == (y < 0.0) ? 1.0 : -1.0;
  x = std::min(std::abs(x), 1.0);
  y = std::min(std::abs(y), 1.0);
  const double below_x = x * (3.0 - x * x);
  const double below_y = y * (3.0 - y * y);
  const double height2 = 1.0 - x * x - y * y;
  if (height2 <= 0.0) return sign * std::numbers::pi / 12.0 * (below_x + below_y - 2.0);
  const double z = std::sqrt(height2);
  return sign *
         (2.0 * x * y * z + below_x * std::atan(y / z) + below_y * std::atan(x / z) - 2.0 * std::atan(x * y / z)) / 6.0;
}

}  // namespace

Patch hertz_patch(const HertzEllipse& ellipse, const PatchOptions& options) {
  const auto start = std::chrono::steady_clock::now();
  const double a = ellipse.semi_axis_rolling_mm;
  const double b = ellipse.semi_axis_across_mm;
  require_positive("Hertz patch", "semi_axis_rolling_mm", a, "mm");
  require_positive("Hertz patch", "semi_axis_across_mm", b, "mm");
  if (options.cells < kFewestCells || options.cells > kMostCells)
    throw out_of_range("patch", "cells", options.cells, "1", "between 8 and 512");

  // Whole cells fill the ellipse's box exactly; as square as that allows, but never fewer than kFewestCells.
  const double size = 2.0 * std::max(a, b) / options.cells;
  const auto count = [&](double semi_axis) {
    return std::clamp(static_cast<int>(std::lround(2.0 * semi_axis / size)), kFewestCells, options.cells);
  };
  const int inner_x = count(a);
  const int inner_s = count(b);

  Patch patch;
  patch.method = PatchMethod::hertz;
  Grid& grid = patch.grid;
  grid.nx = inner_x + 2;
  grid.ns = inner_s + 2;
  grid.dx_mm = 2.0 * a / inner_x;
  grid.ds_mm = 2.0 * b / inner_s;
  grid.x0_mm = -0.5 * (grid.nx - 1) * grid.dx_mm;
  grid.s0_mm = -0.5 * (grid.ns - 1) * grid.ds_mm;

  // Corners in units of the semi-axes; the outermost ring lies outside, where the pressure is zero.
  const auto corner_x = [&](int i) { return 2.0 * (i - 1) / inner_x - 1.0; };
  const auto corner_s = [&](int j) { return 2.0 * (j - 1) / inner_s - 1.0; };
  const auto column = static_cast<std::size_t>(grid.nx) + 1;
  std::vector<double> below(column), above(column);
  const auto fill_row = [&](int j, std::vector<double>& row) {
    for (int i = 0; i <= grid.nx; ++i) row[static_cast<std::size_t>(i)] = hemisphere_corner(corner_x(i), corner_s(j));
  };
  Field& pressure = patch.pressure;
  pressure.name = "pressure";
  pressure.title = "Contact pressure";
  pressure.unit = "MPa";
  pressure.grid = grid;
  pressure.from = "Hertz 1881, closed form, averaged over each cell";
  pressure.values.assign(static_cast<std::size_t>(grid.cells()), 0.0);
  const double per_cell = ellipse.peak_pressure_MPa * 0.25 * inner_x * inner_s;
  fill_row(1, below);
  for (int j = 1; j <= inner_s; ++j, below.swap(above)) {
    fill_row(j + 1, above);
    for (int i = 1; i <= inner_x; ++i) {
      const auto k = static_cast<std::size_t>(i);
      const double volume = above[k + 1] - above[k] - below[k + 1] + below[k];
      const double near_x = std::min(std::abs(corner_x(i)), std::abs(corner_x(i + 1)));
      const double near_s = std::min(std::abs(corner_s(j)), std::abs(corner_s(j + 1)));
      if (near_x * near_x + near_s * near_s < 1.0)
        pressure.values[static_cast<std::size_t>(j * grid.nx + i)] = std::max(0.0, volume * per_cell);
    }
  }
  patch.area_mm2 = ellipse.area_mm2();
  patch.peak_pressure_MPa = ellipse.peak_pressure_MPa;
  patch.approach_mm = ellipse.approach_mm;
  patch.solve_ms = std::chrono::duration<double, std::milli>(std::chrono::steady_clock::now() - start).count();
  return patch;
}

}  // namespace runband
