// Files of points in the many forms in which they come, all giving the same profile; what is corrected is reported.
#include <gtest/gtest.h>
#include <unistd.h>

#include <algorithm>
#include <filesystem>
#include <fstream>
#include <functional>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/profile/checksum.h"
#include "core/profile/points_file.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

std::string rows(const std::vector<Vec2>& points, const std::string& separator, double scale = 1.0) {
  std::string text;
  for (const Vec2& p : points)
    text += number_text(scale * p.x(), 10) + separator + number_text(scale * p.y(), 10) + "\n";
  return text;
}

std::string replaced(std::string text, const std::string& from, const std::string& to) {
  for (std::size_t i = 0; (i = text.find(from, i)) != std::string::npos; i += to.size())
    text.replace(i, from.size(), to);
  return text;
}

class PointFiles : public ::testing::Test {
 protected:
  PointFiles() : folder_(fs::path(::testing::TempDir()) / ("runband_points_" + std::to_string(::getpid()))) {
    fs::create_directories(folder_);
  }
  ~PointFiles() override { fs::remove_all(folder_); }

  std::shared_ptr<const Profile> load(const std::string& text, ProfileKind kind = ProfileKind::wheel,
                                      ProfileOptions options = {}) const {
    if (!options.noise_mm) options.noise_mm = 0.0;
    write_file(folder_ / "profile.csv", text);
    return load_profile("profile.csv", kind, options, folder_);
  }
  static bool has(const Profile& profile, const std::string& code) {
    return std::any_of(profile.findings.begin(), profile.findings.end(),
                       [&](const Finding& f) { return f.code == code; });
  }
  static void expect_same_points(const Profile& profile, const std::vector<Vec2>& points) {
    ASSERT_EQ(profile.points.size(), points.size());
    for (std::size_t i = 0; i < points.size(); ++i) EXPECT_LT((profile.points[i] - points[i]).norm(), 1e-7);
  }

  fs::path folder_;
  std::vector<Vec2> wheel_ = sampled(*s1002()->curve, 0.5), rail_ = sampled(*rail60()->curve, 0.5);
};

TEST_F(PointFiles, ReadAlikeInEveryForm) {
  const std::string comma = rows(wheel_, ",");
  const std::vector<std::string> forms{
      comma,
      rows(wheel_, ";"),
      rows(wheel_, "\t"),
      rows(wheel_, "   "),
      "\xEF\xBB\xBF" + comma,
      replaced(comma, "\n", "\r\n"),
      replaced(comma, "\n", "\r"),
      "# a device wrote this\n\n" + comma + "\n# the end\n",
      "y_mm,z_mm\n" + comma,
      "y [mm]; z [mm]\n" + rows(wheel_, ";"),
      "\"y\",\"z\"\n" + comma,
      replaced(rows(wheel_, ";"), ".", ","),
      replaced(rows(wheel_, ";"), "\n", ";\n"),
  };
  for (std::size_t k = 0; k < forms.size(); ++k) {
    SCOPED_TRACE("form " + std::to_string(k));
    expect_same_points(*load(forms[k]), wheel_);
  }
}

TEST_F(PointFiles, PassOverColumnsOfOtherNames) {
  std::string text = "n;z_mm;quality;y_mm\n";
  for (std::size_t i = 0; i < wheel_.size(); ++i)
    text += std::to_string(i) + ";" + number_text(wheel_[i].y(), 10) + ";0.9;" + number_text(wheel_[i].x(), 10) + "\n";
  expect_same_points(*load(text), wheel_);
}

TEST_F(PointFiles, TakeTheStatedUnit) {
  const std::vector<std::pair<std::string, double>> units{{"m", 1e-3}, {"in", 1.0 / 25.4}, {"um", 1e3}, {"mm", 1.0}};
  for (const auto& [unit, scale] : units) {
    SCOPED_TRACE(unit);
    expect_same_points(*load("# unit: " + unit + "\n" + rows(wheel_, ",", scale)), wheel_);
    expect_same_points(*load("y_" + unit + ",z_" + unit + "\n" + rows(wheel_, ",", scale)), wheel_);
    expect_same_points(*load(rows(wheel_, ",", scale), ProfileKind::wheel, {{}, unit, "", ""}), wheel_);
  }
  EXPECT_TRUE(has(*load(rows(wheel_, ",")), "unit_recognised"));
  EXPECT_FALSE(has(*load("# unit: mm\n" + rows(wheel_, ",")), "unit_recognised"));
}

TEST_F(PointFiles, RefuseAnOptionThatContradictsTheFile) {
  EXPECT_THROW(load("# unit: mm\n" + rows(wheel_, ","), ProfileKind::wheel, {{}, "in", "", ""}), InputError);
  EXPECT_THROW(load(rows(wheel_, ","), ProfileKind::wheel, {{}, "cm", "", ""}), InputError);
}

TEST_F(PointFiles, RecogniseTheAxesOfAWheelAndSaySo) {
  for (const double y : {1.0, -1.0})
    for (const double z : {1.0, -1.0})
      for (const bool reversed : {false, true}) {
        std::vector<Vec2> points;
        for (const Vec2& p : wheel_) points.emplace_back(y * p.x(), z * p.y());
        if (reversed) std::reverse(points.begin(), points.end());
        const auto profile = load(rows(points, ","));
        expect_same_points(*profile, wheel_);
        EXPECT_EQ(has(*profile, "mirrored"), y < 0);
        EXPECT_EQ(has(*profile, "turned_over"), z < 0);
        EXPECT_EQ(has(*profile, "reversed"), reversed);
      }
}

