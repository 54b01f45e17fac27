// From a case to its answer, and what the files say of it.
#include <gtest/gtest.h>

#include <cmath>
#include <filesystem>
#include <sstream>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/solve/solution.h"

namespace runband {
namespace {

Case demo(const std::string& name, const std::vector<std::string>& settings = {}) {
  return load_case(std::string(RUNBAND_DATA) + "/demo/" + name, settings);
}

TEST(Solve, EveryDemoCaseIsAnsweredAndCarriesItsLoad) {
  int pairings = 0;
  for (const auto& entry : std::filesystem::directory_iterator(std::string(RUNBAND_DATA) + "/demo")) {
    if (entry.path().extension() != ".toml") continue;
    for (const char* method : {"hertz", "half_space"}) {
      const Solution s = solve(load_case(entry.path(), {std::string("patch.method=") + method}));
      double carried[2] = {0, 0};
      for (const Contact& contact : s.contacts) {
        if (contact.on_bench || !contact.zone.carries_load) continue;
        carried[contact.zone.side == Side::left ? 0 : 1] +=
            contact.zone.normal_force_N * std::cos(contact.zone.contact_angle_rad);
      }
      if (s.asked.bench) continue;
      for (const int side : {0, 1})
        EXPECT_NEAR(carried[side] / s.asked.load.vertical_N[static_cast<std::size_t>(side)], 1.0, 2e-3)
            << entry.path() << side;
      for (const Contact& contact : s.contacts) {
        if (!contact.patch) continue;
        const Patch& p = *contact.patch;
        double sum = 0;
        for (const double pressure : p.pressure.values) sum += pressure * p.grid.dx_mm * p.grid.ds_mm;
        EXPECT_GT(sum, 0.99 * contact.zone.normal_force_N) << entry.path();
        EXPECT_GT(p.peak_pressure_MPa, 100) << entry.path();
      }
    }
    pairings += demo(entry.path().filename()).bench ? 0 : 1;
  }
  EXPECT_GE(pairings, 6);
}

TEST(Solve, TheSameCaseGivesTheSameAnswer) {
  Solution a = solve(demo("curve12.toml")), b = solve(demo("curve12.toml"));
  a.solve_ms = b.solve_ms = 0;
  for (Solution* s : {&a, &b})
    for (Contact& c : s->contacts) {
      if (c.patch) c.patch->solve_ms = 0;
      for (auto& [id, result] : c.analyses)
        for (Quantity& q : result.quantities)
          if (q.unit == "ms") q.value = 0;  // time is not part of the answer
    }
  EXPECT_EQ(solution_json(a), solution_json(b));
}

TEST(Solve, ABenchCaseIsHertzsEllipse) {
  const Solution s =
      solve(parse_case("[bench]\ncurvature_rolling_per_mm = 0.002173913043478261\ncurvature_across_per_mm = "
                       "0.0033333333333333335\nnormal_force_N = 80000\n",
                       "bench", "."));
  ASSERT_EQ(s.contacts.size(), 1U);
  // Steel wheel 460 mm on crown 300 mm, 80 kN, computed with 25 digits (mpmath), nu 0.28.
  EXPECT_NEAR(s.contacts[0].patch->peak_pressure_MPa, 1139.18727373, 1e-6);
  EXPECT_NEAR(s.contacts[0].zone.ellipse->semi_axis_rolling_mm, 6.67644132313, 1e-9);
  EXPECT_NEAR(s.contacts[0].zone.ellipse->semi_axis_across_mm, 5.02216771891, 1e-9);
}

TEST(Solve, AnAnalysisThatIsNotThereIsRefused) {
  EXPECT_THROW(solve(demo("bench.toml", {"weer.law=energy"})), InputError);
}

TEST(Solve, StopsWhenAsked) {
  std::stop_source stop;
  stop.request_stop();
  EXPECT_THROW(solve(demo("curve12.toml"), Progress{nullptr, stop.get_token()}), Cancelled);
  EXPECT_THROW(traverse(demo("curve12.toml"), -3, 3, 0.1, Progress{nullptr, stop.get_token()}), Cancelled);
}

TEST(Solve, ReportsProgressUpward) {
  double last = -1;
  bool upward = true;
  solve(demo("curve12.toml"), Progress{[&](double f, std::string_view) {
                                         upward = upward && f >= last && f <= 1;
                                         last = f;
                                       },
                                       {}});
  EXPECT_TRUE(upward);
  EXPECT_EQ(last, 1.0);
}

TEST(Traverse, CurvesHaveOneValuePerPositionAndMistakesAreNamed) {
  const Case c = demo("new_1_40.toml");
  const Traverse t = traverse(c, -3, 3, 0.5);
  EXPECT_EQ(t.lateral_mm.size(), 13U);
  EXPECT_EQ(t.left.contact_angle_deg.size(), 13U);
  EXPECT_NEAR(t.rolling_radius_difference_mm[6], 0.0, 1e-9);  // centred
  for (std::size_t i = 0; i < 13; ++i)
    EXPECT_NEAR(t.rolling_radius_difference_mm[i], -t.rolling_radius_difference_mm[12 - i], 1e-7);
  EXPECT_EQ(t.jumps.size(), 2U);
  EXPECT_THROW(traverse(c, 3, -3, 0.5), InputError);
  EXPECT_THROW(traverse(c, -3, 3, 0), InputError);
  EXPECT_THROW(traverse(c, -3, 3, 1e-9), InputError);
  EXPECT_THROW(traverse(demo("bench.toml"), -3, 3, 1), InputError);
}

TEST(Writers, EveryRowOfACsvHasAllItsColumns) {
  const auto counts = [](const std::string& csv) {
    std::istringstream lines(csv);
    std::vector<long> commas;
    for (std::string line; std::getline(lines, line);) commas.push_back(std::count(line.begin(), line.end(), ','));
    return commas;
  };
  for (const std::string& csv : {solution_csv(solve(demo("curve12.toml"))), solution_csv(solve(demo("bench.toml"))),
                                 traverse_csv(traverse(demo("new_1_40.toml"), -1, 1, 0.5))}) {
    const auto commas = counts(csv);
    ASSERT_GT(commas.size(), 1U);
    for (const long c : commas) EXPECT_EQ(c, commas.front()) << csv;
  }
}

TEST(Writers, AFolderHoldsEverything) {
  const std::filesystem::path folder = std::filesystem::path(testing::TempDir()) / "runband_solve_out";
  std::filesystem::remove_all(folder);
  write_solution(solve(demo("curve12.toml")), folder);
  for (const char* name :
       {"solution.json", "contacts.csv", "case.toml", "rail_left.vtp", "wheel_right.vtp", "patch_right_tread.vti"})
    EXPECT_TRUE(std::filesystem::exists(folder / name)) << name;
  const std::string json = read_file(folder / "solution.json");
  for (const char* key : {"\"contacts\"", "\"peak_pressure_MPa\"", "\"roll_mrad\"", "\"rolling_radius_mm\"",
                          "\"cautions\"", "\"misfit\""})
    EXPECT_NE(json.find(key), std::string::npos) << key;
  for (const auto& entry : std::filesystem::directory_iterator(folder))
    EXPECT_EQ(entry.path().filename().string().find(".part"), std::string::npos);
}

}  // namespace
}  // namespace runband
