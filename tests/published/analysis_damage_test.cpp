// Wear, fatigue and heat against published laws, and identities between field and integral.
#include <gtest/gtest.h>
#include <unistd.h>

#include <cmath>
#include <filesystem>

#include "core/solve/solution.h"

namespace runband {
namespace {

double quantity(const AnalysisResult& r, const std::string& name) {
  for (const Quantity& q : r.quantities)
    if (q.name == name) return q.value;
  ADD_FAILURE() << r.id << " gave no " << name << (r.cautions.empty() ? "" : ": " + r.cautions.front().text);
  return NAN;
}

/// Gives the same frictional power and wear number to whatever needs them.
class Given final : public Analysis {
 public:
  Given(std::function<double(double x)> power, double wear_number)
      : power_(std::move(power)), wear_number_(wear_number) {}
  Description describe() const override {
    Description d;
    d.id = "given";
    d.title = "Given";
    d.gives = {"frictional_power", "wear_number", "force_rolling", "force_across"};
    return d;
  }
  AnalysisResult run(const PatchContext& c, const Parameters&, const Progress&) const override {
    AnalysisResult r;
    Field f{"frictional_power", "", "W/mm2", Field::Kind::scalar, 1, c.patch.grid, {}, {}, ""};
    for (int j = 0; j < c.patch.grid.ns; ++j)
      for (int i = 0; i < c.patch.grid.nx; ++i) f.values.push_back(power_(c.patch.grid.x(i)));
    r.fields.push_back(f);
    r.quantities = {{"wear_number", "", "N", wear_number_, ""},
                    {"force_rolling", "", "N", 0.2 * c.zone.normal_force_N, ""},
                    {"force_across", "", "N", 0.0, ""}};
    return r;
  }

