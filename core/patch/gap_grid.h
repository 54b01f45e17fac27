// A gap between two surfaces given as a table of numbers: from a measurement, another program, or a thought experiment.
#pragma once

#include <filesystem>
#include <string>
#include <vector>

#include "core/base/quantities.h"

namespace runband {

/// Distance of the undeformed surfaces at the points (grid.x(i), grid.s(j)), mm, at [j * nx + i]; infinite where there
/// is no surface.
struct GapGrid {
  Grid grid;
  std::vector<double> gap_mm;
  std::string origin;  ///< the file it came from

  /// Gap at any point by bicubic (Catmull-Rom) interpolation, which keeps parabolas exactly; bilinear next to a hole;
  /// infinite outside the grid, in holes and beside them.
  double at(double x_mm, double s_mm) const;
};

/// Reads a CSV grid. Lines that begin with # and empty lines are passed over; cells are separated by "," or ";".
///
///     gap_mm, -10.0, -9.5, ... 10.0       the word gap_mm, then the places x along rolling, mm
///     -4.0,   0.231, 0.22, ...            a place s across, mm, then the gap at (x, s), mm
///
/// Both rows of places ascend in equal steps (to 1e-4 of a step), at least 4 of each. A gap may be negative; an empty
/// cell, "inf" or "nan" means no surface there.
/// @throws InputError (bad_syntax, out_of_range) with file and line; FileError.
GapGrid read_gap_grid(const std::filesystem::path& file);
GapGrid parse_gap_grid(const std::string& bytes, const std::string& origin);

}  // namespace runband
