// Values below the patch, as a cut through them along the rolling direction, with lines of equal value.
#pragma once

#include "core/base/quantities.h"
#include "viewer/panels/detail.h"

namespace runband {

/// A cut at one row of the volume's grid: x along rolling, depth downward, on even steps. Rows from the surface.
struct VolumeCut {
  int nx = 0, rows = 0;
  double x0_mm = 0, dx_mm = 1, depth_mm = 0;  ///< left edge, step, and depth of the lowest row
  double s_mm = 0;                            ///< where the cut lies
  std::vector<double> values;                 ///< values[row * nx + i]
  double highest = 0;
};
/// Through the row that holds the largest value; interpolated linearly between the volume's layers.
VolumeCut cut_through_worst(const Volume& volume, int rows = 96);

/// Pieces of the line where the cut has this value (marching squares, Lorensen and Cline 1987 in the plane); pairs of
/// points (x, depth) in mm.
std::vector<std::pair<plot::Point, plot::Point>> line_of_equal_value(const VolumeCut& cut, double value);

/// Draws the cut inside the ring: surface above, depth downward, at the given scale.
void draw_volume_cut(const Volume& volume, const DetailSubject& subject, plot::Point centre, double radius,
                     double scale, plot::Canvas&, const plot::Theme&, const plot::Style&);

}  // namespace runband
