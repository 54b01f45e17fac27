// From a rolling problem in mm and MPa to a grid in the solver's units, and back.
#pragma once

#include "core/halfspace/rolling.h"
#include "core/halfspace/rolling_level.h"

namespace runband::halfspace {

/// The box of contact cells cut out of a problem's grid.
struct RollingBox {
  int i0 = 0, j0 = 0;            ///< first cell of the box in the problem's grid
  double unit_traction_MPa = 0;  ///< P; 0 if nothing carries friction
  RollingLevel level;
};

/// @param steady  False: the bodies at rest, w a shift in mm.
RollingBox make_box(const RollingProblem& problem, const SlipStencil& stencil, bool steady);

/// @throws InputError as solve_rolling says.
void check_problem(const std::string& where, const RollingProblem& problem, const RollingOptions& options);

/// The same problem on cells of twice the size.
RollingProblem halved(const RollingProblem& problem);

/// Cells covering less than this part are not solved for; they take the traction of the best covered neighbour, in
/// proportion to their bound.
constexpr double kLeastFraction = 0.02;

}  // namespace runband::halfspace
