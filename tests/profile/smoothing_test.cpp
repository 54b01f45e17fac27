// The smoothing spline recovers the shape under the noise, and the noise itself.
#include "core/profile/smoothing.h"

#include <gtest/gtest.h>

#include <algorithm>

#include "core/profile/banded.h"
#include "tests/profile/support.h"

namespace runband {
namespace {

constexpr double kNoise_mm = 0.02, kSpacing_mm = 0.1;

double median(std::vector<double> v) {
  std::sort(v.begin(), v.end());
  return v[v.size() / 2];
}

TEST(BandFactor, SolvesAndInvertsWithinTheBand) {
  constexpr Eigen::Index n = 30;
  Eigen::MatrixXd dense = Eigen::MatrixXd::Zero(n, n);
  Band band = Band::Zero(6, n);
  for (Eigen::Index i = 0; i < n; ++i)
    for (Eigen::Index d = 0; d < 6 && i + d < n; ++d) {
      const double value = d == 0 ? 10.0 + std::sin(double(i)) : std::cos(double(3 * i + d)) / double(d);
      band(d, i) = dense(i + d, i) = dense(i, i + d) = value;
    }
  const BandFactor factor(band);
  ASSERT_TRUE(factor.ok());
  Eigen::MatrixXd identity = Eigen::MatrixXd::Identity(n, n);
  factor.solve(identity);
  EXPECT_LT((dense * identity - Eigen::MatrixXd::Identity(n, n)).norm(), 1e-12);
  const Band inverse = factor.inverse_band();
  for (Eigen::Index i = 0; i < n; ++i)
    for (Eigen::Index d = 0; d < 6 && i + d < n; ++d) EXPECT_NEAR(inverse(d, i), identity(i + d, i), 1e-13);
}

TEST(BandFactor, TellsAMatrixThatIsNotPositiveDefinite) {
  Band band = Band::Zero(6, 8);
  band.row(0).setOnes();
  band(0, 4) = -1.0;
  EXPECT_FALSE(BandFactor(band).ok());
}

TEST(InterpolatingSpline, PassesThroughEveryPointWithTwoContinuousDerivatives) {
  const std::vector<Vec2> points = sampled(*s1002()->curve, 0.4);
  const SplineCurve spline = interpolating_spline(points);
  for (std::size_t i = 0; i < points.size(); ++i) {
    const double t = spline.knots()[i];
    EXPECT_LT((spline.at(t).position - points[i]).norm(), 1e-12);
    EXPECT_LT((spline.at(t - 1e-9).d2 - spline.at(t + 1e-9).d2).norm(), 1e-6);
  }
}

// Halving the spacing divides the error by 16: a cubic spline is of fourth order on a smooth curve (de Boor, A
// Practical Guide to Splines, 1978, chapter V). On the tread's polynomial.
TEST(InterpolatingSpline, ConvergesAtFourthOrder) {
  const auto wheel = s1002();
  std::vector<double> errors;
  for (const double spacing : {4.0, 2.0, 1.0}) {
    std::vector<Vec2> points;
    for (double y = -25.0; y <= 31.0; y += spacing)
      points.push_back(wheel->curve->at(parameter_at_y(*wheel->curve, y)).position);
    const SplineCurve spline = interpolating_spline(points);
    double worst = 0.0;
    for (double y = -15.0; y < 20.0; y += 0.1) {
      const double z = wheel->curve->at(parameter_at_y(*wheel->curve, y)).z();
      worst = std::max(worst, std::abs(spline.at(parameter_at_y(spline, y)).z() - z));
    }
    errors.push_back(worst);
  }
  EXPECT_NEAR(std::log2(errors[0] / errors[1]), 4.0, 1.0);
  EXPECT_NEAR(std::log2(errors[1] / errors[2]), 4.0, 0.6);
}

TEST(SmoothPoints, DerivativesAgreeWithDifferences) {
  const SmoothedCurve smoothed = smooth_points(sampled(*s1002()->curve, kSpacing_mm, kNoise_mm), kNoise_mm);
  for (double t = 1.0; t < smoothed.curve.t_end() - 1.0; t += 0.37) {
    const double h = 1e-5;
    const CurvePoint p = smoothed.curve.at(t), before = smoothed.curve.at(t - h), after = smoothed.curve.at(t + h);
    EXPECT_LT((p.d1 - (after.position - before.position) / (2 * h)).norm(), 1e-7);
    EXPECT_LT((p.d2 - (after.d1 - before.d1) / (2 * h)).norm(), 1e-6);
  }
}

// The curve lies nearer to the truth than any point does: error over noise about the root of parameters over points.
TEST(SmoothPoints, LieNearerToTheTruthThanThePoints) {
  for (const auto& profile : {s1002(), rail60()}) {
    const std::vector<Vec2> points = sampled(*profile->curve, kSpacing_mm, kNoise_mm, 3);
    const SmoothedCurve smoothed = smooth_points(points, kNoise_mm);
    double sum = 0.0;
    int n = 0;
    for (double y = -30.0; y < 30.0; y += 0.25, ++n) {
      const double truth = profile->curve->at(parameter_at_y(*profile->curve, y)).z();
      sum += std::pow(smoothed.curve.at(parameter_at_y(smoothed.curve, y)).z() - truth, 2);
    }
    EXPECT_LT(std::sqrt(sum / n), 0.25 * kNoise_mm) << profile->title;
    EXPECT_NEAR(smoothed.fit.residual_rms_mm, kNoise_mm, 0.1 * kNoise_mm);
  }
}

// 20 draws; a standard deviation estimated from 1500 points scatters by 2 %.
TEST(SmoothPoints, FindTheNoiseWhereNoneIsStated) {
  for (const double noise : {0.005, 0.02, 0.05}) {
    std::vector<double> found;
    for (std::uint64_t seed = 1; seed <= 20; ++seed)
      found.push_back(smooth_points(sampled(*s1002()->curve, kSpacing_mm, noise, seed), {}).fit.noise_mm);
    EXPECT_NEAR(median(found), noise, 0.03 * noise);
  }
}

// What contact needs: curvature over the width of a patch. Median error over 40 draws at each place. A parabola through
// the raw points of a 10 mm window would scatter by sqrt(720 * 0.1 * 0.02^2 / 10^5) = 5.4e-4 per mm (its
// median 3.6e-4).
TEST(SmoothPoints, RecoverCurvatureOverThePatchWidth) {
  struct Place {
    std::shared_ptr<const Profile> profile;
    double y, tolerance_per_mm;
  };
  const auto wheel = s1002(), rail = rail60();
  // Measured 1e-4 to 4e-4 on tread and head, 5e-4 at the gauge corner (curvature 0.078).
  const std::vector<Place> places{{wheel, -15, 3.6e-4}, {wheel, -5, 2.5e-4}, {wheel, 3, 2.5e-4}, {wheel, 13, 2.5e-4},
                                  {rail, 0, 3.6e-4},    {rail, -6, 3.6e-4},  {rail, -14, 5e-4},  {rail, -31, 9e-4}};
  for (const double width : {8.0, 10.0, 12.0}) {
    std::vector<std::vector<double>> errors(places.size());
    for (std::uint64_t seed = 1; seed <= 40; ++seed) {
      const SmoothedCurve on_wheel = smooth_points(sampled(*wheel->curve, kSpacing_mm, kNoise_mm, seed), kNoise_mm);
      const SmoothedCurve on_rail = smooth_points(sampled(*rail->curve, kSpacing_mm, kNoise_mm, seed), kNoise_mm);
      for (std::size_t k = 0; k < places.size(); ++k) {
        const SplineCurve& fitted = places[k].profile == wheel ? on_wheel.curve : on_rail.curve;
        errors[k].push_back(std::abs(window_curvature(fitted, places[k].y, width) -
                                     window_curvature(*places[k].profile->curve, places[k].y, width)));
      }
    }
    for (std::size_t k = 0; k < places.size(); ++k) {
      EXPECT_LT(median(errors[k]), places[k].tolerance_per_mm)
          << places[k].profile->title << " at y = " << places[k].y << ", window " << width << " mm";
      RecordProperty("curvature_error_" + std::to_string(k) + "_" + std::to_string(int(width)),
                     std::to_string(median(errors[k])));
    }
  }
}

TEST(SmoothPoints, SmoothMoreWhereTheNoiseIsGreater) {
  const auto wheel = s1002();
  double parameters = 1e9;
  for (const double noise : {0.002, 0.01, 0.05}) {
    const SmoothedCurve smoothed = smooth_points(sampled(*wheel->curve, kSpacing_mm, noise, 5), noise);
    EXPECT_LT(smoothed.fit.effective_parameters, parameters);
    parameters = smoothed.fit.effective_parameters;
  }
}

TEST(SmoothPoints, KeepAStraightLineStraight) {
  std::vector<Vec2> points;
  for (int i = 0; i <= 500; ++i) points.emplace_back(0.2 * i, 0.05 * 0.2 * i + (i % 2 == 0 ? 0.01 : -0.01));
  const SmoothedCurve smoothed = smooth_points(points, 0.01);
  for (double t = 2.0; t < 98.0; t += 1.0) EXPECT_LT(std::abs(smoothed.curve.at(t).curvature()), 1e-4);
}

}  // namespace
}  // namespace runband
