// Influence coefficients against closed-form values computed independently with mpmath (25 digits) and cross-checked
// there by quadrature; the centre factors 1.12, 1.36, 1.53, 1.78, 2.10, 2.54 are those of classic soil mechanics tables
// for the settlement under a flexible rectangle.
#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/halfspace/elastic.h"
#include "core/halfspace/influence.h"

namespace runband::halfspace {
namespace {

constexpr double kTolerance = 1e-12;  // the values are printed to 1e-12

TEST(LoveCoefficient, MatchesTheUniformlyLoadedSquare) {
  // Love 1929; w pi E* / (p L).
  EXPECT_NEAR(love_coefficient(0, 0, 1, 1), 3.525494348078, kTolerance);
  EXPECT_NEAR(love_coefficient(0, 0, 1, 1), 4.0 * std::log(1.0 + std::numbers::sqrt2), kTolerance);
  EXPECT_NEAR(love_coefficient(0.5, 0.5, 1, 1), 1.762747174039, kTolerance);
  EXPECT_NEAR(love_coefficient(-0.5, 0.5, 1, 1), 1.762747174039, kTolerance);
  EXPECT_NEAR(love_coefficient(0.5, -0.5, 1, 1), 1.762747174039, kTolerance);
  EXPECT_NEAR(love_coefficient(-0.5, -0.5, 1, 1), 1.762747174039, kTolerance);
  EXPECT_NEAR(love_coefficient(0.5, 0, 1, 1), 2.406059125298, kTolerance);
  EXPECT_NEAR(love_coefficient(0, -0.5, 1, 1), 2.406059125298, kTolerance);
}

TEST(LoveCoefficient, MatchesTheClassicTableOfRectangles) {
  // w E / ((1 - nu^2) p B) at the centre; at the corner half of it.
  const struct {
    double ratio, centre, handbook;
  } rows[] = {{1.0, 1.122199704678, 1.12}, {1.5, 1.357579500783, 1.36}, {2.0, 1.531744812650, 1.53},
              {3.0, 1.783042691256, 1.78}, {5.0, 2.104594234547, 2.10}, {10.0, 2.544291497959, 2.54}};
  for (const auto& row : rows) {
    EXPECT_NEAR(love_coefficient(0, 0, row.ratio, 1) / std::numbers::pi, row.centre, kTolerance) << row.ratio;
    EXPECT_NEAR(love_coefficient(0, 0, 1, row.ratio) / std::numbers::pi, row.centre, kTolerance) << row.ratio;
    EXPECT_NEAR(love_coefficient(0.5 * row.ratio, 0.5, row.ratio, 1) / std::numbers::pi, 0.5 * row.centre, kTolerance);
    EXPECT_NEAR(row.centre, row.handbook, 0.005) << "the handbook's digits";
  }
}

TEST(CerrutiCoefficients, MatchTheSquareUnderUniformTraction) {
  // One body: ux G / (q L) = [(1 - nu) J1 + nu J2] / (2 pi), at the centre (1 - nu/2) 4 ln(1 + sqrt 2) / (2 pi).
  const struct { double nu, centre; } rows[] = {{0.25, 0.490962370797}, {0.28, 0.482545873012}, {0.3, 0.476934874488}};
  for (const auto& row : rows) {
    const auto centre = cerruti_coefficients(0, 0, 1, 1, row.nu);
    const auto corner = cerruti_coefficients(0.5, 0.5, 1, 1, row.nu);
    EXPECT_NEAR(centre.xx / (2 * std::numbers::pi), row.centre, kTolerance);
    EXPECT_NEAR(centre.ss / (2 * std::numbers::pi), row.centre, kTolerance);
    EXPECT_NEAR(corner.xx / (2 * std::numbers::pi), 0.5 * row.centre, kTolerance);
    EXPECT_EQ(centre.xs, 0.0);
  }
  // Cross displacement at the corner: nu (2 - sqrt 2) / (2 pi G).
  EXPECT_NEAR(cerruti_coefficients(0.5, 0.5, 1, 1, 0.25).xs / (2 * std::numbers::pi), 0.0233077017861, kTolerance);
  EXPECT_NEAR(cerruti_coefficients(0.5, 0.5, 1, 1, 0.3).xs / (2 * std::numbers::pi), 0.0279692421434, kTolerance);
  EXPECT_NEAR(cerruti_coefficients(-0.5, 0.5, 1, 1, 0.3).xs / (2 * std::numbers::pi), -0.0279692421434, kTolerance);
}

TEST(CerrutiCoefficients, MatchTheTwoByOneRectangle) {
  // J1 = 4.812118250596, J2 = 4 hy asinh(hx/hy) with the long side along x or across.
  EXPECT_NEAR(cerruti_coefficients(0, 0, 2, 1, 1.0).xx, 2.887270950358, kTolerance);
  EXPECT_NEAR(cerruti_coefficients(0, 0, 1, 2, 1.0).xx, 1.924847300238, kTolerance);
  EXPECT_NEAR(cerruti_coefficients(0, 0, 2, 1, 0.0).xx, 4.812118250596, kTolerance);
}

TEST(ElasticPair, LikeMaterialsKeepTheirConstants) {
  const ElasticPair pair = elastic_pair({});
  EXPECT_DOUBLE_EQ(pair.shear_modulus_MPa, 210000.0 / 2.56);
  EXPECT_DOUBLE_EQ(pair.poisson_ratio, 0.28);
  EXPECT_NEAR(pair.contact_modulus_MPa, 113932.291667, 1e-6);  // E / (2 (1 - nu^2))
  EXPECT_TRUE(pair.quasi_identical());
  EXPECT_FALSE(mismatch_caution(pair));
}

TEST(ElasticPair, UnlikeMaterialsAreCombinedAndCautioned) {
  MaterialPair material;
  material.rail = {70000.0, 0.33};  // aluminium
  const ElasticPair pair = elastic_pair(material);
  // 1/E* = (1 - nu)/G holds for any pair: the normal and the tangential problem see the same bodies.
  EXPECT_NEAR(1.0 / pair.contact_modulus_MPa, (1.0 - pair.poisson_ratio) / pair.shear_modulus_MPa, 1e-18);
  EXPECT_NEAR(pair.mismatch, -0.080, 0.005);
  EXPECT_FALSE(pair.quasi_identical());
  ASSERT_TRUE(mismatch_caution(pair));
  // Two incompressible bodies do not couple however different their stiffness.
  material.wheel.poisson_ratio = material.rail.poisson_ratio = 0.5;
  EXPECT_TRUE(elastic_pair(material).quasi_identical());
  material.rail.poisson_ratio = 0.6;
  EXPECT_THROW(elastic_pair(material), InputError);
}

}  // namespace
}  // namespace runband::halfspace
