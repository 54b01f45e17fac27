// Against brute force: time marching with a plain Gauss-Seidel sweep over all pairs of cells, sharing nothing with the
// solver but the influence coefficient of one cell on another.
#include <gtest/gtest.h>

#include <cmath>
#include <vector>

#include "core/halfspace/influence.h"
#include "core/halfspace/rolling.h"
#include "tests/halfspace/rolling_patches.h"

namespace runband::halfspace {
namespace {

struct Pair {
  double x = 0, s = 0;
};

/// Rolls on by one cell per step from rest until nothing changes. First-order: s dx = w dx + u(x) - u_before(x + dx).
std::vector<Pair> march(const RollingProblem& problem) {
  const Grid& g = problem.grid;
  const double nu = problem.elastic.poisson_ratio,
               scale = 1 / (3.14159265358979323846 * problem.elastic.shear_modulus_MPa);
  struct Cell {
    int i, j;
    double bound;
    Pair w;
  };
  std::vector<Cell> cells;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      const auto c = static_cast<std::size_t>(j * g.nx + i);
      const double mu = problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c];
      if (mu * problem.pressure_MPa[c] <= 0) continue;
      cells.push_back(
          {i, j, mu * problem.pressure_MPa[c], {problem.slip[2 * c] * g.dx_mm, problem.slip[2 * c + 1] * g.dx_mm}});
    }
  }
  const std::size_t n = cells.size();
  std::vector<TangentialCoefficients> here(n * n), ahead(n * n);
  for (std::size_t a = 0; a < n; ++a) {
    for (std::size_t b = 0; b < n; ++b) {
      const double x = (cells[a].i - cells[b].i) * g.dx_mm, s = (cells[a].j - cells[b].j) * g.ds_mm;
      here[a * n + b] = cerruti_coefficients(x, s, g.dx_mm, g.ds_mm, nu);
      ahead[a * n + b] = cerruti_coefficients(x + g.dx_mm, s, g.dx_mm, g.ds_mm, nu);
    }
  }
  const auto displacement = [&](const TangentialCoefficients* row, const std::vector<Pair>& p) {
    Pair u;
    for (std::size_t b = 0; b < n; ++b) {
      u.x += row[b].xx * p[b].x + row[b].xs * p[b].s;
      u.s += row[b].xs * p[b].x + row[b].ss * p[b].s;
    }
    return Pair{scale * u.x, scale * u.s};
  };
  std::vector<Pair> p(n), before;
  double largest = 0;
  for (const Cell& c : cells) largest = std::max(largest, c.bound);
  for (int step = 0; step < 2000; ++step) {
    before = p;
    std::vector<Pair> moved(n);
    for (std::size_t a = 0; a < n; ++a) moved[a] = displacement(&ahead[a * n], before);
    for (int sweep = 0; sweep < 2000; ++sweep) {
      double change = 0;
      for (std::size_t a = 0; a < n; ++a) {
        const Pair u = displacement(&here[a * n], p);
        // On square cells xx = ss and xs = 0 for a cell on itself: the projection below solves its friction law.
        const double own = scale * here[a * n + a].xx;
        Pair q{p[a].x - (cells[a].w.x + u.x - moved[a].x) / own, p[a].s - (cells[a].w.s + u.s - moved[a].s) / own};
        const double size = std::hypot(q.x, q.s);
        if (size > cells[a].bound) q = {q.x * cells[a].bound / size, q.s * cells[a].bound / size};
        change = std::max(change, std::hypot(q.x - p[a].x, q.s - p[a].s));
        p[a] = q;
      }
      if (change < 1e-10 * largest) break;
    }
    double change = 0;
    for (std::size_t a = 0; a < n; ++a)
      change = std::max(change, std::hypot(p[a].x - before[a].x, p[a].s - before[a].s));
    if (change < 3e-9 * largest) break;
  }
  std::vector<Pair> all(static_cast<std::size_t>(g.nx * g.ns));
  for (std::size_t a = 0; a < n; ++a) all[static_cast<std::size_t>(cells[a].j * g.nx + cells[a].i)] = p[a];
  return all;
}

RollingProblem square_ellipse(int cells, double a_over_b, double friction, double nu) {
  // Square cells: the longer axis takes `cells` of them.
  const double a = a_over_b >= 1 ? 4 : 4 * a_over_b, b = a / a_over_b, size = 8.0 / cells;
  RollingProblem problem;
  problem.grid = {static_cast<int>(std::lround(2 * a / size)),
                  static_cast<int>(std::lround(2 * b / size)),
                  -a + size / 2,
                  -b + size / 2,
                  size,
                  size};
  for (int j = 0; j < problem.grid.ns; ++j) {
    for (int i = 0; i < problem.grid.nx; ++i) {
      const double q = 1 - std::pow(problem.grid.x(i) / a, 2) - std::pow(problem.grid.s(j) / b, 2);
      problem.pressure_MPa.push_back(q > 0 ? 1000 * std::sqrt(q) : 0);
    }
  }
  problem.friction = {friction};
  problem.elastic = testing::like_pair(80000, nu);
  return problem;
}

void compare(const RollingProblem& problem) {
  RollingOptions options;
  options.order = UpwindOrder::first;
  const RollingResult r = solve_rolling(problem, options);  // at the ordinary tolerance, 1e-6
  const std::vector<Pair> brute = march(problem);
  const double area = problem.grid.dx_mm * problem.grid.ds_mm, mu = problem.friction[0];
  double fx = 0, fs = 0, normal = 0, worst = 0, largest = 0;
  for (std::size_t c = 0; c < brute.size(); ++c) {
    fx += area * brute[c].x;
    fs += area * brute[c].s;
    normal += area * problem.pressure_MPa[c];
    largest = std::max(largest, mu * problem.pressure_MPa[c]);
    worst = std::max(worst, std::hypot(brute[c].x - r.traction_MPa[2 * c], brute[c].s - r.traction_MPa[2 * c + 1]));
  }
  EXPECT_NEAR(r.force_rolling_N, fx, 1e-6 * mu * normal);
  EXPECT_NEAR(r.force_across_N, fs, 1e-6 * mu * normal);
  EXPECT_LT(worst, 5e-6 * largest);
  EXPECT_FALSE(r.used_fallback);
  // The case must say something: neither all stick nor all slip.
  const double used = std::hypot(fx, fs) / (mu * normal);
  EXPECT_GT(used, 0.1);
  EXPECT_LT(used, 0.99);
}

TEST(RollingBruteForce, AgreesOnACircleAt16Cells) {
  RollingProblem problem = square_ellipse(16, 1, 0.3, 0.28);
  problem.slip = rigid_slip(problem.grid, 2e-3, -1e-3, 2e-4);
  compare(problem);
}

TEST(RollingBruteForce, AgreesOnALongEllipseWithSpinAt20Cells) {
  RollingProblem problem = square_ellipse(20, 2, 0.4, 0.45);
  problem.slip = rigid_slip(problem.grid, -1e-3, 1e-3, 1.2e-3);
  compare(problem);
}

TEST(RollingBruteForce, AgreesOnAWideEllipseNearFullSlipAt20Cells) {
  RollingProblem problem = square_ellipse(20, 0.5, 0.25, 0.0);
  problem.slip = rigid_slip(problem.grid, 3.2e-3, 2e-3, 0);
  compare(problem);
}

}  // namespace
}  // namespace runband::halfspace
