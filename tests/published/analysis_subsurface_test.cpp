// Stresses below a Hertzian patch against closed forms on its axis.
// Source: K. L. Johnson, Contact Mechanics (1985), eqs 3.45 and 3.69 and table 4.1; digits by independent computation.
#include <gtest/gtest.h>

#include <cmath>

#include "core/solve/solution.h"

namespace runband {
namespace {

const AnalysisResult& subsurface_of(const Solution& solution) {
  const AnalysisResult& r = solution.contacts.front().analyses.at("subsurface");
  if (r.volumes.size() != 2) throw std::runtime_error(r.cautions.empty() ? "no volumes" : r.cautions.front().text);
  return r;
}

Solution bench(double rolling_per_mm, double across_per_mm, double nu, int cells, int layers,
               const std::string& more = {}) {
  const std::string text = "[bench]\ncurvature_rolling_per_mm = " + std::to_string(rolling_per_mm) +
                           "\ncurvature_across_per_mm = " + std::to_string(across_per_mm) +
                           "\nnormal_force_N = 20000\n[material]\npoisson_ratio = " + std::to_string(nu) +
                           "\n[patch]\ncells = " + std::to_string(cells) +
                           "\n[analyses.subsurface]\nlayers = " + std::to_string(layers) + "\n" + more;
  return solve(parse_case(text, "bench", {}), {}, {&installed_analyses(), {"subsurface"}});
}
const std::string kNoFriction = "[friction]\ncoefficient = 0.0\n";

double quantity(const AnalysisResult& r, const std::string& name) {
  for (const Quantity& q : r.quantities)
    if (q.name == name) return q.value;
  ADD_FAILURE() << "no " << name;
  return NAN;
}

struct OnAxis {
  double largest, depth;
};
/// Largest value on the column through the middle of the patch, by a parabola.
OnAxis on_axis(const Volume& v) {
  const Grid& g = v.grid;
  // The middle lies between cells where their number is even.
  const auto at = [&](std::size_t k) {
    const int i = g.nx / 2, j = g.ns / 2, i0 = g.nx % 2 == 0 ? i - 1 : i, j0 = g.ns % 2 == 0 ? j - 1 : j;
    const auto value = [&](int a, int b) {
      return v.values[k * static_cast<std::size_t>(g.cells()) + static_cast<std::size_t>(b * g.nx + a)];
    };
    return 0.25 * (value(i, j) + value(i0, j) + value(i, j0) + value(i0, j0));
  };
  std::size_t best = 1;
  for (std::size_t k = 1; k + 1 < v.depth_mm.size(); ++k)
    if (at(k) > at(best)) best = k;
  const double a = at(best - 1), b = at(best), c = at(best + 1), t = 0.5 * (a - c) / (a - 2 * b + c);
  return {b - 0.25 * (a - c) * t, v.depth_mm[best] + t * (v.depth_mm[1] - v.depth_mm[0])};
}

// What the plugin promises on the axis.
constexpr double kAxisTolerance = 0.005;

TEST(Subsurface, LargestShearBelowACircleIsAsJohnsonHasIt) {
  struct Row {
    double nu, depth, shear;
  };
  // tau_max / p0 and its depth over a (Johnson for nu = 0.3: 0.31 p0 at 0.48 a).
  for (const Row& row : {Row{0.0, 0.381936200694, 0.384821110954},
                         {0.25, 0.464313192981, 0.321678403153},
                         {0.28, 0.474237197154, 0.314646801608},
                         {0.3, 0.480864485293, 0.310020501955}}) {
    const Solution s = bench(1 / 230.0, 1 / 230.0, row.nu, 64, 32, kNoFriction);
    const HertzEllipse& e = *s.contacts.front().zone.ellipse;
    const OnAxis found = on_axis(subsurface_of(s).volumes[1]);
    EXPECT_NEAR(found.largest / e.peak_pressure_MPa / row.shear, 1, kAxisTolerance) << row.nu;
    EXPECT_NEAR(found.depth / e.semi_axis_rolling_mm, row.depth, 0.01) << row.nu;
    EXPECT_NEAR(quantity(subsurface_of(s), "largest_shear") / found.largest, 1, kAxisTolerance)
        << "the worst place is on the axis";
  }
}

TEST(Subsurface, BelowAnEllipseAsTheClosedForms) {
  struct Row {
    double b_over_a, shear_depth, shear, mises_depth, mises;
  };
  // nu = 0.3; depths over b. Circle-like to slender, the long axis along rolling.
  for (const Row& row : {Row{0.8, 0.53422725, 0.31647824, 0.53250996, 0.61898117},
                         {0.5, 0.63055778, 0.32414398, 0.62173647, 0.61077099},
                         {0.2, 0.74049198, 0.32147694, 0.70497789, 0.58617370}}) {
    // Curvatures that give this ellipse: the ratio of axes fixes that of curvatures.
    double low = 1, high = 60;
    for (int k = 0; k < 60; ++k) {
      const double middle = std::sqrt(low * high);
      const HertzEllipse e =
          hertz_ellipse(1 / 460.0, middle / 460.0, 20000, MaterialPair{{210000, 0.3}, {210000, 0.3}, {}, {}});
      (e.semi_axis_across_mm / e.semi_axis_rolling_mm > row.b_over_a ? low : high) = middle;
    }
    const Solution s = bench(1 / 460.0, low / 460.0, 0.3, 128, 48, kNoFriction);
    const HertzEllipse& e = *s.contacts.front().zone.ellipse;
    ASSERT_NEAR(e.semi_axis_across_mm / e.semi_axis_rolling_mm, row.b_over_a, 2e-3);
    const OnAxis shear = on_axis(subsurface_of(s).volumes[1]), mises = on_axis(subsurface_of(s).volumes[0]);
    EXPECT_NEAR(shear.largest / e.peak_pressure_MPa / row.shear, 1, kAxisTolerance) << row.b_over_a;
    EXPECT_NEAR(mises.largest / e.peak_pressure_MPa / row.mises, 1, kAxisTolerance) << row.b_over_a;
    EXPECT_NEAR(shear.depth / e.semi_axis_across_mm, row.shear_depth, 0.02) << row.b_over_a;
    EXPECT_NEAR(mises.depth / e.semi_axis_across_mm, row.mises_depth, 0.02) << row.b_over_a;
  }
}

TEST(Subsurface, ConvergesWithTheCells) {
  std::vector<double> error;
  for (const int cells : {12, 24, 48, 96}) {
    const Solution s = bench(1 / 230.0, 1 / 230.0, 0.3, cells, 64, kNoFriction);
    const double p0 = s.contacts.front().zone.ellipse->peak_pressure_MPa;
    error.push_back(std::abs(on_axis(subsurface_of(s).volumes[1]).largest / p0 / 0.310020501955 - 1));
  }
  // Cells at the edge come and go with the grid, so single steps are uneven: the order is taken over three halvings.
  const double order = std::log2(error.front() / error.back()) / 3;
  EXPECT_GT(order, 1.2) << error[0] << " " << error[1] << " " << error[2] << " " << error[3];
}

TEST(Subsurface, FirstYieldOfACircleAtJohnsonsLoad) {
  // p0 = 2.8 k at first yield by von Mises, nu = 0.3 (2.793445589 exactly).
  const Solution s = bench(1 / 230.0, 1 / 230.0, 0.3, 64, 32, kNoFriction);
  const double k = 300, p0 = s.contacts.front().zone.ellipse->peak_pressure_MPa;
  const double force = quantity(subsurface_of(s), "first_yield_force");
  EXPECT_NEAR(p0 * std::cbrt(force / 20000) / k, 2.793445589, 2.793445589 * kAxisTolerance);
}

TEST(Subsurface, TractionRaisesTheStressTowardsTheSurface) {
  // Full slip at friction 0.4: the worst point leaves the depth for the surface (Johnson, section 7.1; common practice).
  const Solution still = bench(1 / 230.0, 1 / 230.0, 0.3, 48, 32, kNoFriction);
  const Solution slides =
      bench(1 / 230.0, 1 / 230.0, 0.3, 48, 32, "[friction]\ncoefficient = 0.4\n[creepage]\nlongitudinal = 0.05\n");
  EXPECT_GT(quantity(subsurface_of(slides), "largest_von_mises"),
            1.05 * quantity(subsurface_of(still), "largest_von_mises"));
  EXPECT_LT(quantity(subsurface_of(slides), "largest_von_mises_depth"),
            0.5 * quantity(subsurface_of(still), "largest_von_mises_depth"));
}

}  // namespace
}  // namespace runband