 private:
  std::function<double(double)> power_;
  double wear_number_;
};

/// One plugin of the build beside given inputs, on a patch of `cells` cells along x from -1 to 1 mm.
AnalysisResult alone(const std::string& id, std::function<double(double)> power, double wear_number, int cells,
                     const std::map<std::string, ParameterValue>& parameters = {}) {
  const std::filesystem::path folder =
      std::filesystem::path(testing::TempDir()) / ("runband_alone_" + id + std::to_string(::getpid()));
  std::filesystem::create_directories(folder);
  std::filesystem::permissions(folder, std::filesystem::perms::owner_all);
  for (const auto& from : plugin_folders()) {
    const auto file = from / ("runband_" + id + ".so");
    if (std::filesystem::exists(file) && !std::filesystem::exists(folder / file.filename()))
      std::filesystem::create_symlink(file, folder / file.filename());
  }
  AnalysisRegistry registry;
  registry.load_folder(folder);
  registry.add(std::make_unique<Given>(std::move(power), wear_number));
  ContactZone zone;
  zone.normal_force_N = 80000;
  zone.rolling_radius_mm = 460;
  Patch patch;
  patch.grid = {cells, 1, -1 + 1.0 / cells, 0, 2.0 / cells, 1};
  patch.peak_pressure_MPa = 1200;
  const MaterialPair material;
  const WheelsetPose pose;
  Motion motion;
  motion.speed_m_s = 25;
  const auto results = registry.run(PatchContext{true, zone, patch, material, 0.3, motion, {}, pose, nullptr, {}}, {},
                                    {{id, parameters}}, {});
  std::filesystem::remove_all(folder);
  return results.at(id);
}

// T_max = C (q0 / beta) sqrt(a / v): 1.59576912 uniform, 1.23461983 semi-elliptic, 1.10558128 parabolic (computed from the
// moving half-space's solution; Jaeger, Blok; Ertz and Knothe, Wear 253 (2002) 498 use the semi-elliptic one).
TEST(PublishedHeat, ConstantsOfTheFastMovingBand) {
  const double unit = 1e6 / std::sqrt(50.0 * 7850 * 480) * std::sqrt(1e-3 / 25);
  const std::map<std::string, ParameterValue> all{{"rail_share", 1.0}};
  EXPECT_NEAR(quantity(alone(
                           "heat", [](double) { return 1.0; }, 0, 400, all),
                       "largest_flash_temperature") /
                  unit,
              1.59576912, 1e-7);
  EXPECT_NEAR(quantity(alone(
                           "heat", [](double x) { return std::sqrt(1 - x * x); }, 0, 2000, all),
                       "largest_flash_temperature") /
                  unit,
              1.23461983, 2e-4);
  EXPECT_NEAR(quantity(alone(
                           "heat", [](double x) { return 1 - x * x; }, 0, 2000, all),
                       "largest_flash_temperature") /
                  unit,
              1.10558128, 2e-4);
}

// Burstow 2004 (memory): 0 below 15 N, 10 at 65 N, 0 at 175 N, negative beyond.
TEST(PublishedFatigue, DamageFunctionOnWearNumber) {
  const auto damage = [](double wear_number) {
    return quantity(alone(
                        "fatigue", [](double) { return 0.0; }, wear_number, 4),
                    "damage_per_pass");
  };
  EXPECT_EQ(damage(10), 0);
  EXPECT_NEAR(damage(40), 5, 1e-12);
  EXPECT_NEAR(damage(65), 10, 1e-12);
  EXPECT_NEAR(damage(175), 0, 1e-12);
  EXPECT_LT(damage(300), 0);
}

// Johnson 1985, section 9.2: elastic shakedown of line contact at p0 = 4 k without friction, p0 = k/mu from 0.367 on.
TEST(PublishedFatigue, ShakedownLimitsOfLineContact) {
  const auto r = alone(
      "fatigue", [](double) { return 0.0; }, 0, 4);
  const Curve& limit = r.curves.front();
  EXPECT_NEAR(limit.y[0], 4.0, 1e-12);
  EXPECT_NEAR(limit.y[20], 3.202364604, 1e-9);
  EXPECT_NEAR(limit.y[30], 2.899574689, 1e-9);
  EXPECT_NEAR(limit.y[50], 2.0, 1e-12);
  // FI = mu - k/p0 with friction used 0.2, k 300, p0 1200 (Ekberg, Kabo, Andersson 2002, memory).
  EXPECT_NEAR(quantity(r, "surface_fatigue_index"), 0.2 - 0.25, 1e-12);
  EXPECT_NEAR(quantity(r, "load_factor"), 4.0, 1e-12);
}

Solution slipping(const std::string& method) {
  Case c = parse_case(
      "[bench]\ncurvature_rolling_per_mm = 0.0022\ncurvature_across_per_mm = 0.0033\nnormal_force_N = "
      "80000\n[creepage]\nlongitudinal = 0.004\nlateral = 0.001\n",
      "test", ".");
  c.analyses["slip_bands"]["method"] = method;
  return solve(c);
}

TEST(WearIdentities, PowerIsWearNumberTimesSpeedAndTheSumOfItsField) {
  const Solution s = slipping("half_space");
  const auto& r = s.contacts[0].analyses.at("wear");
  double sum = 0;
  for (const double q : r.fields.front().values)
    sum += q * s.contacts[0].patch->grid.dx_mm * s.contacts[0].patch->grid.ds_mm;
  EXPECT_NEAR(sum / quantity(r, "power"), 1, 1e-12);
  EXPECT_NEAR(quantity(r, "power"), quantity(r, "wear_number") * 20, 1e-9 * quantity(r, "power"));
  // What the creepages put in, slip takes out: elastic energy neither grows nor shrinks in steady rolling.
  EXPECT_NEAR(quantity(r, "wear_number") / quantity(r, "wear_number_from_forces"), 1, 0.02);
  EXPECT_FALSE(r.cautions.empty());
}

// Archard 1953: worn volume = k N s / H; at full slip with one coefficient it is k N xi / H for each mm rolled.
TEST(PublishedWear, ArchardAtFullSlip) {
  Case c = parse_case(
      "[bench]\ncurvature_rolling_per_mm = 0.0022\ncurvature_across_per_mm = 0.0033\nnormal_force_N = "
      "80000\n[creepage]\nlongitudinal = 0.05\n[state]\nspeed_m_s = 20\n",
      "test", ".");
  c.analyses["wear"]["archard_severe"] = 1e-3;
  c.analyses["wear"]["archard_mild"] = 1e-3;
  c.analyses["slip_bands"]["method"] = "half_space";
  const Solution s = solve(c);
  EXPECT_NEAR(quantity(s.contacts[0].analyses.at("wear"), "worn_section_per_pass"), 1e-3 * 80000 * 0.05 / 3000,
              0.03 * 1e-3 * 80000 * 0.05 / 3000);
}

TEST(Wear, SaysWhatIsMissingWhereALawGivesForcesAlone) {
  const auto r = slipping("polach").contacts[0].analyses.at("wear");
  ASSERT_EQ(r.cautions.size(), 1U);
  EXPECT_EQ(r.cautions[0].code, "input_missing");
}

}  // namespace
}  // namespace runband
