// What is read off a pressure field: extent, area, peak, number of spots (private to core/halfspace).
#pragma once

#include <optional>
#include <vector>

#include "core/halfspace/normal.h"

namespace runband::halfspace {

/// Bounding box of the cells under pressure, cells whole.
struct Extent {
  bool empty = true;
  double x_min_mm = 0, x_max_mm = 0, s_min_mm = 0, s_max_mm = 0;
};
Extent extent_of(const Grid& grid, const std::vector<double>& p);

/// Fills load, areas, peak and spots from grid and pressure.
void measure(NormalSolution& solution, std::optional<double> hardness_MPa);

}  // namespace runband::halfspace
