// Gaps of simple shapes for the tests of the normal problem.
#pragma once

#include <cmath>
#include <functional>
#include <limits>

#include "core/halfspace/normal.h"

namespace runband::halfspace {

/// A gap from a function of the place.
template <typename Shape>
GapFunction gap_of(Shape shape) {
  return [shape](const Grid& grid, double* gap) {
    for (int j = 0; j < grid.ns; ++j) {
      for (int i = 0; i < grid.nx; ++i) gap[j * grid.nx + i] = shape(grid.x(i), grid.s(j));
    }
  };
}

inline GapFunction paraboloid(double curvature_x, double curvature_s) {
  return gap_of([=](double x, double s) { return 0.5 * (curvature_x * x * x + curvature_s * s * s); });
}

inline NormalProblem loaded(GapFunction gap, double half_x, double half_s, double load_N) {
  NormalProblem problem;
  problem.gap = std::move(gap);
  problem.start = {-half_x, half_x, -half_s, half_s};
  problem.contact_modulus_MPa = 113932.291667;  // steel on steel, E 210 GPa, nu 0.28
  problem.load_N = load_N;
  return problem;
}

}  // namespace runband::halfspace
