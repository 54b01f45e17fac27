// The case file: every key read, every mistake answered with line and cure, and a written case reads back the same.
#include "core/case/case.h"

#include <gtest/gtest.h>

#include <cmath>

#include "core/base/error.h"
#include "core/case/carried.h"

namespace runband {
namespace {

constexpr const char* kSmall = R"(title = "Skerry Line, curve 12"
[track]
gauge_mm = 1437.0
inclination = "1:20"
curve_radius_m = 410
[wheel]
profile = "standard:S1002"
[wheel.right]
profile = "worn.csv"
noise_mm = 0.02
[rail]
profile = "standard:60E1"
)";

Case parse(const std::string& text, const std::vector<std::string>& settings = {}) {
  return parse_case(text, "a.toml", "/somewhere", settings);
}

struct Refusal {
  ErrorCode code;
  std::string text;
};
Refusal refusal_of(const std::string& text, const std::vector<std::string>& settings = {}) {
  try {
    parse(text, settings);
  } catch (const Error& error) {
    return {error.code(), error.what()};
  }
  return {ErrorCode::cancelled, "accepted"};
}

TEST(CaseFile, ReadsWhatIsThereAndDefaultsTheRest) {
  const Case c = parse(kSmall);
  EXPECT_EQ(c.title, "Skerry Line, curve 12");
  EXPECT_EQ(c.track.gauge_mm, 1437.0);
  EXPECT_EQ(c.track.gauge_depth_mm, 14.0);
  EXPECT_DOUBLE_EQ(c.track.inclination_rad, std::atan(1.0 / 20.0));
  EXPECT_EQ(c.wheels[0].profile, "standard:S1002");
  EXPECT_EQ(c.wheels[1].profile, "worn.csv");
  EXPECT_EQ(c.wheels[1].options.noise_mm, 0.02);
  EXPECT_FALSE(c.wheels[0].options.noise_mm.has_value());
  EXPECT_EQ(c.load.vertical_N[1], 100000.0);
  EXPECT_EQ(c.material.wheel.poisson_ratio, 0.28);
}

TEST(CaseFile, AWrittenCaseReadsBackTheSame) {
  Case c = parse(
      std::string(kSmall) +
      "[state]\nlateral_mm = {from=-2.0, to=2.0, step=0.5}\nyaw_mrad = 1.5\n[analyses.wear]\nlaw = \"energy\"\nrate = "
      "2.5\nboth = true\n"
      "[material]\nhardness_MPa = 3000\n[material.wheel]\nyoungs_modulus_MPa = 205000\n[creepage]\nspin_per_mm = 1e-4\n"
      "[[plate]]\nplate = \"patch\"\nfile = \"p.png\"\n");
  const Case again = parse(write_case(c));
  EXPECT_EQ(write_case(again), write_case(c));
  EXPECT_EQ(again.state.lateral_mm.size(), 9U);
  EXPECT_EQ(again.state.lateral_mm.back(), 2.0);
  EXPECT_NEAR(again.track.inclination_rad, c.track.inclination_rad, 1e-17);
  EXPECT_EQ(std::get<std::string>(again.analyses.at("wear").at("law")), "energy");
  EXPECT_EQ(std::get<double>(again.analyses.at("wear").at("rate")), 2.5);
  EXPECT_TRUE(std::get<bool>(again.analyses.at("wear").at("both")));
  EXPECT_EQ(again.material, c.material);
  EXPECT_EQ(again.plates.size(), 1U);
}

TEST(CaseFile, AnUnknownKeyNamesItsLineAndTheNearestKey) {
  const Refusal r = refusal_of("[track]\n\ngage_mm = 1435\n[wheel]\nprofile=\"a\"\n[rail]\nprofile=\"b\"\n");
  EXPECT_EQ(r.code, ErrorCode::unknown_key);
  EXPECT_NE(r.text.find("a.toml:3: track.gage_mm"), std::string::npos) << r.text;
  EXPECT_NE(r.text.find("track.gauge_mm?"), std::string::npos) << r.text;
}

TEST(CaseFile, EveryMistakeHasItsOwnCodeAndSentence) {
  const std::string profiles = "[wheel]\nprofile=\"a\"\n[rail]\nprofile=\"b\"\n";
  const struct {
    std::string text;
    ErrorCode code;
    std::string part;
  } cases[] = {
      {"title = ", ErrorCode::bad_syntax, "a.toml:1"},
      {profiles + "[track]\ngauge_mm = \"wide\"\n", ErrorCode::wrong_type, "must be a number"},
      {profiles + "[track]\ngauge_mm = -1435.0\n", ErrorCode::out_of_range, "between 300 and 3000 mm"},
      {profiles + "[track]\ninclination = \"one in forty\"\n", ErrorCode::out_of_range, "1:40"},
      {profiles + "[track]\ncurve_radius_m = 3\n", ErrorCode::out_of_range, "at least 10 m"},
      {"[wheel]\nprofile=\"a\"\n", ErrorCode::missing_key, "left rail has no profile"},
      {profiles + "[state]\nlateral_reference = \"rial\"\n", ErrorCode::unknown_name, "did you mean \"rail\""},
      {profiles + "[state]\nlateral_mm = { from = 1, to = 0, step = 1 }\n", ErrorCode::out_of_range, "step"},
      {profiles + "[state]\nlateral_mm = [ ]\n", ErrorCode::wrong_type, "list of numbers"},
      {profiles + "[patch]\ncells = 3\n", ErrorCode::out_of_range, "between 8 and 512"},
      {profiles + "[patch]\ncells = 32.5\n", ErrorCode::wrong_type, "whole number"},
      {profiles + "[load]\nwheel_N = 0\n", ErrorCode::out_of_range, "load.wheel_N"},
      {profiles + "[material]\npoisson_ratio = 0.6\n", ErrorCode::out_of_range, "poisson_ratio"},
      {profiles + "[friction]\ncoefficient = nan\n", ErrorCode::out_of_range, "finite"},
      {profiles + "[bench]\nnormal_force_N = 1\n", ErrorCode::conflicting_keys, "[wheel]"},
      {"[bench]\nnormal_force_N = 1e5\n", ErrorCode::missing_key, "curvature_rolling_per_mm"},
      {"[bench]\nnormal_force_N = 1e5\ngap_file = \"g.csv\"\ncurvature_across_per_mm = 0.01\n",
       ErrorCode::conflicting_keys, "exclude"},
      {profiles + "[[plate]]\nfile = \"x.png\"\n", ErrorCode::missing_key, "plate"},
      {profiles + "[analyses]\nwear = 3\n", ErrorCode::wrong_type, "section"},
  };
  for (const auto& c : cases) {
    const Refusal r = refusal_of(c.text);
    EXPECT_EQ(r.code, c.code) << c.text << r.text;
    EXPECT_NE(r.text.find(c.part), std::string::npos) << c.text << r.text;
  }
}

TEST(CaseSettings, OverrideTheFileAndReachAnalyses) {
  const Case c = parse(kSmall, {"track.gauge_mm=1440", "state.lateral_mm=2.5", "slip_bands.method=simplified",
                                "patch.method=half_space", "load.left_N=9e4"});
  EXPECT_EQ(c.track.gauge_mm, 1440.0);
  EXPECT_EQ(c.state.lateral_mm.front(), 2.5);
  EXPECT_EQ(std::get<std::string>(c.analyses.at("slip_bands").at("method")), "simplified");
  EXPECT_EQ(c.patch.method, PatchMethod::half_space);
  EXPECT_EQ(c.load.vertical_N[0], 9e4);
}

TEST(CaseSettings, MistakesAreNamed) {
  for (const char* bad : {"gauge", "=3", "track.gauge_mm=", "track..gauge_mm=3", "track.=3", "title.x=3"}) {
    const Refusal r = refusal_of(kSmall, {bad});
    EXPECT_EQ(r.code, ErrorCode::bad_option) << bad << ": " << r.text;
  }
  EXPECT_EQ(refusal_of(kSmall, {"track.gauge=1435"}).code, ErrorCode::unknown_key);
}

TEST(CarriedCase, Base64GoesThereAndBack) {
  for (const std::string& text : {std::string(), std::string("a"), std::string("ab"), std::string("abc\0\xff", 5)})
    EXPECT_EQ(base64_decode(base64_encode(text)), text);
  EXPECT_EQ(base64_encode("Man"), "TWFu");  // RFC 4648
}

TEST(CarriedCase, AnSvgGivesItsCaseBackAndAnEmptyPictureIsRefused) {
  const std::string svg =
      "<?xml version=\"1.0\"?><svg><metadata>runband-case:" + base64_encode(kSmall) + "</metadata></svg>";
  EXPECT_EQ(carried_case(svg, "a.svg"), kSmall);
  EXPECT_FALSE(carried_case(kSmall, "a.toml").has_value());
  EXPECT_THROW(carried_case("%PDF-1.5 nothing", "a.pdf"), FileError);
}

}  // namespace
}  // namespace runband
