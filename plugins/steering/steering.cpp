// Equivalent conicity and what follows from the rolling radius difference.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/analysis/plugin.h"
#include "core/base/error.h"

namespace runband {
namespace {

/// Rolling radius difference over lateral displacement, split where a contact jumps, with its integral.
struct Difference {
  std::vector<double> y, r;  // a jump is two points with the same y
  std::vector<double> sum;   // integral of r from y.front(), exact for straight pieces

  double at_sum(double where) const {
    const auto k = piece(where);
    const double t = y[k + 1] > y[k] ? (where - y[k]) / (y[k + 1] - y[k]) : 0.0;
    return sum[k] + (where - y[k]) * (r[k] + 0.5 * t * (r[k + 1] - r[k]));
  }
  double at(double where) const {
    const auto k = piece(where);
    const double t = y[k + 1] > y[k] ? (where - y[k]) / (y[k + 1] - y[k]) : 0.0;
    return r[k] + t * (r[k + 1] - r[k]);
  }
  std::size_t piece(double where) const {
    auto k = static_cast<std::size_t>(std::upper_bound(y.begin(), y.end(), where) - y.begin());
    k = std::clamp<std::size_t>(k, 1, y.size() - 1);
    return k - 1;
  }
};

constexpr double kStep = 0.02;        // mm, of the table
constexpr double kBesideJump = 2e-6;  // mm, from a jump to the last sample before it

Difference tabulate(const WheelsetContext& c, double most_mm, const Progress& progress) {
  const auto difference = [&](double y) -> std::optional<double> {
    try {
      const RigidContact contact = c.locator.rigid(y, c.motion.yaw_rad, c.reference);
      return contact.touch[0].rolling_radius_mm - contact.touch[1].rolling_radius_mm;
    } catch (const InputError&) {
      return std::nullopt;  // beyond the flange
    }
  };
  double low = 0, high = 0;
  while (high + kStep <= most_mm + 1e-9 && difference(high + kStep)) high += kStep;
  while (low - kStep >= -most_mm - 1e-9 && difference(low - kStep)) low -= kStep;
  std::vector<double> places;
  const int count = static_cast<int>(std::lround((high - low) / kStep));
  for (int i = 0; i <= count; ++i) places.push_back(low + i * kStep);
  progress.check();
  for (const ContactJump& jump : c.locator.jumps(low, high, c.motion.yaw_rad, c.reference)) {
    places.push_back(jump.lateral_mm - kBesideJump);
    places.push_back(jump.lateral_mm + kBesideJump);
  }
  std::sort(places.begin(), places.end());
  Difference d;
  for (const double y : places) {
    if (y < low || y > high) continue;
    d.y.push_back(y);
    d.r.push_back(*difference(y));
  }
  d.sum.assign(d.y.size(), 0.0);
  for (std::size_t k = 1; k < d.y.size(); ++k)
    d.sum[k] = d.sum[k - 1] + 0.5 * (d.y[k] - d.y[k - 1]) * (d.r[k] + d.r[k - 1]);
  return d;
}

/// Ends of the motion of total width 2 A in the potential well of `d`: equal integrals at both. False if it does not fit.
bool ends_of_motion(const Difference& d, double amplitude, double& low, double& high) {
  double from = d.y.front(), to = d.y.back() - 2 * amplitude;
  if (to < from) return false;
  const auto imbalance = [&](double at) { return d.at_sum(at + 2 * amplitude) - d.at_sum(at); };
  if (imbalance(from) > 0 || imbalance(to) < 0) return false;
  for (int k = 0; k < 200 && to - from > 1e-13; ++k) {
    const double middle = 0.5 * (from + to);
    (imbalance(middle) > 0 ? to : from) = middle;
  }
  low = 0.5 * (from + to);
  high = low + 2 * amplitude;
  return true;
}

/// Wavelength of y'' + r(y) / (e r0) = 0 between low and high. Substitution y = middle + A sin(theta) takes the
/// singular ends away; the pieces of the table are integrated by Gauss's rule each.
double wavelength_mm(const Difference& d, double low, double high, double running_distance, double radius) {
  const double middle = 0.5 * (low + high), amplitude = 0.5 * (high - low), scale = running_distance * radius;
  const double top = 0.5 * (d.at_sum(low) + d.at_sum(high));
  std::vector<double> cuts{-std::numbers::pi / 2};
  for (const double y : d.y) {
    const double s = (y - middle) / amplitude;
    if (s > -1 && s < 1) cuts.push_back(std::asin(s));
  }
  cuts.push_back(std::numbers::pi / 2);
  constexpr double kNode = 0.57735026918962576451;  // Gauss-Legendre, two points
  double sum = 0;
  for (std::size_t k = 1; k < cuts.size(); ++k) {
    const double half = 0.5 * (cuts[k] - cuts[k - 1]), centre = 0.5 * (cuts[k] + cuts[k - 1]);
    for (const double node : {-kNode, kNode}) {
      const double theta = centre + half * node;
      const double energy = (top - d.at_sum(middle + amplitude * std::sin(theta))) / scale;
      if (energy > 0) sum += half * amplitude * std::cos(theta) / std::sqrt(2 * energy);
    }
  }
  return 2 * sum;
}

/// Half the slope of the straight line through the difference over the whole motion.
double by_regression(const Difference& d, double amplitude) {
  double top = 0, bottom = 0;
  for (std::size_t k = 1; k < d.y.size(); ++k) {
    const double a = std::max(d.y[k - 1], -amplitude), b = std::min(d.y[k], amplitude);
    if (b <= a) continue;
    const double m = 0.5 * (a + b);  // Simpson: exact for the cubics that straight pieces give
    top += (b - a) / 6 * (a * d.at(a) + 4 * m * d.at(m) + b * d.at(b));
    bottom += (b - a) / 6 * (a * a + 4 * m * m + b * b);
  }
  return top / bottom / 2;
}

class Steering final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "steering";
    d.title = "Steering";
    d.summary = "Equivalent conicity over amplitude, kinematic wavelength, and what the curve needs.";
    d.scope = Scope::wheelset;
    d.gives = {"equivalent_conicity", "conicity_by_regression"};
    d.parameters = {{"largest_amplitude_mm",
                     "Largest amplitude",
                     "mm",
                     6.0,
                     1.0,
                     12.0,
                     {},
                     "Amplitudes 1, 1.5, 2 ... up to here, as far as the flange allows.",
                     ""},
                    {"running_circle_distance_mm",
                     "Distance of the running circles",
                     "mm",
                     1500.0,
                     300.0,
                     3000.0,
                     {},
                     "2e of the definition.",
                     "EN 15302 (memory)"}};
    d.references = {"EN 15302, equivalent conicity",
                    "J. Klingel, Organ Fortschritte des Eisenbahnwesens 38 (1883) 113 (memory)",
                    "F. J. Redtenbacher (1855), pure rolling in a curve (memory)"};
    return d;
  }

