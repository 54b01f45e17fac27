// The ellipse on a grid: its sum is the force, its cells are averages, its border is empty.
#include <gtest/gtest.h>

#include <boost/math/quadrature/gauss.hpp>
#include <cmath>
#include <numeric>

#include "core/base/error.h"
#include "core/patch/patch.h"

namespace runband {
namespace {

const MaterialPair kSteel;

double force_of(const Patch& patch) {
  const double sum = std::accumulate(patch.pressure.values.begin(), patch.pressure.values.end(), 0.0);
  return sum * patch.grid.dx_mm * patch.grid.ds_mm;
}

// The closed form telescopes; measured 2e-15 (gcc 12, x86-64).
TEST(HertzPatch, CellsTimesAreaSumToTheForce) {
  for (const double across : {1e-5, 1.0 / 460.0, 1.0 / 80.0, 1.0 / 13.0, 10.0}) {
    const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, across, 1e5, kSteel);
    for (const int cells : {8, 9, 64, 101, 512}) {
      const Patch patch = hertz_patch(ellipse, {.method = PatchMethod::hertz, .cells = cells});
      EXPECT_NEAR(force_of(patch) / 1e5, 1.0, 1e-13) << across << " " << cells;
    }
  }
}

TEST(HertzPatch, TheGridFitsTheEllipseWithOneEmptyCellAround) {
  const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, 1.0 / 80.0, 1e5, kSteel);
  const Patch patch = hertz_patch(ellipse, {.method = PatchMethod::hertz, .cells = 50});
  const Grid& grid = patch.grid;
  EXPECT_EQ(grid.nx, 52);
  EXPECT_EQ(grid.ns, 18);  // 5.42 mm of 17.16 mm, at 50 cells
  EXPECT_DOUBLE_EQ((grid.nx - 2) * grid.dx_mm, 2.0 * ellipse.semi_axis_rolling_mm);
  EXPECT_DOUBLE_EQ((grid.ns - 2) * grid.ds_mm, 2.0 * ellipse.semi_axis_across_mm);
  EXPECT_DOUBLE_EQ(grid.x(0), -grid.x(grid.nx - 1));
  EXPECT_DOUBLE_EQ(grid.s(0), -grid.s(grid.ns - 1));
  EXPECT_LT(std::abs(grid.dx_mm / grid.ds_mm - 1.0), 0.05);
  ASSERT_EQ(patch.pressure.values.size(), static_cast<std::size_t>(grid.cells()));
  EXPECT_EQ(patch.pressure.grid, grid);
  const auto value = [&](int i, int j) { return patch.pressure.values[static_cast<std::size_t>(j * grid.nx + i)]; };
  for (int i = 0; i < grid.nx; ++i) {
    EXPECT_EQ(value(i, 0), 0.0);
    EXPECT_EQ(value(i, grid.ns - 1), 0.0);
  }
  for (int j = 0; j < grid.ns; ++j) {
    EXPECT_EQ(value(0, j), 0.0);
    EXPECT_EQ(value(grid.nx - 1, j), 0.0);
  }
  for (int j = 0; j < grid.ns; ++j)
    for (int i = 0; i < grid.nx; ++i) EXPECT_NEAR(value(i, j), value(grid.nx - 1 - i, grid.ns - 1 - j), 1e-9);
}

TEST(HertzPatch, ACellIsTheAverageOfThePressureOverIt) {
  const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, 1.0 / 80.0, 1e5, kSteel);
  const Patch patch = hertz_patch(ellipse, {.method = PatchMethod::hertz, .cells = 20});
  const Grid& grid = patch.grid;
  using Gauss = boost::math::quadrature::gauss<double, 30>;
  for (const auto& [i, j] : {std::pair{11, grid.ns / 2}, std::pair{6, 3}, std::pair{15, grid.ns - 4}}) {
    const double x = grid.x(i), s = grid.s(j), hx = 0.5 * grid.dx_mm, hs = 0.5 * grid.ds_mm;
    const double integral = Gauss::integrate(
        [&](double u) {
          return Gauss::integrate([&](double v) { return ellipse.pressure_MPa(u, v); }, s - hs, s + hs);
        },
        x - hx, x + hx);
    EXPECT_NEAR(patch.pressure.values[static_cast<std::size_t>(j * grid.nx + i)] / (integral / (4.0 * hx * hs)), 1.0,
                1e-9)
        << i << " " << j;
  }
  // A cell that the rim cuts, against 2000 x 2000 midpoints (their error is about 1e-4 of the cell).
  const double corner = patch.pressure.values[static_cast<std::size_t>(4 * grid.nx + 1)];
  double sum = 0.0;
  for (int v = 0; v < 2000; ++v)
    for (int u = 0; u < 2000; ++u)
      sum += ellipse.pressure_MPa(grid.x(1) + grid.dx_mm * ((u + 0.5) / 2000.0 - 0.5),
                                  grid.s(4) + grid.ds_mm * ((v + 0.5) / 2000.0 - 0.5));
  EXPECT_NEAR(corner / (sum / 4e6), 1.0, 1e-4);
}

TEST(HertzPatch, CarriesTheClosedFormsNumbers) {
  const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, 1.0 / 300.0, 1e5, kSteel);
  const Patch patch = hertz_patch(ellipse, {});
  EXPECT_EQ(patch.area_mm2, ellipse.area_mm2());
  EXPECT_EQ(patch.peak_pressure_MPa, ellipse.peak_pressure_MPa);
  EXPECT_EQ(patch.approach_mm, ellipse.approach_mm);
  EXPECT_EQ(patch.iterations, 0);
  EXPECT_EQ(patch.pressure.unit, "MPa");
  for (const double p : patch.pressure.values) EXPECT_LE(p, ellipse.peak_pressure_MPa);
}

TEST(HertzPatch, RefusesGridsOutOfRangeAndEmptyEllipses) {
  const HertzEllipse ellipse = hertz_ellipse(1.0 / 460.0, 1.0 / 300.0, 1e5, kSteel);
  EXPECT_THROW(hertz_patch(ellipse, {.method = PatchMethod::hertz, .cells = 7}), InputError);
  EXPECT_THROW(hertz_patch(ellipse, {.method = PatchMethod::hertz, .cells = 513}), InputError);
  EXPECT_THROW(hertz_patch(HertzEllipse{}, {}), InputError);
}

}  // namespace
}  // namespace runband
