// Kalker's linear creep coefficients: the creep forces of an ellipse at vanishing creepage.
#pragma once

namespace runband::halfspace {

/// F_rolling = -G a b C11 xi;  F_across = -G a b (C22 eta + c C23 phi);  M_normal = -G a b (-c C23 eta + c^2 C33 phi);
/// c = sqrt(a b), a the semi-axis along rolling, b across, G the combined shear modulus.
struct CreepCoefficients {
  double c11 = 0, c22 = 0, c23 = 0, c33 = 0;
};

/// Interpolated from a table over a/b 0.05..20, in half a microsecond; computed (about 10 ms) from there to 1/200 and
/// 200; beyond, scaled by the powers of a/b of the known asymptotes.
///
/// @param a_over_b       > 0, finite.
/// @param poisson_ratio  0..0.5, of the pair.
/// @accuracy 1e-4 relative for a/b 0.05..20, measured in tests/published/creep_coefficients_test.cpp.
/// @throws InputError (out_of_range).
/// @source J. J. Kalker, thesis, Delft 1967; Three-Dimensional Elastic Bodies in Rolling Contact (1990), table E3.
CreepCoefficients creep_coefficients(double a_over_b, double poisson_ratio);

/// The same computed from the equations, in about ten milliseconds: what the table is made of.
///
/// Galin's theorem: a traction f_n / sqrt(1 - x^2/a^2 - s^2/b^2), f_n a hemispherical harmonic of degree n, displaces
/// the ellipse by harmonics of the same degree. Without slip u = (integral of w along x) + k(s); k, a series of
/// Legendre polynomials, makes the singular part f vanish along the leading edge (least squares).
/// @param degree  Highest degree of the harmonics, 8..128.
/// @accuracy 1e-4 relative at degree 48 for a/b 0.1..10.
/// @throws InputError (out_of_range).
CreepCoefficients compute_creep_coefficients(double a_over_b, double poisson_ratio, int degree = 48);

}  // namespace runband::halfspace
