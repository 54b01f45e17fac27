#include "viewer/panels/volume_cut.h"

#include <gtest/gtest.h>

#include <cmath>

namespace runband {
namespace {

/// A volume whose value falls with the distance from a point at depth 2 mm below (0, 1).
Volume bowl() {
  Volume v;
  v.name = "bowl";
  v.grid = {41, 31, -4, -3, 0.2, 0.2};
  for (int k = 0; k <= 20; ++k) v.depth_mm.push_back(0.25 * k);
  for (const double depth : v.depth_mm)
    for (int j = 0; j < v.grid.ns; ++j)
      for (int i = 0; i < v.grid.nx; ++i) v.values.push_back(10 - std::hypot(v.grid.x(i), v.grid.s(j) - 1, depth - 2));
  return v;
}

TEST(VolumeCut, GoesThroughTheWorstPlace) {
  const VolumeCut cut = cut_through_worst(bowl());
  EXPECT_NEAR(cut.s_mm, 1.0, 1e-9);
  EXPECT_NEAR(cut.highest, 10.0, 0.1);
  EXPECT_DOUBLE_EQ(cut.depth_mm, 5.0);
}

TEST(VolumeCut, ALineOfEqualValueIsWhereTheValueIs) {
  const VolumeCut cut = cut_through_worst(bowl());
  const auto pieces = line_of_equal_value(cut, 8.5);
  ASSERT_GT(pieces.size(), 40U);
  double length = 0;
  for (const auto& [a, b] : pieces) {
    EXPECT_NEAR(std::hypot(a.x, a.y - 2), 1.5, 0.03);
    length += std::hypot(a.x - b.x, a.y - b.y);
  }
  EXPECT_NEAR(length, 2 * M_PI * 1.5, 0.1) << "a whole circle";
}

TEST(VolumeCut, AnEmptyVolumeIsNoCut) { EXPECT_EQ(cut_through_worst(Volume{}).nx, 0); }

}  // namespace
}  // namespace runband
