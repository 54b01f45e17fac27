#include "core/halfspace/elastic.h"

#include <cmath>
#include <string>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband::halfspace {

namespace {

void check(const Material& m, const std::string& body) {
  require_positive("material of the " + body, "Young's modulus", m.youngs_modulus_MPa, "MPa");
  if (!(m.poisson_ratio > -1.0 && m.poisson_ratio <= 0.5)) {
    throw out_of_range("material of the " + body, "Poisson's ratio", m.poisson_ratio, "", "above -1 and at most 0.5");
  }
}

}  // namespace

bool ElasticPair::quasi_identical() const {
  constexpr double kRounding = 1e-12;  // kappa of two equal materials is exactly zero; of equal products, rounding
  return std::abs(mismatch) <= kRounding;
}

ElasticPair elastic_pair(const MaterialPair& material) {
  check(material.wheel, "wheel");
  check(material.rail, "rail");
  const double g1 = material.wheel.shear_modulus_MPa(), nu1 = material.wheel.poisson_ratio;
  const double g2 = material.rail.shear_modulus_MPa(), nu2 = material.rail.poisson_ratio;
  ElasticPair pair;
  pair.contact_modulus_MPa = material.contact_modulus_MPa();
  pair.shear_modulus_MPa = 2.0 / (1.0 / g1 + 1.0 / g2);
  pair.poisson_ratio = 0.5 * pair.shear_modulus_MPa * (nu1 / g1 + nu2 / g2);
  pair.mismatch = 0.25 * pair.shear_modulus_MPa * ((1.0 - 2.0 * nu1) / g1 - (1.0 - 2.0 * nu2) / g2);
  return pair;
}

std::optional<Caution> mismatch_caution(const ElasticPair& pair) {
  if (pair.quasi_identical()) return std::nullopt;
  return Caution{"unlike_materials", Severity::caution,
                 "Wheel and rail differ elastically (mismatch " + number_text(pair.mismatch, 3) +
                     "): the tangential shift caused by the pressure, and the pressure change caused by traction, are "
                     "left out. Their effect grows with the mismatch over the coefficient of friction."};
}

}  // namespace runband::halfspace