  AnalysisResult run(const WheelsetContext& c, const Parameters& p, const Progress& progress) const override {
    const double distance = p.number("running_circle_distance_mm"), most = p.number("largest_amplitude_mm");
    const auto& radii = c.locator.pairing().wheelset().rolling_radius_mm;
    const double radius = 0.5 * (radii[0] + radii[1]);
    const Difference d = tabulate(c, most + 1.0, progress);
    AnalysisResult r;
    const std::string level = c.reference == LateralReference::axle ? "lateral displacement at the axle centre"
                                                                    : "lateral displacement at rail level";
    Curve conicity{"equivalent_conicity",
                   "Equivalent conicity",
                   "amplitude",
                   "mm",
                   "equivalent conicity",
                   "1",
                   {},
                   {},
                   "integration of the kinematic motion, " + level};
    Curve regression{"conicity_by_regression",
                     "Equivalent conicity by linear regression",
                     "amplitude",
                     "mm",
                     "equivalent conicity",
                     "1",
                     {},
                     {},
                     level};
    Curve wavelength{
        "kinematic_wavelength", "Kinematic wavelength", "amplitude", "mm", "wavelength", "m", {}, {}, level};
    for (double amplitude = 1.0; amplitude <= most + 1e-9; amplitude += 0.5) {
      progress.check();
      double low = 0, high = 0;
      if (!ends_of_motion(d, amplitude, low, high)) continue;
      const double lambda = wavelength_mm(d, low, high, distance, radius);
      if (!std::isfinite(lambda) || lambda <= 0) continue;
      const double gamma = 2 * std::pow(std::numbers::pi / lambda, 2) * distance * radius;
      conicity.x.push_back(amplitude);
      conicity.y.push_back(gamma);
      wavelength.x.push_back(amplitude);
      wavelength.y.push_back(lambda * 1e-3);
      regression.x.push_back(amplitude);
      regression.y.push_back(by_regression(d, amplitude));
      if (amplitude == 3.0) {
        r.quantities.push_back({"conicity_at_3_mm", "Equivalent conicity at 3 mm", "1", gamma, conicity.from});
        r.quantities.push_back({"frequency_at_3_mm", "Kinematic frequency at 3 mm", "Hz",
                                c.motion.speed_m_s / (lambda * 1e-3), conicity.from});
      }
    }
    if (conicity.x.empty()) {
      r.cautions.push_back({"no_kinematic_motion", Severity::caution,
                            "No amplitude has a kinematic motion: the rolling radius difference does not bring the "
                            "wheelset back to the middle."});
    }
    const double here = c.pose.lateral_mm;
    if (here >= d.y.front() && here <= d.y.back()) {
      const double available = d.at(here);
      r.quantities.push_back({"radius_difference", "Rolling radius difference", "mm", available, level});
      if (available != 0)
        r.quantities.push_back({"free_rolling_curve", "Curve rolled freely, + turns left", "m",
                                -radius * distance / available * 1e-3, "Redtenbacher 1855"});
    }
    if (c.motion.curve_radius_m != 0)
      r.quantities.push_back({"radius_difference_needed", "Radius difference that the curve needs", "mm",
                              -radius * distance / (c.motion.curve_radius_m * 1e3), "Redtenbacher 1855"});
    r.curves = {std::move(conicity), std::move(regression), std::move(wavelength)};
    return r;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Steering)
