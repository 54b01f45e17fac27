// Steady rolling on a sequence of grids, and the slow method that stands behind it.
#pragma once

#include <vector>

#include "core/halfspace/rolling_newton.h"

namespace runband::halfspace {

struct MultilevelResult {
  std::vector<double> traction, slip;  ///< on the finest grid, its units
  double residual = 0;
  double convolutions = 0;  ///< in float convolutions of the finest grid
  int steps = 0;
  int grids = 0;
  bool used_fallback = false;
};

/// Grids are halved until the longer side has at most 27 cells; each start is the coarser answer.
/// @throws NotConverged, Cancelled.
MultilevelResult solve_multilevel(const RollingLevel& finest, const NewtonOptions& options, const Progress& progress);

/// Kalker's time marching: from `traction`, rolls on by one cell per step, each step a problem with a symmetric kernel,
/// until nothing changes. Slow and sure. @return whether the tolerance was met.
bool march_to_steady(const RollingLevel& level, const NewtonOptions& options, const Progress& progress,
                     RollingScratch& scratch, std::vector<double>& traction, std::vector<double>& slip,
                     MultilevelResult& account);

}  // namespace runband::halfspace
