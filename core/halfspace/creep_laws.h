// Closed formulas for the creep forces of an ellipse: fractions of a microsecond each, no field.
#pragma once

#include "core/halfspace/creep_coefficients.h"

namespace runband::halfspace {

/// One elliptic contact and its creepages. Axes in mm, force in N, G in MPa; creepages wheel minus rail over V.
struct CreepContact {
  double semi_axis_rolling_mm = 0, semi_axis_across_mm = 0;
  double normal_force_N = 0;
  double friction = 0;
  double shear_modulus_MPa = 0;
  double poisson_ratio = 0;
  double longitudinal = 0, lateral = 0;
  double spin_per_mm = 0;
};

/// On the wheel; the laws give no spin moment.
struct CreepForces {
  double rolling_N = 0, across_N = 0;
};

/// The cubic both older laws share: 1 - (1 - tau/3)^3 up to tau = 3, then 1.
double cubic_saturation(double tau);

/// The linear theory without any bound: F = -G a b (C11 xi, C22 eta + sqrt(a b) C23 phi).
CreepForces linear_creep_forces(const CreepContact& contact, const CreepCoefficients& coefficients);

/// Ellipse of stick touching the leading edge; no spin (spin_per_mm is ignored). Its initial slopes, 16/(4 - 3 nu) and
/// 16/(4 - nu) for a circle, are 15 to 20 % above the exact ones.
/// @source P. J. Vermeulen, K. L. Johnson, J. Appl. Mech. 31 (1964) 338; K. L. Johnson (1958) for the circle.
CreepForces vermeulen_johnson(const CreepContact& contact);

/// The same cubic on the linear forces, spin included: good while spin is small.
/// @source Z. Y. Shen, J. K. Hedrick, J. A. Elkins, 8th IAVSD Symposium (1983).
CreepForces shen_hedrick_elkins(const CreepContact& contact, const CreepCoefficients& coefficients);

/// Parameters of Polach's law. Defaults: the 1999 form, dry and constant friction.
struct PolachParameters {
  double adhesion_reduction = 1;      ///< kA, 0 < kS <= kA <= 1
  double slip_reduction = 1;          ///< kS
  double friction_ratio = 1;          ///< A = mu(infinite slip) / mu(0)
  double friction_decay_s_per_m = 0;  ///< B
  double speed_m_s = 0;               ///< V; only for the falling friction
};

/// F / (N mu) = (2/pi) (kA eps / (1 + (kA eps)^2) + atan(kS eps)). Source: O. Polach, Wear 258 (2005) 992.
double polach_saturation(double epsilon, double adhesion_reduction, double slip_reduction);

/// K_M of Polach's spin term; never positive. Source: O. Polach, Vehicle System Dynamics Suppl. 33 (1999) 728 (memory).
double polach_spin_factor(double epsilon_m);

/// Polach's law with his treatment of spin (the constants of the spin term are remembered, not read: memory).
CreepForces polach(const CreepContact& contact, const CreepCoefficients& coefficients,
                   const PolachParameters& parameters = {});

}  // namespace runband::halfspace
