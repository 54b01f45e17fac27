// My analysis against closed forms: what Hertz's ellipse says of it.
#include <gtest/gtest.h>

#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/solve/solution.h"

namespace runband {
namespace {

/// The demo's bench case with this analysis alone.
AnalysisResult answer(const std::vector<std::string>& settings = {}) {
  const Case c = load_case(data_folder() / "demo/bench.toml", settings);
  AnalysisResult r = solve(c, {}, {&installed_analyses(), {"my_analysis"}}).contacts.front().analyses.at("my_analysis");
  for (const Caution& caution : r.cautions) ADD_FAILURE() << caution.text;
  return r;
}

double quantity(const AnalysisResult& r, const std::string& name) {
  for (const Quantity& q : r.quantities)
    if (q.name == name) return q.value;
  ADD_FAILURE() << "it gave no " << name;
  return NAN;
}

// H. Hertz 1881: p(x, s) = p0 sqrt(1 - (x/a)^2 - (s/b)^2), so the force is 2/3 p0 times the area.
TEST(MyAnalysis, ThePeakOfAnEllipseIsOneAndAHalfTimesItsMean) {
  constexpr double kRounding = 1e-9;  // the cells' averages are exact; what is left is summation
  EXPECT_NEAR(quantity(answer(), "peak_over_mean"), 1.5, kRounding);
}

// p > level p0 inside the ellipse that is smaller by sqrt(1 - level^2). Whole cells are counted: 1 % at 64 cells.
TEST(MyAnalysis, TheAreaAboveALevelIsThatOfTheSmallerEllipse) {
  const Case c = load_case(data_folder() / "demo/bench.toml");
  const double area_mm2 = hertz_ellipse(c.bench->curvature_rolling_per_mm, c.bench->curvature_across_per_mm,
                                        c.bench->normal_force_N, c.material)
                              .area_mm2();
  for (const double level : {0.2, 0.5, 0.8}) {
    const AnalysisResult r = answer({"analyses.my_analysis.level=" + std::to_string(level)});
    EXPECT_NEAR(quantity(r, "area_above") / area_mm2, 1 - level * level, 0.01) << level;
  }
}

TEST(MyAnalysis, ALevelAboveOneIsRefused) { EXPECT_THROW(answer({"analyses.my_analysis.level=1.5"}), InputError); }

}  // namespace
}  // namespace runband
