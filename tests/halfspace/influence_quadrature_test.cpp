// Closed forms against numerical quadrature of the point-load solution at random offsets, in and out of the cell.
#include <gtest/gtest.h>

#include <boost/math/quadrature/gauss_kronrod.hpp>
#include <cmath>
#include <random>
#include <vector>

#include "core/halfspace/influence.h"

namespace runband::halfspace {
namespace {

struct J {
  double j1 = 0, j2 = 0, j3 = 0, j4 = 0;
};

// Around the place itself in polar coordinates, where 1/r cancels: rho(theta) is the signed distance to the edges of
// each of the four sub-rectangles that meet at the place.
J by_polar_quadrature(double x, double s, double dx, double ds) {
  J sum;
  const auto quadrant = [&](double w, double h, double sign_x, double sign_s) {
    // Rectangle [0, |w|] x [0, |h|] seen from its corner; area sign of w*h.
    if (w == 0.0 || h == 0.0) return;
    const double area_sign = (w > 0) == (h > 0) ? 1.0 : -1.0;
    const double aw = std::abs(w), ah = std::abs(h), split = std::atan2(ah, aw);
    const double ex = sign_x * (w > 0 ? 1 : -1), es = sign_s * (h > 0 ? 1 : -1);
    boost::math::quadrature::gauss_kronrod<double, 61> rule;
    const auto piece = [&](double from, double to, auto&& rho) {
      const auto add = [&](auto&& weight) {
        return rule.integrate([&](double t) { return rho(t) * weight(t); }, from, to, 4, 1e-14);
      };
      sum.j1 += area_sign * add([](double) { return 1.0; });
      sum.j2 += area_sign * add([](double t) { return std::cos(t) * std::cos(t); });
      sum.j3 += area_sign * add([](double t) { return std::sin(t) * std::sin(t); });
      sum.j4 += area_sign * ex * es * add([](double t) { return std::sin(t) * std::cos(t); });
    };
    piece(0.0, split, [&](double t) { return aw / std::cos(t); });
    piece(split, std::acos(0.0), [&](double t) { return ah / std::sin(t); });
  };
  for (const double sx : {1.0, -1.0}) {
    for (const double ss : {1.0, -1.0}) quadrant(0.5 * dx + sx * x, 0.5 * ds + ss * s, sx, ss);
  }
  return sum;
}

TEST(InfluenceIntegrals, EqualQuadratureAtRandomOffsets) {
  std::mt19937 random(7);
  std::uniform_real_distribution<double> place(-3.0, 3.0), size(0.3, 3.0);
  for (int k = 0; k < 200; ++k) {
    const double dx = size(random), ds = size(random);
    double x = place(random), s = place(random);
    if (k % 5 == 1) x = 0.0;
    if (k % 5 == 2) s = 0.5 * ds;                 // on an edge, or on its line
    if (k % 5 == 3) x = -0.5 * dx, s = 0.5 * ds;  // on a corner
    const J exact = by_polar_quadrature(x, s, dx, ds);
    const double scale = exact.j1;
    // Rounding of the quadrature's own cancellation between sub-rectangles included; measured 4e-14.
    constexpr double kTolerance = 1e-12;
    EXPECT_NEAR(love_coefficient(x, s, dx, ds) / scale, 1.0, kTolerance) << x << ' ' << s << ' ' << dx << ' ' << ds;
    const auto c = cerruti_coefficients(x, s, dx, ds, 0.3);
    EXPECT_NEAR(c.xx / scale, (0.7 * exact.j1 + 0.3 * exact.j2) / scale, kTolerance);
    EXPECT_NEAR(c.ss / scale, (0.7 * exact.j1 + 0.3 * exact.j3) / scale, kTolerance);
    EXPECT_NEAR(c.xs / scale, 0.3 * exact.j4 / scale, kTolerance) << x << ' ' << s << ' ' << dx << ' ' << ds;
  }
}

TEST(InfluenceIntegrals, AreContinuousWhereTheFarRuleTakesOver) {
  for (const double ds : {0.1, 1.0}) {
    for (const double angle : {0.0, 0.4, 0.8, 1.2, 1.57}) {
      const double near = 10.0 * (1.0 - 1e-13), far = 10.0 * (1.0 + 1e-13);
      const double a = love_coefficient(near * std::cos(angle), near * std::sin(angle), 1.0, ds);
      const double b = love_coefficient(far * std::cos(angle), far * std::sin(angle), 1.0, ds);
      EXPECT_NEAR(a / b, 1.0, 2e-12 / ds) << ds << ' ' << angle;
    }
  }
  // Far away a cell is a point load.
  EXPECT_NEAR(love_coefficient(3e5, 4e5, 2.0, 0.5), 1.0 / 5e5, 1e-16);
}

TEST(InfluenceTables, EqualTheSingleCoefficients) {
  constexpr int nx = 90, ns = 70;
  constexpr double dx = 0.7, ds = 1.3, nu = 0.28;
  const auto love = love_table(nx, ns, dx, ds);
  const auto cerruti = cerruti_table(nx, ns, dx, ds, nu);
  for (int j = 0; j < ns; ++j) {
    for (int i = 0; i < nx; ++i) {
      const auto at = static_cast<std::size_t>(j * nx + i);
      const double x = i * dx, s = j * ds;
      const double exact = love_coefficient(x, s, dx, ds);
      const double tolerance = exact * 4e-15 * (1.0 + i * i + j * j);  // corner differences cancel far away
      EXPECT_NEAR(love[at], exact, tolerance) << i << ' ' << j;
      const auto c = cerruti_coefficients(x, s, dx, ds, nu);
      EXPECT_NEAR(cerruti.xx[at], c.xx, tolerance) << i << ' ' << j;
      EXPECT_NEAR(cerruti.ss[at], c.ss, tolerance) << i << ' ' << j;
      EXPECT_NEAR(cerruti.xs[at], c.xs, tolerance) << i << ' ' << j;
    }
  }
}

TEST(InfluenceTables, ScaleWithTheCell) {
  const auto one = love_table(5, 4, 1.0, 2.0), three = love_table(5, 4, 3.0, 6.0);
  for (std::size_t k = 0; k < one.size(); ++k) EXPECT_NEAR(three[k], 3.0 * one[k], 1e-13);
}

}  // namespace
}  // namespace runband::halfspace
