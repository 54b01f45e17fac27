// Influence coefficients: the surface displacement caused by a uniform pressure or traction on one rectangular cell.
//
// Both bodies count together, as like bodies with the combined constants of elastic.h. With r the distance between load
// and place, everything follows from four integrals over the cell,
//   J1 = int 1/r,   J2 = int x^2/r^3,   J3 = int s^2/r^3,   J4 = int x s/r^3,
// each the alternating sum of a closed form over the cell's corners: J2 = [s asinh(x/|s|)], J3 = [x asinh(s/|x|)],
// J1 = J2 + J3, J4 = [-r]. The area hyperbolic sine takes every sign and needs no special case but 0 asinh(s/0) = 0, so
// centre, edges, corners and axes are exact.
// Sources: A. E. H. Love, Phil. Trans. R. Soc. A 228 (1929) 377; J. J. Kalker (1990), appendix C.
#pragma once

#include <vector>

namespace runband::halfspace {

/// Normal approach at (x, s) times pi E* for unit pressure on the cell dx by ds centred at the origin: J1. Unit of
/// length. u_n = J1 p / (pi E*).
/// @accuracy 1e-12 relative for any offset and dx/ds within 1/10..10, measured in tests/halfspace/influence_love_test.
double love_coefficient(double x, double s, double dx, double ds);

/// Tangential displacements times pi G.
struct TangentialCoefficients {
  double xx = 0;  ///< along x from traction along x: (1 - nu) J1 + nu J2
  double xs = 0;  ///< along s from traction along x, and the reverse: nu J4
  double ss = 0;  ///< along s from traction along s: (1 - nu) J1 + nu J3
};
/// For unit traction on the cell centred at the origin, displacement (wheel minus rail) at (x, s). Same accuracy (of xs
/// relative to xx + ss).
/// @param nu combined Poisson's ratio.
TangentialCoefficients cerruti_coefficients(double x, double s, double dx, double ds, double nu);

/// Love coefficients of a whole grid: offset (i dx, j ds) at [j * nx + i], i = 0..nx-1, j = 0..ns-1. Even in both
/// offsets. Made by differencing one table of corner values, so that it costs about two logarithms an entry.
/// @accuracy rounding grows with the square of the offset in cells: 1e-15 near, about 1e-11 relative at 200 cells.
std::vector<double> love_table(int nx, int ns, double dx, double ds);

struct TangentialTable {
  std::vector<double> xx, ss;  ///< even in both offsets
  std::vector<double> xs;      ///< odd in each offset
};
/// Tangential coefficients of a whole grid, laid out as in love_table.
TangentialTable cerruti_table(int nx, int ns, double dx, double ds, double nu);

}  // namespace runband::halfspace
