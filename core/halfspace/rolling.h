// Steady rolling with Coulomb friction on any contact patch: the exact theory of two elastic half-spaces.
#pragma once

#include <cstdint>
#include <vector>

#include "core/base/progress.h"
#include "core/base/quantities.h"
#include "core/halfspace/elastic.h"

namespace runband::halfspace {

/// Rigid slip of constant creepages: (xi - phi s, eta + phi x) at each cell centre, ns x nx pairs.
/// @param longitudinal, lateral  Velocity of the wheel's surface minus the rail's, over V. Unit 1.
/// @param spin_per_mm            Angular velocity of the wheel minus the rail's about n, over V. Unit 1/mm.
std::vector<double> rigid_slip(const Grid& grid, double longitudinal, double lateral, double spin_per_mm);

/// Part of each cell's area that the ellipse of semi-axes a (rolling) and b (across) about the origin covers.
/// @accuracy 1e-6 of a cell.
std::vector<double> ellipse_fraction(const Grid& grid, double semi_axis_rolling_mm, double semi_axis_across_mm);

struct RollingProblem {
  Grid grid;
  std::vector<double> pressure_MPa;   ///< cell averages, ns x nx; a cell is in contact where it is > 0
  std::vector<double> friction;       ///< one value, or one per cell; >= 0
  std::vector<double> slip;           ///< rigid slip, wheel minus rail over V, ns x nx pairs (x, s)
  std::vector<double> area_fraction;  ///< part of each cell inside the patch, 0..1; empty: whole cells
  ElasticPair elastic;
};

enum class UpwindOrder { first = 1, second = 2 };

struct RollingOptions {
  UpwindOrder order = UpwindOrder::second;
  double tolerance = 1e-6;   ///< on the friction law: ||p - Proj(p - s/D)|| / ||p||; 1e-10..1e-2
  bool extrapolate = false;  ///< also solve on cells of twice the size, and extrapolate the forces to zero cell size
  int max_steps = 60;        ///< Newton steps on one grid before the fallback
};

enum class RollingState : std::uint8_t { open = 0, stick = 1, slip = 2 };

struct RollingResult {
  std::vector<double> traction_MPa;  ///< on the wheel, ns x nx pairs (x, s)
  std::vector<double> slip;          ///< relative slip, wheel minus rail over V, elastic part included, ns x nx pairs
  std::vector<RollingState> state;   ///< per cell
  double force_rolling_N = 0;        ///< on the wheel, along x; small creepage xi gives -G a b C11 xi
  double force_across_N = 0;
  double moment_normal_Nmm = 0;  ///< about n through the grid's origin
  int iterations = 0;            ///< Newton steps over all grids
  double convolutions = 0;       ///< work in units of one convolution (float) of the finest grid
  double residual = 0;
  int grids = 0;
  bool used_fallback = false;  ///< time marching had to finish
};

/// Tractions, slip, and stick and slip areas.
///
/// Leading edge at +x. Slip s dx = w dx + u(x) - u(x + dx) (first order) obeys Coulomb's law |p| <= mu p_n, and p = -mu
/// p_n s/|s| where it slips. Solved by a semismooth Newton method on a sequence of grids. Deterministic; several
/// threads may solve at once.
/// @throws InputError (out_of_range) for sizes that disagree, or values that are not finite or of the wrong sign.
/// @throws NotConverged if neither Newton nor time marching meets the tolerance. Cancelled on request.
/// @source J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990), ch. 4.
RollingResult solve_rolling(const RollingProblem& problem, const RollingOptions& options = {},
                            const Progress& progress = {});

/// The same bodies at rest: tractions after a rigid shift (`problem.slip` in mm instead of relative to V) applied in
/// one step to unloaded surfaces. Cattaneo's and Mindlin's problem for any patch. `slip` of the result is in mm.
RollingResult solve_shift(const RollingProblem& problem, const RollingOptions& options = {},
                          const Progress& progress = {});

}  // namespace runband::halfspace
