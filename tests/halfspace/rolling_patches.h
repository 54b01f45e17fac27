// Patches for the tests of rolling contact: ellipses with exact cell averages, and seeded random shapes.
#pragma once

#include <cmath>
#include <cstdint>
#include <numbers>
#include <random>
#include <vector>

#include "core/halfspace/rolling.h"

namespace runband::halfspace::testing {

inline ElasticPair like_pair(double shear_modulus, double nu) {
  ElasticPair pair;
  pair.shear_modulus_MPa = shear_modulus;
  pair.poisson_ratio = nu;
  pair.contact_modulus_MPa = shear_modulus / (1 - nu);
  return pair;
}

/// nx x ns cells that just cover the ellipse of semi-axes a, b.
inline Grid grid_over(double a, double b, int nx, int ns) {
  const double dx = 2 * a / nx, ds = 2 * b / ns;
  return {nx, ns, -a + dx / 2, -b + ds / 2, dx, ds};
}

/// Mean over each cell of p0 (1 - x^2/a^2 - s^2/b^2)^(power), by midpoint sampling; sums are then made exact.
inline std::vector<double> ellipse_pressure(const Grid& g, double a, double b, double peak, double power = 0.5) {
  constexpr int kSub = 8;
  std::vector<double> p;
  double sum = 0;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      double mean = 0;
      for (int v = 0; v < kSub; ++v) {
        for (int u = 0; u < kSub; ++u) {
          const double x = (g.x(i) + ((u + 0.5) / kSub - 0.5) * g.dx_mm) / a;
          const double s = (g.s(j) + ((v + 0.5) / kSub - 0.5) * g.ds_mm) / b;
          const double q = 1 - x * x - s * s;
          if (q > 0) mean += std::pow(q, power) / (kSub * kSub);
        }
      }
      p.push_back(peak * mean);
      sum += peak * mean;
    }
  }
  const double exact = peak * std::numbers::pi * a * b / (1 + power) / (g.dx_mm * g.ds_mm);
  for (double& v : p) v *= exact / sum;
  return p;
}

/// An ellipse with Hertz's pressure, cut cells and one friction coefficient; no slip yet.
inline RollingProblem ellipse_problem(double a, double b, int nx, int ns, double peak, double friction, double nu,
                                      double shear_modulus = 80000) {
  RollingProblem problem;
  problem.grid = grid_over(a, b, nx, ns);
  problem.pressure_MPa = ellipse_pressure(problem.grid, a, b, peak);
  problem.area_fraction = ellipse_fraction(problem.grid, a, b);
  problem.friction = {friction};
  problem.elastic = like_pair(shear_modulus, nu);
  return problem;
}

/// A random patch of about `cells` cells across: ellipses, merged ellipses, D shapes, dents, friction jumps, nu 0..0.5,
/// cells stretched so that a/b spans 0.1..10, creepage from tiny to full slip with any share of spin.
inline RollingProblem random_problem(std::uint64_t number, int cells) {
  std::mt19937_64 random(0x9e3779b97f4a7c15ULL * (number + 1));
  const auto uniform = [&](double low, double high) {
    return low + (high - low) * (static_cast<double>(random() >> 11U) * 0x1.0p-53);
  };
  const double ratio = std::pow(10.0, uniform(-1, 1)), b = uniform(1, 6), a = b * ratio;
  RollingProblem problem;
  problem.grid = grid_over(a, b, cells, cells);
  const Grid& g = problem.grid;
  problem.elastic = like_pair(80000, uniform(0, 0.5));
  const int shape = static_cast<int>(uniform(0, 5));
  const double cut = uniform(-0.4, 0.7), turn = uniform(0, 2 * std::numbers::pi), size2 = uniform(0.3, 0.7);
  const double x2 = uniform(-0.5, 0.5), s2 = uniform(-0.5, 0.5), depth = uniform(0.2, 1.2), width = uniform(0.1, 0.4);
  const bool cut_cells = shape == 0 && uniform(0, 1) < 0.5;
  const auto load = [&](double x, double s) {  // in units of the semi-axes
    const auto bump = [](double u, double v, double r) { return std::sqrt(std::max(0.0, r * r - u * u - v * v)); };
    if (shape == 0) return bump(x, s, 1);
    if (shape == 1) return std::max(bump(x - 0.45, s - s2 * 0.5, 0.55), bump(x + 0.45, s + s2 * 0.5, 0.55));
    if (shape == 2) return bump(x, s - 0.4, 0.6) + bump(x - x2, s + 0.4, size2 * 0.85);
    if (shape == 3) return std::cos(turn) * x + std::sin(turn) * s < cut ? bump(x, s, 1) : 0.0;
    const double hole = std::exp(-((x - x2) * (x - x2) + (s - s2) * (s - s2)) / (width * width));
    return std::max(0.0, bump(x, s, 1) - depth * hole);
  };
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) problem.pressure_MPa.push_back(1000 * load(g.x(i) / a, g.s(j) / b));
  }
  if (cut_cells) {
    problem.pressure_MPa = ellipse_pressure(g, a, b, 1000);
    problem.area_fraction = ellipse_fraction(g, a, b);
  }
  const double mu = uniform(0.05, 0.6);
  if (uniform(0, 1) < 0.4) {
    const double mu2 = mu * uniform(0.2, 1), angle = uniform(0, 2 * std::numbers::pi), where = uniform(-0.5, 0.5);
    for (int j = 0; j < g.ns; ++j) {
      for (int i = 0; i < g.nx; ++i) {
        problem.friction.push_back(std::cos(angle) * g.x(i) / a + std::sin(angle) * g.s(j) / b > where ? mu : mu2);
      }
    }
  } else {
    problem.friction = {mu};
  }
  // Saturation comes at a creepage of about mu p0 / G times a / min(a, b).
  const double scale = mu * 1000 / 80000 * std::max(1.0, ratio) * std::pow(10.0, uniform(-2.5, 1.5));
  const double direction = uniform(0, 2 * std::numbers::pi), spin_share = uniform(-1, 1);
  const double spin = uniform(0, 1) < 0.3 ? 0 : spin_share;
  problem.slip = rigid_slip(g, scale * std::cos(direction) * (1 - std::abs(spin)),
                            scale * std::sin(direction) * (1 - std::abs(spin)), scale * spin / std::sqrt(a * b));
  return problem;
}

}  // namespace runband::halfspace::testing
