// Simplified theory of rolling contact: each point of the surface is its own spring.
//
// Linear in the number of elements and without a matrix: a thousand times faster than the half-space, and within about
// ten per cent of it for elliptic patches (the map of errors is made by tests/halfspace/simplified_test.cpp).
#pragma once

#include "core/halfspace/creep_coefficients.h"
#include "core/halfspace/rolling.h"

namespace runband::halfspace {

/// Displacement per traction, mm/MPa: L1 for longitudinal, L2 for lateral creepage, L3 for spin.
struct Flexibility {
  double longitudinal = 0, lateral = 0, spin = 0;
};
/// The flexibilities with which the linear creep forces are exact:
/// L1 = 8 a / (3 G C11), L2 = 8 a / (3 G C22), L3 = pi a^2 / (4 G sqrt(a b) C23).
/// @source J. J. Kalker, Vehicle System Dynamics 11 (1982) 1-13.
Flexibility flexibility(double semi_axis_rolling_mm, double semi_axis_across_mm, double shear_modulus_MPa,
                        const CreepCoefficients& coefficients);

/// Shape of the traction bound over the ellipse: Hertz's, or the parabola that belongs to a bed of springs. The
/// parabola gives the better stick area.
enum class TractionBound { elliptic, parabolic };

struct SimplifiedEllipse {
  double semi_axis_rolling_mm = 0, semi_axis_across_mm = 0;
  double normal_force_N = 0;
  double friction = 0;
  Flexibility flexibility;
  TractionBound bound = TractionBound::parabolic;
  double longitudinal = 0, lateral = 0;  ///< creepages, wheel minus rail over V
  double spin_per_mm = 0;
  int strips = 32;    ///< across the patch
  int elements = 32;  ///< along each strip
};

struct SimplifiedForces {
  double force_rolling_N = 0, force_across_N = 0;  ///< on the wheel
  double moment_normal_Nmm = 0;
  double slip_area_fraction = 0;
};

/// Creep forces of an ellipse: strips along the rolling direction, each integrated from its leading edge; several
/// strips side by side in vector registers.
/// @throws InputError (out_of_range) unless axes, force and flexibilities are > 0, friction >= 0, 1 <= strips, elements
/// <= 4096, and creepages are finite.
SimplifiedForces simplified_forces(const SimplifiedEllipse& ellipse);

/// The same rule on any patch, bound mu p_n, any field of rigid slip: its mean over the patch acts on L1 and L2, the
/// rest on L3. `residual`, `convolutions` and `iterations` of the result are zero.
RollingResult simplified_rolling(const RollingProblem& problem, const Flexibility& flexibility);

}  // namespace runband::halfspace
