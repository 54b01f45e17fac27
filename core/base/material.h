// Elastic constants of the two bodies.
#pragma once

#include <optional>

namespace runband {

/// An isotropic elastic material. Defaults: rail steel, the constants of the design note.
struct Material {
  double youngs_modulus_MPa = 210000.0;
  double poisson_ratio = 0.28;

  double shear_modulus_MPa() const { return youngs_modulus_MPa / (2.0 * (1.0 + poisson_ratio)); }
  bool operator==(const Material&) const = default;
};

/// Wheel and rail together, and what is common to both.
struct MaterialPair {
  Material wheel;
  Material rail;
  std::optional<double> hardness_MPa;     ///< cap on pressure (elastic-perfectly plastic), if any
  std::optional<double> shear_yield_MPa;  ///< k, yield stress in pure shear of the rail

  /// E*: 1/E* = (1 - nu1^2)/E1 + (1 - nu2^2)/E2. Source: Johnson, Contact Mechanics (1985), eq. 4.24.
  double contact_modulus_MPa() const {
    const auto compliance = [](const Material& m) {
      return (1.0 - m.poisson_ratio * m.poisson_ratio) / m.youngs_modulus_MPa;
    };
    return 1.0 / (compliance(wheel) + compliance(rail));
  }
  bool operator==(const MaterialPair&) const = default;
};

}  // namespace runband
