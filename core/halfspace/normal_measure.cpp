#include "core/halfspace/normal_measure.h"

#include <algorithm>
#include <cmath>
#include <cstddef>

namespace runband::halfspace {

namespace {

// How far the contact reaches beyond the centre of its last cell of a line, in cells: where p^2, continued from the
// last two cells, vanishes. A smooth edge lies within the last cell or the next; a sharp one, where the pressure does
// not fall, ends with the cell.
double reach(double last, double before) {
  const double a = last * last, b = before * before;
  return b > a ? std::min(a / (b - a), 1.0) : 0.5;
}

// Sum of the chords of all lines along one direction, in cells.
template <typename At>
double chords(int lines, int length, At&& at) {
  double sum = 0;
  for (int j = 0; j < lines; ++j) {
    for (int i = 0; i < length; ++i) {
      if (!(at(i, j) > 0)) continue;
      const int first = i;
      while (i + 1 < length && at(i + 1, j) > 0) ++i;
      const int last = i;
      if (first == last) {
        sum += 1.0;
      } else {
        sum += last - first + reach(at(first, j), at(first + 1, j)) + reach(at(last, j), at(last - 1, j));
      }
    }
  }
  return sum;
}

// Vertex of the parabolas of p^2 through the highest cell and its neighbours along x and s.
double vertex(const Grid& grid, const std::vector<double>& p) {
  const auto top = std::max_element(p.begin(), p.end()) - p.begin();
  const int i = static_cast<int>(top % grid.nx), j = static_cast<int>(top / grid.nx);
  const double peak = p[static_cast<std::size_t>(top)];
  const auto square = [&](int di, int dj) {
    if (i + di < 0 || i + di >= grid.nx || j + dj < 0 || j + dj >= grid.ns) return 0.0;
    const double v = p[static_cast<std::size_t>((j + dj) * grid.nx + i + di)];
    return v * v;
  };
  const double middle = peak * peak;
  double sum = middle;
  for (const auto& [low, high] : {std::pair{square(-1, 0), square(1, 0)}, std::pair{square(0, -1), square(0, 1)}}) {
    if (low <= 0 || high <= 0) continue;  // at an edge the highest cell speaks for itself
    const double bend = 2.0 * middle - low - high;
    if (bend > 0) sum += 0.125 * (high - low) * (high - low) / bend;
  }
  return std::sqrt(sum);
}

int count_spots(const Grid& grid, const std::vector<double>& p) {
  std::vector<char> seen(p.size(), 0);
  std::vector<std::size_t> open;
  const auto nx = static_cast<std::size_t>(grid.nx), ns = static_cast<std::size_t>(grid.ns);
  int spots = 0;
  for (std::size_t start = 0; start < p.size(); ++start) {
    if (!(p[start] > 0) || seen[start]) continue;
    ++spots;
    open.assign(1, start);
    seen[start] = 1;
    while (!open.empty()) {
      const std::size_t k = open.back();
      open.pop_back();
      const std::size_t i = k % nx, j = k / nx;
      for (std::size_t v = j > 0 ? j - 1 : 0; v <= std::min(j + 1, ns - 1); ++v) {
        for (std::size_t u = i > 0 ? i - 1 : 0; u <= std::min(i + 1, nx - 1); ++u) {
          const std::size_t other = v * nx + u;
          if (p[other] > 0 && !seen[other]) {
            seen[other] = 1;
            open.push_back(other);
          }
        }
      }
    }
  }
  return spots;
}

}  // namespace

Extent extent_of(const Grid& grid, const std::vector<double>& p) {
  int i0 = grid.nx, i1 = -1, j0 = grid.ns, j1 = -1;
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      if (!(p[static_cast<std::size_t>(j * grid.nx + i)] > 0)) continue;
      i0 = std::min(i0, i), i1 = std::max(i1, i);
      j0 = std::min(j0, j), j1 = std::max(j1, j);
    }
  }
  if (i1 < 0) return {};
  return {false, grid.x(i0) - 0.5 * grid.dx_mm, grid.x(i1) + 0.5 * grid.dx_mm, grid.s(j0) - 0.5 * grid.ds_mm,
          grid.s(j1) + 0.5 * grid.ds_mm};
}

void measure(NormalSolution& solution, std::optional<double> hardness_MPa) {
  const Grid& grid = solution.grid;
  const std::vector<double>& p = solution.pressure_MPa;
  const double cell = grid.dx_mm * grid.ds_mm;
  std::size_t loaded = 0, capped = 0;
  double sum = 0;
  for (const double v : p) {
    sum += v;
    loaded += v > 0;
    capped += hardness_MPa && v >= *hardness_MPa * (1.0 - 1e-12);
  }
  solution.load_N = sum * cell;
  solution.cell_area_mm2 = static_cast<double>(loaded) * cell;
  solution.capped_area_mm2 = static_cast<double>(capped) * cell;
  const auto along_x = [&](int i, int j) { return p[static_cast<std::size_t>(j * grid.nx + i)]; };
  const auto along_s = [&](int j, int i) { return p[static_cast<std::size_t>(j * grid.nx + i)]; };
  solution.area_mm2 = 0.5 * cell * (chords(grid.ns, grid.nx, along_x) + chords(grid.nx, grid.ns, along_s));
  solution.peak_pressure_MPa = loaded == 0 ? 0.0 : vertex(grid, p);
  if (hardness_MPa) solution.peak_pressure_MPa = std::min(solution.peak_pressure_MPa, *hardness_MPa);
  solution.spots = count_spots(grid, p);
}

}  // namespace runband::halfspace
