// Exact definitions: continuity of every shipped standard, derivatives against differences, mistakes.
#include "core/profile/definition.h"

#include <gtest/gtest.h>

#include <cmath>
#include <filesystem>

#include "core/base/error.h"
#include "core/profile/pieces.h"

namespace runband {
namespace {

const std::vector<std::pair<std::string, ProfileKind>> kStandards{
    {"S1002", ProfileKind::wheel}, {"coned_1_20", ProfileKind::wheel}, {"coned_1_40", ProfileKind::wheel},
    {"60E1", ProfileKind::rail},   {"54E1", ProfileKind::rail},        {"49E1", ProfileKind::rail}};

std::shared_ptr<const Profile> standard(const std::string& name, ProfileKind kind) {
  return load_profile("standard:" + name, kind);
}

const PiecewiseCurve& pieces_of(const Profile& profile) { return dynamic_cast<const PiecewiseCurve&>(*profile.curve); }

TEST(StandardProfiles, AreAllListed) {
  std::vector<std::string> names;
  for (const auto& [name, title] : standard_profiles()) {
    names.push_back(name);
    EXPECT_FALSE(title.empty());
  }
  for (const auto& [name, kind] : kStandards)
    EXPECT_NE(std::find(names.begin(), names.end(), name), names.end()) << name;
}

// The digits printed in the standards close within these: 2e-4 mm and 1e-5 rad (S1002 piece C), 1e-7 elsewhere.
TEST(StandardProfiles, JoinWithoutStepOrKink) {
  for (const auto& [name, kind] : kStandards) {
    const auto profile = standard(name, kind);
    EXPECT_FALSE(profile->source.empty()) << name;
    EXPECT_FALSE(profile->provenance.empty()) << name;
    EXPECT_EQ(profile->checksum.size(), 40U);
    for (const Joint& joint : pieces_of(*profile).joints()) {
      const double y = profile->curve->at(joint.t).y();
      const bool loose = name == "S1002" && (std::abs(y + 26.0) < 1e-6 || std::abs(y + 35.0) < 1e-6);
      EXPECT_LT(joint.gap_mm, loose ? 1.3e-4 : 1e-7) << name << " at y = " << y;
      EXPECT_LT(joint.kink_rad, loose ? 1e-5 : 1e-8) << name << " at y = " << y;
    }
  }
}

TEST(StandardProfiles, DerivativesAgreeWithDifferences) {
  for (const auto& [name, kind] : kStandards) {
    const auto profile = standard(name, kind);
    const ProfileCurve& curve = *profile->curve;
    const std::vector<double> breaks = curve.breaks();
    for (std::size_t i = 1; i < breaks.size(); ++i) {
      const double h = 1e-4, t = 0.4 * breaks[i - 1] + 0.6 * breaks[i];
      const CurvePoint p = curve.at(t), before = curve.at(t - h), after = curve.at(t + h);
      EXPECT_LT((p.d1 - (after.position - before.position) / (2 * h)).norm(), 1e-6) << name;
      EXPECT_LT((p.d2 - (after.d1 - before.d1) / (2 * h)).norm(), 1e-6) << name;
    }
  }
}

TEST(StandardProfiles, RunFromGaugeToFieldSide) {
  for (const auto& [name, kind] : kStandards) {
    const auto profile = standard(name, kind);
    const CurvePoint first = profile->curve->at(-1.0), last = profile->curve->at(1e9);
    EXPECT_LT(first.y(), -30.0) << name;
    EXPECT_GT(last.y(), 30.0) << name;
  }
}

TEST(StandardProfiles, SignOfCurvatureIsPositiveWhereZBendsUpward) {
  const auto rail = standard("60E1", ProfileKind::rail);
  const std::vector<double> breaks = rail->curve->breaks();
  const CurvePoint crown = rail->curve->at(0.5 * (breaks.front() + breaks.back()));
  EXPECT_NEAR(crown.y(), 0.0, 1e-12);
  EXPECT_NEAR(crown.z(), 0.0, 1e-12);
  EXPECT_NEAR(crown.curvature(), -1.0 / 300.0, 1e-14);
}

TEST(StandardProfiles, AnUnknownNameIsAnsweredWithTheNearest) {
  try {
    load_profile("standard:S1020", ProfileKind::wheel);
    FAIL();
  } catch (const InputError& error) {
    EXPECT_EQ(error.code(), ErrorCode::unknown_name);
    EXPECT_NE(error.cure().find("standard:S1002"), std::string::npos) << error.what();
  }
}

TEST(SampleCurve, StaysWithinTheChordError) {
  for (const double tolerance : {1e-1, 1e-3, 1e-5}) {
    const auto profile = standard("S1002", ProfileKind::wheel);
    const ProfileCurve& curve = *profile->curve;
    const std::vector<CurvePoint> samples = sample_curve(curve, tolerance, 5.0);
    std::vector<double> parameters;
    for (const CurvePoint& p : samples) parameters.push_back(p.t);
    for (const double b : curve.breaks())
      EXPECT_NE(std::find(parameters.begin(), parameters.end(), b), parameters.end()) << "no sample at a break";
    for (std::size_t i = 1; i < samples.size(); ++i) {
      ASSERT_LT(samples[i - 1].t, samples[i].t);
      const Vec2 a = samples[i - 1].position, chord = samples[i].position - a;
      EXPECT_LE(chord.norm(), 5.0 + 1e-9);
      for (const double f : {0.21, 0.5, 0.77}) {
        const Vec2 off = curve.at(samples[i - 1].t + f * (samples[i].t - samples[i - 1].t)).position - a;
        // The loose joint of the standard adds its own step of 1.2e-4 mm.
        EXPECT_LT(std::abs(chord.x() * off.y() - chord.y() * off.x()) / chord.norm(), 1.05 * tolerance + 1.2e-4);
      }
    }
  }
}

}  // namespace
}  // namespace runband
