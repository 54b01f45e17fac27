// Creep-force laws against tabulated values.
#include "core/halfspace/creep_laws.h"

#include <gtest/gtest.h>

#include <cmath>

#include "core/base/error.h"

namespace runband::halfspace {
namespace {

CreepContact circle(double nu) {
  CreepContact c;
  c.semi_axis_rolling_mm = c.semi_axis_across_mm = 5;
  c.normal_force_N = 80000;
  c.friction = 0.3;
  c.shear_modulus_MPa = 82000;
  c.poisson_ratio = nu;
  return c;
}

TEST(CreepLaws, CubicMatchesItsTable) {
  // T / (mu N) = tau - tau^2/3 + tau^3/27. Source: Vermeulen & Johnson 1964; Shen, Hedrick & Elkins 1983.
  const double table[][2] = {{0.25, 0.22974537037},
                             {0.5, 0.421296296296},
                             {1, 0.703703703704},
                             {1.5, 0.875},
                             {2, 0.962962962963},
                             {2.5, 0.99537037037},
                             {3, 1},
                             {7, 1}};
  for (const auto& [tau, share] : table) EXPECT_NEAR(cubic_saturation(tau), share, 1e-11);
}

TEST(CreepLaws, VermeulenJohnsonHasJohnsonsSlopesOnACircle) {
  // 16 / (4 - 3 nu) and 16 / (4 - nu): nu 0.25 and 0.3. Source: Johnson 1958.
  const double table[][3] = {{0, 4, 4}, {0.25, 4.923076923, 4.266666667}, {0.3, 5.161290323, 4.324324324}};
  for (const auto& [nu, along, across] : table) {
    CreepContact c = circle(nu);
    c.longitudinal = 1e-9;
    EXPECT_NEAR(-vermeulen_johnson(c).rolling_N / (82000 * 25 * 1e-9), along, 1e-5);
    c.longitudinal = 0;
    c.lateral = 1e-9;
    EXPECT_NEAR(-vermeulen_johnson(c).across_N / (82000 * 25 * 1e-9), across, 1e-5);
  }
}

TEST(CreepLaws, VermeulenJohnsonFollowsJohnsonsCurveOnACircle) {
  // xi = 3 mu N (4 - 3 nu) / (16 G a^2) [1 - (1 - Q/(mu N))^(1/3)]. Source: Johnson 1958.
  CreepContact c = circle(0.28);
  for (const double q : {0.1, 0.5, 0.9, 1.0}) {
    c.longitudinal = 3 * 0.3 * 80000 * (4 - 3 * 0.28) / (16 * 82000 * 25.0) * (1 - std::cbrt(1 - q));
    EXPECT_NEAR(-vermeulen_johnson(c).rolling_N, q * 0.3 * 80000, 1e-6);
  }
}

TEST(CreepLaws, ShenHedrickElkinsStartsAtTheLinearForcesAndEndsAtTheFrictionLimit) {
  const CreepCoefficients k = creep_coefficients(1, 0.25);
  CreepContact c = circle(0.25);
  c.longitudinal = 1e-8;
  c.lateral = -2e-8;
  c.spin_per_mm = 3e-9;
  const CreepForces f = shen_hedrick_elkins(c, k), linear = linear_creep_forces(c, k);
  EXPECT_NEAR(f.rolling_N, linear.rolling_N, 1e-4 * std::abs(linear.rolling_N));
  EXPECT_NEAR(linear.across_N, -82000 * 25 * (k.c22 * -2e-8 + 5 * k.c23 * 3e-9), 1e-9);
  c.longitudinal = 1;
  c.lateral = -2;
  const CreepForces full = shen_hedrick_elkins(c, k);
  EXPECT_NEAR(std::hypot(full.rolling_N, full.across_N), 0.3 * 80000, 1e-6);
  EXPECT_LT(full.rolling_N, 0);
  EXPECT_GT(full.across_N, 0);
}

TEST(CreepLaws, PolachMatchesItsTable) {
  // F / (Q mu) for eps 0.1, 0.5, 1, 2, 5, 10. Source: Polach 1999, 2005; values computed from the formula.
  const double eps[] = {0.1, 0.5, 1, 2, 5, 10};
  const struct {
    double ka, ks, share[6];
  } rows[] = {
      {1, 1, {0.126482695492, 0.549815144248, 0.818309886184, 0.959480673646, 0.996760962923, 0.999580625769}},
      {1, 0.4, {0.0884828833264, 0.380313825325, 0.560547769365, 0.684201333992, 0.827259644001, 0.907073399876}},
      {0.3, 0.1, {0.0254474054229, 0.12519615616, 0.238667485971, 0.406527580658, 0.588991745624, 0.69098593171}}};
  for (const auto& row : rows) {
    for (int i = 0; i < 6; ++i) EXPECT_NEAR(polach_saturation(eps[i], row.ka, row.ks), row.share[i], 1e-11);
  }
  // K_M; sign as remembered.
  const double km[][2] = {
      {0.1, -0.0653530699605}, {0.5, -0.213333333333}, {1, -1.0 / 6}, {2, -0.0533333333}, {5, -0.00493096647}};
  for (const auto& [e, value] : km) EXPECT_NEAR(polach_spin_factor(e), value, 1e-10);
}

TEST(CreepLaws, PolachStartsAtKalkersSlopeAndFallsWithSlipSpeed) {
  const CreepCoefficients k = creep_coefficients(1, 0.25);
  CreepContact c = circle(0.25);
  c.longitudinal = 1e-8;
  EXPECT_NEAR(-polach(c, k).rolling_N, 82000 * 25 * k.c11 * 1e-8, 1e-6 * 82000 * 25 * k.c11 * 1e-8);
  // Falling friction: mu = mu0 ((1 - A) exp(-B w) + A); at w = V s = 2 m/s with A 0.4, B 0.6 full slip nears that
  // share.
  c.longitudinal = 0.1;
  const double share = 0.6 * std::exp(-0.6 * 2.0) + 0.4;
  EXPECT_NEAR(-polach(c, k, {1, 1, 0.4, 0.6, 20}).rolling_N, 0.3 * 80000 * share, 0.01 * 0.3 * 80000);
  // Pure spin pushes against positive spin times C23, as the linear theory does.
  c.longitudinal = 0;
  c.spin_per_mm = 1e-6;
  EXPECT_LT(polach(c, k).across_N, 0);
  EXPECT_THROW(polach(c, k, {0.3, 0.5, 1, 0, 0}), InputError);
}

TEST(CreepLaws, RefuseBadInput) {
  CreepContact c = circle(0.25);
  c.normal_force_N = 0;
  EXPECT_THROW(vermeulen_johnson(c), InputError);
  c = circle(0.25);
  c.lateral = std::nan("");
  EXPECT_THROW(shen_hedrick_elkins(c, {1, 1, 1, 1}), InputError);
}

}  // namespace
}  // namespace runband::halfspace
