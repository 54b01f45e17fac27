#include "core/halfspace/creep_laws.h"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"

namespace runband::halfspace {
namespace {

constexpr double kPi = std::numbers::pi;

void check(const CreepContact& c) {
  const char* where = "creep law";
  require_positive(where, "semi-axis along rolling", c.semi_axis_rolling_mm, "mm");
  require_positive(where, "semi-axis across", c.semi_axis_across_mm, "mm");
  require_positive(where, "normal force", c.normal_force_N, "N");
  require_positive(where, "shear modulus", c.shear_modulus_MPa, "MPa");
  if (!(c.friction >= 0 && std::isfinite(c.friction))) {
    throw out_of_range(where, "friction coefficient", c.friction, "", "finite and not negative");
  }
  if (!(c.poisson_ratio >= 0 && c.poisson_ratio <= 0.5)) {
    throw out_of_range(where, "Poisson's ratio", c.poisson_ratio, "", "0 to 0.5");
  }
  for (const double v : {c.longitudinal, c.lateral, c.spin_per_mm}) {
    if (!std::isfinite(v)) throw out_of_range(where, "creepage", v, "", "finite");
  }
}

/// A force of size mu N f(tau) along `direction` = mu N tau.
CreepForces saturated(const CreepForces& direction, double limit) {
  const double size = std::hypot(direction.rolling_N, direction.across_N);
  if (size == 0 || limit == 0) return {};
  const double scale = limit * cubic_saturation(size / limit) / size;
  return {scale * direction.rolling_N, scale * direction.across_N};
}

/// I_x = int_0^pi L (1 - nu e_x^2) cos^2 psi, and I_s with e_s: how an ellipsoidal traction along x (along s) bends the
/// surface along x. Circle: a pi/8 (4 - 3 nu) and a pi/8 (4 - nu). See creep_coefficients_spectral.cpp for L and e.
struct EllipsoidBending {
  double x = 0, s = 0;
};
EllipsoidBending ellipsoid_bending(double a, double b, double nu) {
  const int points = 48 + static_cast<int>(std::min(12 * std::max(a / b, b / a), 1e4));
  EllipsoidBending sum;
  for (int q = 0; q < points; ++q) {
    const double psi = kPi * q / points, c = std::cos(psi), s = std::sin(psi);
    const double l = 1 / std::sqrt(c * c / (a * a) + s * s / (b * b)), ex = l * c / a, es = l * s / b;
    sum.x += l * (1 - nu * ex * ex) * c * c * kPi / points;
    sum.s += l * (1 - nu * es * es) * c * c * kPi / points;
  }
  return sum;
}

}  // namespace

double cubic_saturation(double tau) {
  if (tau >= 3) return 1;
  const double left = 1 - tau / 3;
  return 1 - left * left * left;
}

CreepForces linear_creep_forces(const CreepContact& c, const CreepCoefficients& k) {
  check(c);
  const double a = c.semi_axis_rolling_mm, b = c.semi_axis_across_mm, stiffness = c.shear_modulus_MPa * a * b;
  return {-stiffness * k.c11 * c.longitudinal,
          -stiffness * (k.c22 * c.lateral + std::sqrt(a * b) * k.c23 * c.spin_per_mm)};
}

CreepForces vermeulen_johnson(const CreepContact& c) {
  check(c);
  const double a = c.semi_axis_rolling_mm, b = c.semi_axis_across_mm;
  const EllipsoidBending bend = ellipsoid_bending(a, b, c.poisson_ratio);
  // xi = (3 mu N / (2 pi G a^2 b)) I [1 - (1 - T)^(1/3)]: tau = 3 [...] = 2 pi G a^2 b xi / (mu N I).
  const double scale = -2 * kPi * c.shear_modulus_MPa * a * a * b;
  return saturated({scale * c.longitudinal / bend.x, scale * c.lateral / bend.s}, c.friction * c.normal_force_N);
}

CreepForces shen_hedrick_elkins(const CreepContact& c, const CreepCoefficients& k) {
  return saturated(linear_creep_forces(c, k), c.friction * c.normal_force_N);
}

double polach_saturation(double epsilon, double adhesion_reduction, double slip_reduction) {
  const double area = adhesion_reduction * epsilon;
  return 2 / kPi * (area / (1 + area * area) + std::atan(slip_reduction * epsilon));
}

double polach_spin_factor(double epsilon_m) {
  const double e2 = epsilon_m * epsilon_m, d = (e2 - 1) / (e2 + 1), rest = std::max(0.0, 1 - d * d);
  return std::abs(epsilon_m) * (d * d * d / 3 - d * d / 2 + 1.0 / 6) - rest * std::sqrt(rest) / 3;
}

CreepForces polach(const CreepContact& c, const CreepCoefficients& k, const PolachParameters& p) {
  check(c);
  const double a = c.semi_axis_rolling_mm, b = c.semi_axis_across_mm, g = c.shear_modulus_MPa;
  if (!(p.slip_reduction > 0 && p.slip_reduction <= p.adhesion_reduction && p.adhesion_reduction <= 1)) {
    throw out_of_range("Polach's law", "kS", p.slip_reduction, "", "0 < kS <= kA <= 1");
  }
  const double sx = c.longitudinal, sy = c.lateral, turned = sy + c.spin_per_mm * a;
  const double sy_c = std::abs(turned) <= std::abs(sy) ? sy : turned;
  const double s = std::hypot(sx, sy), s_c = std::hypot(sx, sy_c);
  if (s_c == 0) return {};
  const double slip_speed = s * p.speed_m_s;
  const double mu =
      c.friction * ((1 - p.friction_ratio) * std::exp(-p.friction_decay_s_per_m * slip_speed) + p.friction_ratio);
  const double limit = mu * c.normal_force_N;
  if (limit == 0) return {};
  const double c_jj = s > 0 ? std::hypot(k.c11 * sx, k.c22 * sy) / s : k.c22;
  const double epsilon = 0.25 * g * kPi * a * b * c_jj * s_c / limit;
  const double force = limit * polach_saturation(epsilon, p.adhesion_reduction, p.slip_reduction);
  const double shape = 1 + 6.3 * (1 - std::exp(-a / b));
  const double epsilon_m = 8.0 / 3.0 * g * b * std::sqrt(a * b) / limit * k.c23 * std::abs(sy_c) / shape;
  const double spin_force = -9.0 / 16.0 * a * limit * polach_spin_factor(epsilon_m) * shape;  // >= 0
  return {-force * sx / s_c, -(force * sy + spin_force * c.spin_per_mm) / s_c};
}

}  // namespace runband::halfspace
