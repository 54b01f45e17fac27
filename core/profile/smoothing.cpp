#include "core/profile/smoothing.h"

#include <algorithm>
#include <cmath>

#include "core/profile/banded.h"

namespace runband {

namespace {

using Eigen::Index;
using Matrix6 = Eigen::Matrix<double, 6, 6>;

// Quintic B-splines on unit knots: row j holds the powers 0..5 of x on [0, 1] of the j-th of the six that live there.
// Cox-de Boor with knots at the integers.
const Matrix6& basis_polynomials() {
  static const Matrix6 basis = [] {
    Matrix6 m = Matrix6::Zero();
    m(0, 0) = 1.0;
    for (int p = 1; p <= 5; ++p) {
      Matrix6 next = Matrix6::Zero();
      for (int j = 0; j <= p; ++j)
        for (int k = 0; k < p; ++k) {
          if (j >= 1) {
            next(j, k) += m(j - 1, k) * (p - j) / p;
            next(j, k + 1) += m(j - 1, k) / p;
          }
          if (j < p) {
            next(j, k) += m(j, k) * (j + 1) / p;
            next(j, k + 1) -= m(j, k) / p;
          }
        }
      m = next;
    }
    return m;
  }();
  return basis;
}

// Integral over [0, 1] of the products of the third derivatives.
const Matrix6& penalty_block() {
  static const Matrix6 block = [] {
    Matrix6 p = Matrix6::Zero();
    Eigen::Matrix<double, 6, 3> third;  // powers 0..2 of the third derivative
    for (int j = 0; j < 6; ++j)
      third.row(j) << 6.0 * basis_polynomials()(j, 3), 24.0 * basis_polynomials()(j, 4),
          60.0 * basis_polynomials()(j, 5);
    for (int i = 0; i < 6; ++i)
      for (int j = 0; j < 6; ++j)
        for (int a = 0; a < 3; ++a)
          for (int b = 0; b < 3; ++b) p(i, j) += third(i, a) * third(j, b) / (a + b + 1);
    return p;
  }();
  return block;
}

// Uniform knots over [0, length].
struct Knots {
  double length = 0;
  Index intervals = 0;
  double step() const { return length / static_cast<double>(intervals); }
  Index parameters() const { return intervals + 5; }
};

using Vector6 = Eigen::Matrix<double, 6, 1>;

Vector6 basis_at(double x) {
  Vector6 powers;
  powers << 1.0, x, x * x, x * x * x, x * x * x * x, x * x * x * x * x;
  return basis_polynomials() * powers;
}

// The points' side of the normal equations.
struct DataEquations {
  Band gram;            ///< sum of basis products
  Eigen::MatrixXd rhs;  ///< parameters x 2
};

DataEquations assemble(const Knots& knots, const std::vector<double>& t, const std::vector<Vec2>& points) {
  DataEquations data{Band::Zero(6, knots.parameters()), Eigen::MatrixXd::Zero(knots.parameters(), 2)};
  for (std::size_t i = 0; i < points.size(); ++i) {
    const double u = std::clamp(t[i] / knots.step(), 0.0, static_cast<double>(knots.intervals));
    const Index k = std::min(static_cast<Index>(u), knots.intervals - 1);
    const Vector6 b = basis_at(u - static_cast<double>(k));
    for (Index a = 0; a < 6; ++a) {
      data.rhs.row(k + a) += b(a) * points[i].transpose();
      for (Index c = a; c < 6; ++c) data.gram(c - a, k + a) += b(a) * b(c);
    }
  }
  return data;
}

SplineCurve to_curve(const Knots& knots, const Eigen::MatrixXd& parameters) {
  std::vector<double> t;
  std::vector<SplineCurve::Coefficients> coefficients;
  const double h = knots.step();
  for (Index k = 0; k <= knots.intervals; ++k) t.push_back(h * static_cast<double>(k));
  for (Index k = 0; k < knots.intervals; ++k) {
    const Eigen::Matrix<double, 6, 2> c = basis_polynomials().transpose() * parameters.middleRows(k, 6);
    SplineCurve::Coefficients& out = coefficients.emplace_back();
    double scale = 1.0;
    for (Index p = 0; p < 6; ++p, scale /= h) out[static_cast<std::size_t>(p)] = scale * c.row(p).transpose();
  }
  return {std::move(t), std::move(coefficients)};
}

// How strongly each interval is held back. One weight per stretch of the profile.
struct Stretches {
  std::vector<Index> first;    ///< first interval of each, and one past the last
  std::vector<double> weight;  ///< of the penalty, mm^5
  double effective_parameters = 0;
  Eigen::MatrixXd spline;  ///< parameters x 2
};

struct Sums {
  double penalty = 0;  ///< of the fit
  double trace = 0;    ///< of (inverse of the system) * (penalty matrix)
};

bool solve(const Knots& knots, const DataEquations& data, Stretches& s, std::vector<Sums>& sums) {
  const Matrix6 block = penalty_block() / std::pow(knots.step(), 5);
  Band system = data.gram;
  for (std::size_t z = 0; z < s.weight.size(); ++z)
    for (Index k = s.first[z]; k < s.first[z + 1]; ++k)
      for (Index a = 0; a < 6; ++a)
        for (Index c = a; c < 6; ++c) system(c - a, k + a) += s.weight[z] * block(a, c);
  const BandFactor factor(system);
  if (!factor.ok()) return false;
  s.spline = data.rhs;
  factor.solve(s.spline);
  const Band inverse = factor.inverse_band();
  sums.assign(s.weight.size(), {});
  s.effective_parameters = static_cast<double>(knots.parameters());
  for (std::size_t z = 0; z < s.weight.size(); ++z) {
    for (Index k = s.first[z]; k < s.first[z + 1]; ++k) {
      const Eigen::Matrix<double, 6, 2> c = s.spline.middleRows(k, 6);
      sums[z].penalty += (c.transpose() * block * c).trace();
      for (Index a = 0; a < 6; ++a) {
        sums[z].trace += block(a, a) * inverse(0, k + a);
        for (Index d = a + 1; d < 6; ++d) sums[z].trace += 2.0 * block(a, d) * inverse(d - a, k + a);
      }
    }
    s.effective_parameters -= s.weight[z] * sums[z].trace;
  }
  return true;
}

// Signed distances of the points from the curve, and where on the curve their feet are.
struct Feet {
  std::vector<double> t, distance;
  double sum_of_squares = 0;
};

Feet feet_of(const SplineCurve& curve, const std::vector<Vec2>& points, std::vector<double> t) {
  Feet feet;
  for (std::size_t i = 0; i < points.size(); ++i) {
    double u = t[i];
    for (int step = 0; step < 4; ++step) {
      const CurvePoint p = curve.at(u);
      const Vec2 off = p.position - points[i];
      const double slope = off.dot(p.d1), bend = p.d1.squaredNorm() + off.dot(p.d2);
      u = std::clamp(u - slope / std::max(bend, 0.25 * p.d1.squaredNorm()), curve.t_begin(), curve.t_end());
    }
    const CurvePoint p = curve.at(u);
    const Vec2 off = points[i] - p.position;
    feet.t.push_back(u);
    feet.distance.push_back((p.d1.x() * off.y() - p.d1.y() * off.x()) / p.d1.norm());
    feet.sum_of_squares += feet.distance.back() * feet.distance.back();
  }
  return feet;
}

// Chords over several points at once, so that noise does not make the way longer.
std::vector<double> chord_parameters(const std::vector<Vec2>& points, double noise) {
  const std::size_t n = points.size();
  double length = 0.0;
  for (std::size_t i = 1; i < n; ++i) length += (points[i] - points[i - 1]).norm();
  const double spacing = length / static_cast<double>(n - 1);
  const std::size_t leap = std::clamp<std::size_t>(static_cast<std::size_t>(5.0 * noise / spacing), 1, n / 8);
  std::vector<double> t(n, 0.0);
  for (std::size_t i = 0; i + 1 < n; i += leap) {
    const std::size_t j = std::min(i + leap, n - 1);
    const double chord = (points[j] - points[i]).norm();
    for (std::size_t k = i + 1; k <= j; ++k)
      t[k] = t[i] + chord * static_cast<double>(k - i) / static_cast<double>(j - i);
  }
  return t;
}

// Noise from second differences, whatever the shape: their variance is six times that of the points.
double rough_noise(const std::vector<Vec2>& points) {
  std::vector<double> size;
  for (std::size_t i = 1; i + 1 < points.size(); ++i) {
    const Vec2 along = points[i + 1] - points[i - 1];
    const Vec2 second = points[i + 1] - 2.0 * points[i] + points[i - 1];
    size.push_back(std::abs(along.x() * second.y() - along.y() * second.x()) / std::max(along.norm(), 1e-12));
  }
  const auto middle = size.begin() + static_cast<std::ptrdiff_t>(size.size() / 2);
  std::nth_element(size.begin(), middle, size.end());
  return *middle / (0.6745 * std::sqrt(6.0));
}

}  // namespace

SmoothedCurve smooth_points(const std::vector<Vec2>& points, std::optional<double> noise_mm) {
  const double n = static_cast<double>(points.size());
  const bool estimate = !noise_mm;
  double noise = noise_mm.value_or(std::max(rough_noise(points), 1e-6));

  // Between two knots an arc of 10 mm, about the tightest there is, leaves its chord by an eighth of the noise: closer
  // knots would follow nothing but noise. Nor closer than the points, nor more than a profile needs.
  constexpr double kTightestRadius_mm = 10.0;
  constexpr Index kMostIntervals = 1500;
  std::vector<double> t = chord_parameters(points, noise);
  Knots knots{t.back(), 0};
  const double spacing = knots.length / (n - 1.0);
  const double step =
      std::max({spacing, std::sqrt(noise * kTightestRadius_mm), knots.length / static_cast<double>(kMostIntervals)});
  knots.intervals = std::max<Index>(static_cast<Index>(std::ceil(knots.length / step)), 4);

  // About the width of a contact patch: the least length over which a bend of the profile matters. From 5 to 20 mm the
  // curvatures on standard profiles come out equally well.
  constexpr double kStretch_mm = 10.0;
  const Index stretches =
      std::clamp<Index>(static_cast<Index>(std::lround(knots.length / kStretch_mm)), 1, knots.intervals / 8 + 1);
  // Beyond these a stretch is a single arc as far as its points can tell, or the equations lose their digits.
  const double heaviest = std::min(std::pow(knots.length / static_cast<double>(stretches), 6) / spacing,
                                   1e11 * std::pow(knots.step(), 6) / spacing);
  Stretches s;
  for (Index z = 0; z <= stretches; ++z) s.first.push_back(z * knots.intervals / stretches);
  // Any start will do; this one is some rounds away from any answer.
  s.weight.assign(static_cast<std::size_t>(stretches), std::min(1e2, heaviest));

  std::vector<Sums> sums;
  constexpr int kRounds = 3;
  std::optional<SplineCurve> curve;
  Feet feet;
  for (int round = 0; round < kRounds; ++round) {
    const DataEquations data = assemble(knots, t, points);
    for (int pass = 0; pass < 30; ++pass) {
      if (!solve(knots, data, s, sums)) {
        for (double& w : s.weight) w = std::sqrt(w * heaviest);
        continue;
      }
      if (estimate) {
        curve = to_curve(knots, s.spline);
        feet = feet_of(*curve, points, t);
        noise = std::sqrt(feet.sum_of_squares / std::max(n - s.effective_parameters, 0.1 * n));
      }
      double change = 0.0;
      for (std::size_t z = 0; z < s.weight.size(); ++z) {
        const double rank = static_cast<double>(s.first[z + 1] - s.first[z]) *
                            static_cast<double>(knots.parameters() - 3) / static_cast<double>(knots.intervals);
        const double freedom = std::max(rank - s.weight[z] * sums[z].trace, 1e-3);
        const double next =
            std::clamp(noise * noise * freedom / std::max(sums[z].penalty, 1e-30), heaviest * 1e-16, heaviest);
        change = std::max(change, std::abs(std::log(next / s.weight[z])));
        s.weight[z] = next;
      }
      if (change < 0.02) break;
    }
    solve(knots, data, s, sums);
    curve = to_curve(knots, s.spline);
    feet = feet_of(*curve, points, t);
    if (round + 1 < kRounds) {
      for (std::size_t i = 0; i < points.size(); ++i) t[i] = curve->arc_length(feet.t[i]);
      knots.length = curve->arc_length(curve->t_end());
    }
  }

  ProfileFit fit;
  fit.noise_mm = noise;
  fit.noise_estimated = estimate;
  fit.residual_rms_mm = std::sqrt(feet.sum_of_squares / n);
  for (const double d : feet.distance) fit.residual_max_mm = std::max(fit.residual_max_mm, std::abs(d));
  for (const double w : s.weight) fit.smoothing += std::log(w) / static_cast<double>(s.weight.size());
  fit.smoothing = std::exp(fit.smoothing);
  fit.effective_parameters = s.effective_parameters;
  return {std::move(*curve), fit, std::move(feet.distance)};
}

}  // namespace runband
