// Every file in tests/bad_profiles is refused with the right code, and its message says where, what and what to do.
#include <gtest/gtest.h>

#include <filesystem>
#include <map>

#include "core/base/error.h"
#include "core/profile/profile.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

struct BadProfile {
  std::string file;
  ProfileKind kind;
  ErrorCode code;
  std::string says;  ///< part of what()
};

constexpr ProfileKind kWheel = ProfileKind::wheel, kRail = ProfileKind::rail;
using enum ErrorCode;

const std::vector<BadProfile> kBadProfiles{
    // Rows that cannot be read.
    {"empty.csv", kWheel, profile_too_few_points, "no points"},
    {"only_comments.csv", kWheel, profile_too_few_points, "no points"},
    {"header_only.csv", kWheel, profile_too_few_points, "no points"},
    {"too_short.csv", kWheel, profile_too_few_points, "only 15 points"},
    {"one_column.csv", kWheel, profile_bad_row, ":2: '-70.0000' has 1 column"},
    {"three_columns.csv", kWheel, profile_bad_row, ":2: '-70.0000,-9.5193,0.0' has 3 columns"},
    {"ragged_row.csv", kWheel, profile_bad_row, ":55: '-12.5' has 1 column"},
    {"word_in_row.csv", kWheel, profile_bad_row, ":55: 'error' is not a number"},
    {"decimal_comma.csv", kWheel, profile_bad_row, "with decimal commas use ;"},
    {"header_unknown.csv", kWheel, profile_bad_row, ":1: no number in this row"},
    {"header_twice_y.csv", kWheel, profile_bad_row, ":1: two columns are named 'y'"},
    {"huge_number.csv", kWheel, profile_bad_row, ":55: '1e300'"},
    {"not_a_number.csv", kWheel, profile_not_a_number, ":55: y is 'nan'"},
    {"infinite.csv", kWheel, profile_not_a_number, ":75: z is '-inf'"},
    {"utf16.csv", kWheel, file_wrong_kind, "UTF-8"},
    {"binary.csv", kWheel, file_wrong_kind, "not a text file"},
    // Units and axes.
    {"unit_in_metres.csv", kWheel, profile_wrong_unit, "looks like m:"},
    {"unit_in_inches.csv", kWheel, profile_wrong_unit, "looks like in:"},
    {"unit_in_micrometres.csv", kWheel, profile_wrong_unit, "looks like um:"},
    {"unit_stated_wrong.csv", kWheel, profile_wrong_unit, "in the stated unit, mm, the profile is 0.13 mm wide"},
    {"unit_unknown.csv", kWheel, profile_wrong_unit, ":1: the unit is 'furlong'"},
    {"unit_of_no_kind.csv", kWheel, profile_wrong_unit, "1040 mm wide"},
    {"two_units.csv", kWheel, profile_wrong_unit, ":2: two units are stated, in and mm"},
    {"upside_down_wheel.csv", kWheel, profile_upside_down, "the flange points upward"},
    {"upside_down_rail.csv", kRail, profile_upside_down, "z points down in it"},
    {"mirrored_wheel.csv", kWheel, profile_mirrored, "correct y_axis"},
    {"mirrored_rail.csv", kRail, profile_mirrored, "y_axis: gauge"},
    {"axis_unknown.csv", kWheel, bad_option, ":1: y_axis is 'outside'"},
    {"noise_negative.csv", kWheel, bad_option, ":1: noise_mm is '-0.02'"},
    {"noise_huge.csv", kWheel, out_of_range, "noise_mm is 5 mm"},
    // Shapes that are no outline.
    {"spike.csv", kWheel, profile_spike, ":95: the point at y = -20.947 mm"},
    {"spike_tall.csv", kRail, profile_spike, ":45:"},
    {"gap.csv", kWheel, profile_gap, ":85: there is a gap of 12.8 mm"},
    {"rows_out_of_order.csv", kWheel, profile_gap, "out of order"},
    {"two_scans.csv", kWheel, profile_gap, "between y = 60 and -70 mm"},
    {"loop.csv", kWheel, profile_crosses_itself, ":133: the outline crosses itself"},
    {"swapped_rows.csv", kWheel, profile_crosses_itself, ":74:"},
    {"repeated.csv", kWheel, profile_repeated_points, ":6: 48 of 240 points"},
    {"all_the_same.csv", kWheel, profile_wrong_unit, "0 mm wide"},
    // Parts that are missing or elsewhere.
    {"missing_tread.csv", kWheel, profile_not_covering, "the tread is not covered"},
    {"missing_flange.csv", kWheel, profile_not_covering, "add the flange if it is missing"},
    {"missing_gauge_face.csv", kRail, profile_not_covering, "the gauge face is not covered"},
    {"half_head.csv", kRail, profile_not_covering, "the rail head is not covered"},
    {"origin_at_flange_back.csv", kWheel, profile_not_covering, "y = 15.28 mm"},
    {"height_from_axle.csv", kWheel, profile_not_covering, "z = -488 mm"},
    {"rail_height_from_foot.csv", kRail, profile_not_covering, "z = 172 mm"},
    // Definitions.
    {"syntax.toml", kRail, bad_syntax, ":17: not valid TOML"},
    {"unclosed_text.toml", kRail, bad_syntax, ":2: not valid TOML"},
    {"unknown_key.toml", kRail, unknown_key, ":25: [[segment]] has no key 'to_slop'.\n  did you mean 'to_slope'?"},
    {"unknown_top_key.toml", kRail, unknown_key, ":5: a profile definition has no key 'symetric'"},
    {"unknown_kind.toml", kRail, unknown_name, ":28: 'kind' is 'spiral'"},
    {"no_kind.toml", kRail, missing_key, "lacks the key 'kind'"},
    {"wrong_kind.toml", kRail, conflicting_keys, ":1: this is a wheel profile"},
    {"wrong_type.toml", kRail, wrong_type, ":17: 'radius' must be a number"},
    {"wrong_type_list.toml", kWheel, wrong_type, ":9: 'y' must be two numbers"},
    {"coefficients_empty.toml", kWheel, wrong_type, ":10: 'coefficients'"},
    {"no_segments.toml", kRail, missing_key, "no [[segment]]"},
    {"segment_not_a_table.toml", kRail, wrong_type, ":2: 'segment' must be a list of tables"},
    {"radius_negative.toml", kRail, out_of_range, ":17: radius is -80 mm"},
    {"arc_off_circle.toml", kWheel, out_of_range, ":53: y = -71 mm lies off the circle"},
    {"arc_never_there.toml", kRail, out_of_range, ":19: the arc of radius 80 mm does not reach 'to_y'"},
    {"arc_two_ends.toml", kRail, conflicting_keys, "exactly one of 'to_y', 'to_z' and 'to_slope'"},
    {"arc_mixed.toml", kWheel, conflicting_keys, "not 'turn'"},
    {"line_never_there.toml", kRail, conflicting_keys, ":27: the line never reaches 'to_z'"},
    {"first_without_from.toml", kRail, missing_key, ":8: the first segment has no 'from'"},
    {"not_continuous.toml", kWheel, profile_not_continuous, ":42: the segments do not meet: a gap of 0.2 mm"},
    {"kink.toml", kWheel, profile_not_continuous, ":9: the tangent turns sharply by 5.6"},
    {"order.toml", kWheel, profile_not_continuous, "a gap of 7.859 mm"},
    {"not_finite.toml", kRail, profile_not_a_number, ":17: 'radius' is not a finite number"},
    {"symmetric_off_axis.toml", kRail, conflicting_keys, "begin at y = 0"},
    {"no_length.toml", kRail, out_of_range, ":8: the segment has no length"},
    {"side_missing.toml", kRail, profile_not_covering, "z = -2.303 mm"},
};

