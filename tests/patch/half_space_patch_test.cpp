// The half-space patch of bench cases, tables of gaps and mounted profiles.
#include "core/patch/half_space_patch.h"

#include <gtest/gtest.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <memory>
#include <sstream>
#include <string>
#include <utility>

#include "core/base/error.h"
#include "core/case/case.h"

namespace runband {
namespace {

constexpr double kLoad = 1e5;

PatchOptions half_space(int cells) { return {PatchMethod::half_space, cells}; }

double total(const Patch& patch) {
  double sum = 0;
  for (const double p : patch.pressure.values) sum += p;
  return sum * patch.grid.dx_mm * patch.grid.ds_mm;
}

bool has(const Patch& patch, const std::string& code) {
  return std::any_of(patch.cautions.begin(), patch.cautions.end(), [&](const Caution& c) { return c.code == code; });
}

// Wheel of 460 mm on rails of 300, 80 and 13 mm (values as in Hertz's formulas with E 210 GPa, nu 0.28, to 25 digits).
TEST(HalfSpacePatch, OfABenchCaseIsHertz) {
  const struct {
    double crown, a, b, peak, approach;
  } rows[] = {{300, 7.19197839626, 5.40996617639, 1227.15229049, 0.105001897208},
              {80, 8.57807547762, 2.71223020583, 2052.22500444, 0.125958137896},
              {13, 10.1197059007, 1.03170927849, 4573.15750068, 0.152252915884}};
  for (const auto& row : rows) {
    const Patch patch = half_space_patch(1 / 460.0, 1 / row.crown, kLoad, {}, half_space(64));
    EXPECT_NEAR(patch.peak_pressure_MPa / row.peak, 1, 4e-4);
    EXPECT_NEAR(patch.approach_mm / row.approach, 1, 3e-4);
    EXPECT_NEAR(patch.area_mm2 / (3.14159265358979 * row.a * row.b), 1, 6e-3);
    EXPECT_NEAR(total(patch) / kLoad, 1, 1e-12);
    EXPECT_NEAR(patch.grid.nx, 66, 2) << "64 cells across the longer side and an empty one at each end";
    EXPECT_GT(patch.convolutions, 3);
    EXPECT_LT(patch.convolutions, 45);
    EXPECT_TRUE(patch.cautions.empty());
    EXPECT_EQ(patch.pressure.grid, patch.grid);
    EXPECT_EQ(patch.pressure.unit, "MPa");
  }
}

std::string table(int nx, int ns, double dx, double ds, auto&& gap, char mark = ',') {
  std::ostringstream text;
  text.precision(12);
  text << "# a made-up gap\r\ngap_mm";
  for (int i = 0; i < nx; ++i) text << mark << ' ' << (i - (nx - 1) / 2.0) * dx;
  for (int j = 0; j < ns; ++j) {
    const double s = (j - (ns - 1) / 2.0) * ds;
    text << "\r\n" << s;
    for (int i = 0; i < nx; ++i) text << mark << gap((i - (nx - 1) / 2.0) * dx, s);
  }
  return text.str();
}
double crown(double x, double s) { return 0.5 * (x * x / 460 + s * s / 80); }

TEST(GapTable, OfAParaboloidGivesHertzFromFewPoints) {
  for (const char mark : {',', ';'}) {
    const GapGrid gap = parse_gap_grid(table(25, 19, 1.0, 0.5, crown, mark), "made.csv");
    EXPECT_EQ(gap.grid.nx, 25);
    EXPECT_EQ(gap.grid.ns, 19);
    EXPECT_DOUBLE_EQ(gap.grid.x0_mm, -12);
    EXPECT_DOUBLE_EQ(gap.grid.ds_mm, 0.5);
    for (const double x : {-11.7, 0.3, 11.9}) EXPECT_NEAR(gap.at(x, 4.4), crown(x, 4.4), 1e-10);  // parabolas are kept
    EXPECT_TRUE(std::isinf(gap.at(12.1, 0)));
    const Patch patch = half_space_patch(gap, kLoad, {}, half_space(64));
    EXPECT_NEAR(patch.peak_pressure_MPa / 2052.22500444, 1, 4e-4);
    EXPECT_NEAR(patch.approach_mm / 0.125958137896, 1, 3e-4);
    EXPECT_FALSE(has(patch, "contact_at_border"));
  }
}

TEST(GapTable, ThatIsTooSmallIsCutOffWithACaution) {
  const Patch patch =
      half_space_patch(parse_gap_grid(table(25, 7, 1.0, 0.5, crown), "made.csv"), kLoad, {}, half_space(32));
  EXPECT_TRUE(has(patch, "contact_at_border"));
  EXPECT_NEAR(total(patch) / kLoad, 1, 1e-12);
}

TEST(GapTable, HolesCarryNothing) {
  std::string text =
      table(41, 41, 0.25, 0.25, [](double x, double s) { return std::hypot(x, s) < 1.1 ? 99.0 : crown(x, s); });
  for (auto at = text.find("99"); at != std::string::npos; at = text.find("99", at)) text.replace(at, 2, "");
  const GapGrid gap = parse_gap_grid(text, "hole.csv");
  EXPECT_TRUE(std::isinf(gap.at(0.1, 0.1)));
  const Patch patch = half_space_patch(gap, 2e4, {}, half_space(48));
  const Grid& g = patch.grid;
  for (int j = 0; j < g.ns; ++j) {
    for (int i = 0; i < g.nx; ++i) {
      if (std::hypot(g.x(i), g.s(j)) < 0.8) {
        EXPECT_EQ(patch.pressure.values[static_cast<std::size_t>(j * g.nx + i)], 0);
      }
    }
  }
}

TEST(GapTable, SaysWhatIsWrongAndWhere) {
  const struct {
    const char* text;
    const char* says;
  } rows[] = {
      {"", "f.csv:1: there is no grid"},
      {"# nothing\n", "there is no grid"},
      {"gap_um,0,1,2,3\n", "f.csv:1: the grid begins with \"gap_um\""},
      {"0,1,2,3\n", "the grid begins with \"0\""},
      {"gap_mm,0,1,2\n0,1,1,1\n", "only 3 places along x"},
      {"gap_mm,0,1,2,4\n", "do not ascend in equal steps: number 2"},
      {"gap_mm,3,2,1,0\n", "do not ascend"},
      {"gap_mm,0,1,2,x\n", "\"x\" is not a place along x"},
      {"gap_mm,0,1,2,3\n0,1,1,1,1\n1,1,1,1\n", "f.csv:3: 4 cells, but the header has 5"},
      {"gap_mm,0,1,2,3\n0,1,1,1,1\n1,1,1,one,1\n", "f.csv:3: \"one\" is not a gap"},
      {"gap_mm,0,1,2,3\n0,1,1,1,1\n1,1,1,-inf,1\n", "\"-inf\" is not a gap"},
      {"gap_mm,0,1,2,3\n0,1,1,1,1\n1,1,1,1,1\n2,1,1,1,1\n", "only 3 places along s"},
      {"gap_mm,0,1,2,3\n0,1,1,1,1\n1,1,1,1,1\n2,1,1,1,1\n4,1,1,1,1\n", "f.csv:5: the places along s do not ascend"},
      {"gap_mm,0,1,2,3\n0,,,,\n1,,,,\n2,,,,\n3,,,nan,inf\n", "no cell of the grid holds a gap"},
  };
  for (const auto& row : rows) {
    try {
      parse_gap_grid(row.text, "f.csv");
      ADD_FAILURE() << "accepted: " << row.text;
    } catch (const InputError& e) {
      EXPECT_NE(e.message().find(row.says), std::string::npos) << e.message();
      EXPECT_FALSE(e.cure().empty());
    }
  }
  EXPECT_THROW(read_gap_grid("no/such/file.csv"), FileError);
}

TEST(HalfSpacePatch, RefusesWhatItCannotAnswer) {
  EXPECT_THROW(half_space_patch(1 / 460.0, 1 / 300.0, kLoad, {}, half_space(7)), InputError);
  EXPECT_THROW(half_space_patch(1 / 460.0, 1 / 300.0, -1, {}, half_space(64)), InputError);
  MaterialPair rubber;
  rubber.rail.poisson_ratio = 0.51;
  EXPECT_THROW(half_space_patch(1 / 460.0, 1 / 300.0, kLoad, rubber, half_space(64)), InputError);
}

TEST(HalfSpacePatch, SaysThatTheHardnessCapped) {
  MaterialPair material;
  material.hardness_MPa = 900;
  const Patch patch = half_space_patch(1 / 460.0, 1 / 300.0, kLoad, material, half_space(48));
  EXPECT_TRUE(has(patch, "pressure_capped"));
  EXPECT_DOUBLE_EQ(patch.peak_pressure_MPa, 900);
}

// Mounted standard profiles: where the contact is nearly Hertzian the two methods agree; where curvatures jump within
// the patch they must not, but the load and the conditions hold.
class OnTheTrack : public testing::TestWithParam<std::array<double, 2>> {};
TEST_P(OnTheTrack, EveryLoadedZoneIsSolved) {
  const auto wheel = load_profile("standard:S1002", ProfileKind::wheel);
  const auto rail = load_profile("standard:60E1", ProfileKind::rail);
  const Locator locator(
      std::make_shared<Pairing>(std::array{wheel, wheel}, std::array{rail, rail}, TrackGeometry{}, WheelsetGeometry{}));
  const auto [lateral, yaw] = GetParam();
  const Located located = locator.loaded(lateral, yaw, LateralReference::axle, {}, {});
  int solved = 0;
  for (const ContactZone& zone : located.zones) {
    if (!zone.carries_load) continue;
    ++solved;
    const Patch patch = half_space_patch(locator, zone, located.pose, zone.normal_force_N, {}, half_space(64));
    EXPECT_NEAR(total(patch) / zone.normal_force_N, 1, 1e-12);
    RecordProperty(std::string(side_name(zone.side)) + "_area_over_ellipse",
                   std::to_string(patch.area_mm2 / zone.ellipse->area_mm2()));
    RecordProperty(std::string(side_name(zone.side)) + "_peak_over_ellipse",
                   std::to_string(patch.peak_pressure_MPa / zone.ellipse->peak_pressure_MPa));
    EXPECT_LT(patch.convolutions, 60);
    EXPECT_NEAR(patch.area_mm2 / zone.ellipse->area_mm2(), 1, 0.6);
    EXPECT_NEAR(patch.peak_pressure_MPa / zone.ellipse->peak_pressure_MPa, 1, 0.4);
    if (zone.curvature.misfit < 0.009) {  // all but an ellipse

      EXPECT_NEAR(patch.peak_pressure_MPa / zone.ellipse->peak_pressure_MPa, 1, 0.04);
      EXPECT_NEAR(patch.area_mm2 / zone.ellipse->area_mm2(), 1, 0.09);
    }
  }
  EXPECT_GE(solved, 2);
}
INSTANTIATE_TEST_SUITE_P(Poses, OnTheTrack,
                         testing::Values(std::array{0.0, 0.0}, std::array{2.0, 0.0}, std::array{4.0, 0.005},
                                         std::array{6.2, 0.0}, std::array{-3.0, -0.003}));

// New profiles at 1:40 in the middle of the track touch along a broad, flat band. Fitted to measured points the band
// falls apart into two zones that press on each other; together they are nearly the patch of the definitions.
TEST(ZonesTogether, OverlappingZonesAreOnePatch) {
  const auto located_on = [](const std::string& name) {
    const Case c = load_case(std::string(RUNBAND_DATA) + "/demo/" + name);
    const auto profile = [&](const ProfileRequest& r, ProfileKind kind) {
      return load_profile(r.profile, kind, r.options, c.folder);
    };
    const std::array wheels{profile(c.wheels[0], ProfileKind::wheel), profile(c.wheels[1], ProfileKind::wheel)};
    const std::array rails{profile(c.rails[0], ProfileKind::rail), profile(c.rails[1], ProfileKind::rail)};
    Locator locator(std::make_shared<Pairing>(wheels, rails, c.track, c.wheelset));
    Located located = locator.loaded(0.0, 0.0, LateralReference::axle, {}, c.material);
    return std::pair{std::move(locator), std::move(located)};
  };
  const auto [measured, zones] = located_on("measured_new.toml");
  const auto groups = zones_solved_together(zones.zones);
  std::size_t covered = 0;
  for (const auto& group : groups) {
    covered += group.size();
    for (const std::size_t k : group) EXPECT_TRUE(zones.zones[k].carries_load);
    const Patch together = half_space_patch(measured, zones.zones, group, zones.pose, {}, half_space(64));
    double force = 0;
    for (const std::size_t k : group) force += zones.zones[k].normal_force_N;
    EXPECT_NEAR(total(together) / force, 1, 1e-3);  // the normals differ a little
    if (group.size() < 2) continue;
    EXPECT_GE(zones.zones[group[0]].normal_force_N, zones.zones[group[1]].normal_force_N);
    double apart = 0;  // alone, each zone spreads over the other's ground: the sum counts it twice
    for (const std::size_t k : group) {
      const ContactZone& zone = zones.zones[k];
      apart += half_space_patch(measured, zone, zones.pose, zone.normal_force_N, {}, half_space(64)).area_mm2;
    }
    EXPECT_LT(together.area_mm2, 0.9 * apart);
    EXPECT_NEAR(together.area_mm2 / 190.0, 1, 0.1);  // the definitions give 190 mm2 under the same load
  }
  EXPECT_EQ(covered, static_cast<std::size_t>(std::count_if(zones.zones.begin(), zones.zones.end(),
                                                            [](const ContactZone& z) { return z.carries_load; })));
  EXPECT_LT(groups.size(), covered) << "the demo should hold an overlap";
  EXPECT_THROW(half_space_patch(measured, zones.zones, {}, zones.pose, {}, half_space(64)), InputError);
}

}  // namespace
}  // namespace runband