TEST_F(PointFiles, TakeTheStatedAxes) {
  std::vector<Vec2> points;
  for (const Vec2& p : wheel_) points.emplace_back(-p.x(), -p.y());
  expect_same_points(*load("# y_axis: gauge\n# z_axis: down\n" + rows(points, ",")), wheel_);
  expect_same_points(*load(rows(points, ","), ProfileKind::wheel, {{}, "", "gauge", "down"}), wheel_);
  EXPECT_THROW(load("# z_axis: up\n" + rows(points, ",")), InputError);
}

TEST_F(PointFiles, SayThatTheSideOfARailIsAssumed) {
  EXPECT_TRUE(has(*load(rows(rail_, ","), ProfileKind::rail), "side_assumed"));
  const auto stated = load("# y_axis: field\n# z_axis: up\n# unit: mm\n" + rows(rail_, ","), ProfileKind::rail);
  EXPECT_TRUE(stated->findings.empty());
  expect_same_points(*stated, rail_);
}

TEST_F(PointFiles, DropAFewRepeatedPoints) {
  std::vector<Vec2> points = wheel_;
  points.insert(points.begin() + 40, points[40]);
  const auto profile = load(rows(points, ","));
  expect_same_points(*profile, wheel_);
  ASSERT_TRUE(has(*profile, "repeated_points"));
  for (const Finding& f : profile->findings)
    if (f.code == "repeated_points") {
      EXPECT_EQ(f.first_row, 42);
    }
}

TEST_F(PointFiles, CarryWhatTheFileSaysOfItself) {
  const std::string text = "# title: Axle 4711\n# source: depot Holm\n# noise_mm: 0.03\n" + rows(wheel_, ",");
  write_file(folder_ / "axle.csv", text);
  const auto profile = load_profile("axle.csv", ProfileKind::wheel, {}, folder_);
  EXPECT_EQ(profile->title, "Axle 4711");
  EXPECT_EQ(profile->source, "depot Holm");
  ASSERT_TRUE(profile->fit);
  EXPECT_EQ(profile->fit->noise_mm, 0.03);
  EXPECT_FALSE(profile->fit->noise_estimated);
  EXPECT_EQ(profile->checksum, checksum(text));
}

// FIPS 180 example: the digest of "abc".
TEST(Checksum, IsSha1) { EXPECT_EQ(checksum("abc"), "a9993e364706816aba3e25717850c26c9cd0d89d"); }

TEST(ProfileFromPoints, ZeroNoiseInterpolates) {
  const std::vector<Vec2> points = sampled(*s1002()->curve, 0.33);
  const auto profile = profile_from_points(points, ProfileKind::wheel, 0.0);
  for (double y = -60.0; y < 55.0; y += 0.7) {
    const double truth = s1002()->curve->at(parameter_at_y(*s1002()->curve, y)).z();
    EXPECT_NEAR(profile->curve->at(parameter_at_y(*profile->curve, y)).z(), truth, 4e-4) << y;
  }
}

TEST(ProfileFromPoints, RefusesWhatIsNoPoint) {
  std::vector<Vec2> points = sampled(*s1002()->curve, 0.5);
  EXPECT_THROW(profile_from_points(points, ProfileKind::wheel, -0.1), InputError);
  EXPECT_THROW(profile_from_points(points, ProfileKind::wheel, std::nan("")), InputError);
  points[10].x() = std::nan("");
  EXPECT_THROW(profile_from_points(points, ProfileKind::wheel, 0.0), InputError);
  EXPECT_THROW(profile_from_points({}, ProfileKind::wheel, 0.0), InputError);
}

// A point that noise cannot explain, yet too near to be called a spike.
TEST(ProfileFromPoints, ReportsAPointFarOffTheFit) {
  std::vector<Vec2> points = sampled(*s1002()->curve, 0.3, 0.01);
  points[300].y() += 0.15;
  const auto profile = profile_from_points(points, ProfileKind::wheel, 0.01);
  ASSERT_FALSE(profile->findings.empty());
  EXPECT_EQ(profile->findings.front().code, "far_point");
  EXPECT_EQ(profile->findings.front().first_row, 301);
}

TEST(ProfileFromPoints, ReportsAPoorFitWhereTheNoiseIsUnderstated) {
  const auto profile = profile_from_points(sampled(*s1002()->curve, 0.1, 0.03), ProfileKind::wheel, 0.01);
  EXPECT_TRUE(std::any_of(profile->findings.begin(), profile->findings.end(),
                          [](const Finding& f) { return f.code == "poor_fit"; }));
}

TEST(ProfileFromPoints, AcceptsASharpEdge) {
  std::vector<Vec2> points = sampled(*s1002()->curve, 0.5);
  for (int k = 1; k <= 8; ++k) points.emplace_back(60.0 + 0.5 * k, points.back().y() + 0.5);  // the outer chamfer
  EXPECT_NO_THROW(profile_from_points(points, ProfileKind::wheel, 0.0));
}

}  // namespace
}  // namespace runband
