// Semismooth Newton for Coulomb friction on one grid.
#pragma once

#include <vector>

#include "core/base/progress.h"
#include "core/halfspace/rolling_linear.h"

namespace runband::halfspace {

struct NewtonOptions {
  double tolerance = 1e-6;  ///< on ||p - Proj_g(p - s/D)|| / ||p||
  int max_steps = 60;
};

struct NewtonResult {
  bool converged = false;
  int steps = 0;
  double residual = 0;
  double convolutions = 0;  ///< in units of one float convolution of this grid
};

/// Buffers reused from grid to grid and step to step.
struct RollingScratch {
  PairScratch<double> fine;
  PairScratch<float> fast;
  KrylovScratch krylov;
  std::vector<float> step, rhs;
};

/// Improves `p` (pairs, zero outside contact) in place until the tolerance or the step limit; on return `slip` holds
/// s = w + A p of the p returned, which is the best one met.
///
/// A cell slips only if it is saturated: |p| >= g and s.p < 0; an unsaturated one is never predicted to slip, which is
/// what makes the iteration robust. Sources: semismooth Newton for contact: Hintermueller, Ito & Kunisch (2002) SIAM J.
/// Optim. 13, 865; Alart & Curnier (1991).
NewtonResult solve_newton(const RollingLevel& level, const NewtonOptions& options, const Progress& progress,
                          RollingScratch& scratch, std::vector<double>& p, std::vector<double>& slip);

/// s = w + (A + edge) p on contact cells, zero outside.
void slip_of(const RollingLevel& level, const std::vector<double>& p, PairScratch<double>& scratch,
             std::vector<double>& slip);

/// ||p - Proj_g(p - s/D)|| / ||p||.
double friction_residual(const RollingLevel& level, const std::vector<double>& p, const std::vector<double>& slip);

}  // namespace runband::halfspace
