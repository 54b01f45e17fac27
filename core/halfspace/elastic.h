// The elastic constants of two bodies pressed together, combined as the half-space needs them.
#pragma once

#include <optional>

#include "core/base/material.h"
#include "core/base/quantities.h"

namespace runband::halfspace {

/// Two half-spaces seen as one: normal and tangential displacement differences follow from these four numbers.
/// Source: J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990), section 1.7.
struct ElasticPair {
  double contact_modulus_MPa = 0;  ///< E*, 1/E* = (1 - nu1^2)/E1 + (1 - nu2^2)/E2 = (1 - nu)/G exactly
  double shear_modulus_MPa = 0;    ///< G, 1/G = (1/G1 + 1/G2) / 2
  double poisson_ratio = 0;        ///< nu, nu/G = (nu1/G1 + nu2/G2) / 2
  double mismatch = 0;  ///< kappa = G/4 ((1 - 2 nu1)/G1 - (1 - 2 nu2)/G2); 0 if pressure causes no tangential shift

  /// Normal and tangential problems are independent (like materials, or unlike ones with kappa = 0).
  bool quasi_identical() const;
};

/// Body 1 is the wheel, body 2 the rail.
/// @throws InputError (out_of_range) unless Young's moduli are > 0 and Poisson's ratios within -1 < nu <= 0.5.
ElasticPair elastic_pair(const MaterialPair& material);

/// What the reader must know when the pair is not quasi-identical: the coupling through kappa is left out.
std::optional<Caution> mismatch_caution(const ElasticPair& pair);

}  // namespace runband::halfspace
