// One grid of the rolling problem in the solver's own units, and how one grid is made from another.
#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "core/halfspace/rolling_operator.h"

namespace runband::halfspace {

/// State of a cell. The values are labels of a Field: do not renumber.
enum class SlipState : std::uint8_t { open = 0, stick = 1, slip = 2 };

/// Lengths in cell sizes dx, tractions in units of the largest bound P, slip times dx in units of dx P / G. Pairs (x,
/// s) interleaved, ns x nx cells, row-major, x along the row.
struct RollingLevel {
  std::shared_ptr<const RollingOperator> op;
  std::vector<std::uint8_t> in;  ///< 1 in contact
  std::vector<double> bound;     ///< g >= 0, per cell; 0 outside
  std::vector<double> rigid;     ///< w, per cell a pair
  std::vector<double> edge;      ///< extra compliance of cut cells, per cell a pair (x, s), in the operator's units
  std::vector<double> fraction;  ///< f, covered part of each cell

  int nx() const { return op->shape().nx; }
  int ns() const { return op->shape().ns; }
  std::size_t cells() const { return in.size(); }
};

/// Sets `edge` from `fraction`: kEdgeShare (1 - f) / f times the cell's own influence, which for a traction along the
/// rolling direction lies between those of the two directions as the edge turns from across to along rolling.
void set_edge_compliance(RollingLevel& level);

/// The next coarser grid (cells of twice the size): bound the mean over four, w the mean over those in contact, in
/// where at least two of the four are.
RollingLevel coarsen(const RollingLevel& fine);

/// Tractions of `coarse` carried to `fine`: p / g is interpolated bilinearly over coarse contact cells; where more than
/// half of the weight is saturated, |p| = g in that direction.
std::vector<double> prolong(const RollingLevel& coarse, const std::vector<double>& traction, const RollingLevel& fine);

/// One sweep of simplified theory along the strips, with the flexibility of the operator: a start for the coarsest
/// grid.
std::vector<double> simplified_start(const RollingLevel& level);

}  // namespace runband::halfspace
