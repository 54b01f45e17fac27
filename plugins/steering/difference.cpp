#include "plugins/steering/difference.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>

namespace runband {

namespace {

constexpr std::array<double, 4> kNodes{-0.8611363115940526, -0.3399810435848563, 0.3399810435848563,
                                       0.8611363115940526};  // Gauss-Legendre
constexpr std::array<double, 4> kWeights{0.3478548451374538, 0.6521451548625461, 0.6521451548625461,
                                         0.3478548451374538};
constexpr double kJump_mm = 1e-6;  // narrower pieces are straight

double difference(const RigidContact& c) { return c.touch[0].rolling_radius_mm - c.touch[1].rolling_radius_mm; }
double rate(const RigidContact& c) { return c.touch[0].rolling_radius_rate - c.touch[1].rolling_radius_rate; }

}  // namespace

Difference::Difference(const RigidSweep& sweep) {
  for (const RigidContact& c : sweep.contacts) {
    y_.push_back(c.pose.lateral_mm);
    r_.push_back(difference(c));
  }
  sum_.assign(y_.size(), 0.0);
  for (std::size_t k = 0; k + 1 < y_.size(); ++k) {
    const double h = y_[k + 1] - y_[k], chord = (r_[k + 1] - r_[k]) / h;
    double first = rate(sweep.contacts[k]), last = rate(sweep.contacts[k + 1]);
    // Three times the chord keeps a cubic from overshooting (F. N. Fritsch, R. E. Carlson 1980).
    const auto fits = [&](double slope) { return slope * chord >= 0.0 && std::abs(slope) <= 3.0 * std::abs(chord); };
    if (h < kJump_mm || !fits(first) || !fits(last)) first = last = chord;
    slope_[0].push_back(first);
    slope_[1].push_back(last);
    sum_[k + 1] = sum_[k] + h * (0.5 * (r_[k] + r_[k + 1]) + h * (first - last) / 12.0);
  }
}

std::size_t Difference::piece(double y) const {
  const auto k = static_cast<std::size_t>(std::upper_bound(y_.begin(), y_.end(), y) - y_.begin());
  return std::clamp<std::size_t>(k, 1, std::max<std::size_t>(y_.size() - 1, 1)) - 1;
}

double Difference::value(std::size_t k, double y) const {
  if (y_.size() < 2) return r_.front();
  const double h = y_[k + 1] - y_[k], t = (y - y_[k]) / h, rise = r_[k + 1] - r_[k];
  const double a = h * slope_[0][k], b = h * slope_[1][k];
  return r_[k] + t * (a + t * (3.0 * rise - 2.0 * a - b + t * (a + b - 2.0 * rise)));
}

double Difference::sum(std::size_t k, double y) const {
  if (y_.size() < 2) return 0.0;
  const double h = y_[k + 1] - y_[k], t = (y - y_[k]) / h, rise = r_[k + 1] - r_[k];
  const double a = h * slope_[0][k], b = h * slope_[1][k];
  return sum_[k] +
         h * t * (r_[k] + t * (a / 2.0 + t * ((3.0 * rise - 2.0 * a - b) / 3.0 + t * (a + b - 2.0 * rise) / 4.0)));
}

bool ends_of_motion(const Difference& d, double amplitude, double& low, double& high) {
  double from = d.begin(), to = d.end() - 2 * amplitude;
  if (to < from) return false;
  const auto imbalance = [&](double at) { return d.sum(at + 2 * amplitude) - d.sum(at); };
  if (imbalance(from) > 0 || imbalance(to) < 0) return false;
  for (int k = 0; k < 60 && to - from > 1e-13; ++k) {
    const double middle = 0.5 * (from + to);
    (imbalance(middle) > 0 ? to : from) = middle;
  }
  low = 0.5 * (from + to);
  high = low + 2 * amplitude;
  return true;
}

double kinematic_wavelength_mm(const Difference& d, double low, double high, double running_distance, double radius) {
  // Substitution y = middle + A sin(theta) takes the singular ends away; pieces are integrated by Gauss's rule each.
  const double middle = 0.5 * (low + high), amplitude = 0.5 * (high - low), scale = running_distance * radius;
  const double top = 0.5 * (d.sum(low) + d.sum(high));
  const std::size_t last = d.piece(high);
  double sum = 0, begin = -std::numbers::pi / 2;
  for (std::size_t k = d.piece(low); k <= last; ++k) {
    const double s = (d.places()[k + 1] - middle) / amplitude;
    const double end = k == last || s >= 1.0 ? std::numbers::pi / 2 : std::asin(std::max(s, -1.0));
    const double half = 0.5 * (end - begin), centre = 0.5 * (end + begin);
    for (std::size_t i = 0; i < kNodes.size(); ++i) {
      const double theta = centre + half * kNodes[i];
      const double energy = (top - d.sum(k, middle + amplitude * std::sin(theta))) / scale;
      if (energy > 0) sum += kWeights[i] * half * amplitude * std::cos(theta) / std::sqrt(2 * energy);
    }
    begin = end;
  }
  return 2 * sum;
}

double conicity_by_regression(const Difference& d, double amplitude) {
  double top = 0;
  const std::size_t last = d.piece(amplitude);
  for (std::size_t k = d.piece(-amplitude); k <= last; ++k) {
    const double a = std::max(d.places()[k], -amplitude), b = std::min(d.places()[k + 1], amplitude);
    if (b <= a) continue;
    for (std::size_t i = 0; i < kNodes.size(); ++i) {
      const double y = 0.5 * (a + b) + 0.5 * (b - a) * kNodes[i];
      top += kWeights[i] * 0.5 * (b - a) * y * d.value(k, y);
    }
  }
  return top / (2.0 / 3.0 * amplitude * amplitude * amplitude) / 2;
}

}  // namespace runband