const fs::path kFolder = fs::path(RUNBAND_TESTS) / "bad_profiles";

TEST(BadProfiles, AreEachRefusedWithPlaceFaultAndCure) {
  for (const BadProfile& bad : kBadProfiles) {
    try {
      load_profile(bad.file, bad.kind, {}, kFolder);
      ADD_FAILURE() << bad.file << " was accepted";
    } catch (const Error& error) {
      EXPECT_EQ(error.code(), bad.code) << error.what();
      EXPECT_NE(std::string(error.what()).find(bad.says), std::string::npos) << bad.file << " says:\n" << error.what();
      EXPECT_TRUE(error.message().starts_with((kFolder / bad.file).string())) << error.what();
      EXPECT_FALSE(error.cure().empty()) << error.what();
      EXPECT_EQ(error.exit_status(), static_cast<int>(bad.code) < 200 ? 2 : 3);
    }
  }
}

TEST(BadProfiles, AreAllInTheTable) {
  std::map<std::string, int> known;
  for (const BadProfile& bad : kBadProfiles) ++known[bad.file];
  for (const auto& entry : fs::directory_iterator(kFolder))
    if (entry.path().extension() != ".md") {
      EXPECT_EQ(known[entry.path().filename().string()], 1) << entry.path();
    }
}

TEST(BadProfiles, AMissingFileIsAnErrorOfTheFile) {
  try {
    load_profile("nowhere.csv", kWheel, {}, kFolder);
    FAIL();
  } catch (const FileError& error) {
    EXPECT_EQ(error.code(), file_unreadable);
  }
}

}  // namespace
}  // namespace runband
