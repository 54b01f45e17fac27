// Equivalent conicity and what follows from the rolling radius difference.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/analysis/plugin.h"
#include "plugins/steering/difference.h"

namespace runband {
namespace {

constexpr double kGravity_m_s2 = 9.80665;
constexpr double kBeyond_mm = 0.2;   // swept beyond the largest amplitude...
constexpr double kFurther_mm = 1.5;  // ...and so far where the motion is not centred

/// Titles that the results of one run share.
struct Names {
  std::string level, integration;
};

class Steering final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "steering";
    d.title = "Steering";
    d.summary = "Equivalent conicity over amplitude, kinematic wavelength, and what the curve needs.";
    d.scope = Scope::wheelset;
    d.gives = {"equivalent_conicity", "conicity_by_regression", "kinematic_wavelength"};
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
                     "EN 15302 (memory)"},
                    {"centre_of_gravity_mm",
                     "Height of the centre of gravity",
                     "mm",
                     1500.0,
                     0.0,
                     4000.0,
                     {},
                     "Of what rests on the axle, above the rails: shares the axle load between the wheels in a curve.",
                     "common practice, no source"}};
    d.references = {"EN 15302, equivalent conicity",
                    "J. Klingel, Organ Fortschritte des Eisenbahnwesens 38 (1883) 113 (memory)",
                    "F. J. Redtenbacher (1855), pure rolling in a curve (memory)"};
    return d;
  }

  AnalysisResult run(const WheelsetContext& c, const Parameters& p, const Progress& progress) const override {
    const double distance = p.number("running_circle_distance_mm"), most = p.number("largest_amplitude_mm");
    const auto& radii = c.locator.pairing().wheelset().rolling_radius_mm;
    const double radius = 0.5 * (radii[0] + radii[1]);
    Names names;
    names.level = c.reference == LateralReference::axle ? "lateral displacement at the axle centre"
                                                        : "lateral displacement at rail level";
    names.integration = "integration of the kinematic motion, " + names.level;
    AnalysisResult r;
    progress.check();
    RigidSweep sweep = c.locator.sweep(-most - kBeyond_mm, most + kBeyond_mm, c.motion.yaw_rad, c.reference);
    Difference d(sweep);
    double low = 0, high = 0;
    if (!ends_of_motion(d, most, low, high) && widen(c, most, sweep)) d = Difference(sweep);
    over_amplitude(c, d, names, radius, distance, most, progress, r);
    in_the_curve(c, d, names, radius, distance, r);
    balance_of_the_curve(c, p, distance, r);
    Curve difference{"radius_difference_over_lateral",
                     "Rolling radius difference",
                     "lateral displacement",
                     "mm",
                     "rolling radius difference",
                     "mm",
                     d.places(),
                     d.values(),
                     names.level};
    r.curves.push_back(std::move(difference));
    return r;
  }

 private:
  /// Sweeps further, to the sides on which there still is contact. False if there is none.
  static bool widen(const WheelsetContext& c, double most, RigidSweep& sweep) {
    const double from = most + kBeyond_mm, to = most + kFurther_mm;
    bool wider = false;
    auto& contacts = sweep.contacts;
    if (contacts.back().pose.lateral_mm >= from) {
      const auto more = c.locator.sweep(from, to, c.motion.yaw_rad, c.reference).contacts;
      contacts.insert(contacts.end(), more.begin() + 1, more.end());
      wider = true;
    }
    if (contacts.front().pose.lateral_mm <= -from) {
      const auto more = c.locator.sweep(-to, -from, c.motion.yaw_rad, c.reference).contacts;
      contacts.insert(contacts.begin(), more.begin(), more.end() - 1);
      wider = true;
    }
    return wider;
  }

  static void over_amplitude(const WheelsetContext& c, const Difference& d, const Names& names, double radius,
                             double distance, double most, const Progress& progress, AnalysisResult& r) {
    const auto curve = [&](const char* name, const char* title, const char* y_title, const char* unit,
                           const std::string& from) {
      return Curve{name, title, "amplitude", "mm", y_title, unit, {}, {}, from};
    };
    Curve conicity = curve("equivalent_conicity", "Equivalent conicity", "equivalent conicity", "1", names.integration);
    Curve regression = curve("conicity_by_regression", "Equivalent conicity by linear regression",
                             "equivalent conicity", "1", names.level);
    Curve wavelength = curve("kinematic_wavelength", "Kinematic wavelength", "wavelength", "m", names.level);
    Curve frequency = curve("kinematic_frequency", "Kinematic frequency at speed", "frequency", "Hz", names.level);
    for (double amplitude = 1.0; amplitude <= most + 1e-9; amplitude += 0.5) {
      progress.check();
      double low = 0, high = 0;
      if (!ends_of_motion(d, amplitude, low, high)) continue;
      const double lambda = kinematic_wavelength_mm(d, low, high, distance, radius);
      if (!std::isfinite(lambda) || lambda <= 0) continue;
      const double gamma = 2 * std::pow(std::numbers::pi / lambda, 2) * distance * radius;
      const double hertz = c.motion.speed_m_s / (lambda * 1e-3);
      conicity.x.push_back(amplitude);
      conicity.y.push_back(gamma);
      wavelength.x.push_back(amplitude);
      wavelength.y.push_back(lambda * 1e-3);
      frequency.x.push_back(amplitude);
      frequency.y.push_back(hertz);
      if (d.begin() <= -amplitude && d.end() >= amplitude) {
        regression.x.push_back(amplitude);
        regression.y.push_back(conicity_by_regression(d, amplitude));
      }
      if (amplitude == 3.0) {
        r.quantities.push_back({"conicity_at_3_mm", "Equivalent conicity at 3 mm", "1", gamma, names.integration});
        r.quantities.push_back(
            {"wavelength_at_3_mm", "Kinematic wavelength at 3 mm", "m", lambda * 1e-3, names.integration});
        r.quantities.push_back({"frequency_at_3_mm", "Kinematic frequency at 3 mm", "Hz", hertz, names.integration});
      }
    }
    if (conicity.x.empty()) {
      r.cautions.push_back({"no_kinematic_motion", Severity::caution,
                            "No amplitude has a kinematic motion: the rolling radius difference does not bring the "
                            "wheelset back to the middle."});
    }
    r.curves = {std::move(conicity), std::move(regression), std::move(wavelength), std::move(frequency)};
  }

  /// What the wheelset rolls freely where it stands, and what the given curve asks.
  static void in_the_curve(const WheelsetContext& c, const Difference& d, const Names& names, double radius,
                           double distance, AnalysisResult& r) {
    const std::string redtenbacher = "Redtenbacher 1855";
    const double here = c.pose.lateral_mm;
    if (here >= d.begin() && here <= d.end()) {
      const double present = d.at(here);
      r.quantities.push_back({"radius_difference", "Rolling radius difference", "mm", present, names.level});
      constexpr double kRounding_mm = 1e-9;
      if (std::abs(present) > kRounding_mm)
        r.quantities.push_back({"free_rolling_curve", "Curve rolled freely, + turns left", "m",
                                -radius * distance / present * 1e-3, redtenbacher});
    }
    if (c.motion.curve_radius_m == 0) return;
    const double needed = -radius * distance / (c.motion.curve_radius_m * 1e3);
    // The most that the wheelset has in the sense of the curve, wherever it moves before a flange climbs.
    double most = 0;
    for (const double value : d.values())
      if (value * needed > 0 && std::abs(value) > std::abs(most)) most = value;
    r.quantities.push_back(
        {"radius_difference_needed", "Radius difference that the curve needs", "mm", needed, redtenbacher});
    r.quantities.push_back({"radius_difference_available",
                            "Radius difference that the wheelset has in the curve's sense", "mm", most, names.level});
    // Nearest to the middle first.
    std::optional<double> met;
    for (std::size_t k = 1; k < d.places().size(); ++k) {
      double y0 = d.places()[k - 1], y1 = d.places()[k];
      const double first = d.values()[k - 1] - needed, last = d.values()[k] - needed;
      if (first * last > 0) continue;
      for (int n = 0; n < 50; ++n) {
        const double half = 0.5 * (y0 + y1);
        ((d.value(k - 1, half) - needed) * first > 0 ? y0 : y1) = half;
      }
      if (!met || std::abs(y1) < std::abs(*met)) met = y1;
    }
    if (met) {
      r.quantities.push_back(
          {"lateral_for_needed", "Lateral displacement that gives the needed difference", "mm", *met, names.level});
    } else {
      r.cautions.push_back({"curve_too_tight", Severity::caution,
                            "The wheelset has no lateral position whose rolling radius difference rolls this curve "
                            "freely; it creeps along the rails all the way."});
    }
  }

  /// Speed, radius and cant together: what is left of the lateral acceleration, and how it shares the axle load.
  static void balance_of_the_curve(const WheelsetContext& c, const Parameters& p, double distance, AnalysisResult& r) {
    if (c.motion.curve_radius_m == 0) return;
    const double curve_m = std::abs(c.motion.curve_radius_m), v = c.motion.speed_m_s;
    const double sine = std::clamp(c.motion.cant_mm / distance, -1.0, 1.0), cosine = std::sqrt(1 - sine * sine);
    const double unbalanced = v * v / curve_m * cosine - kGravity_m_s2 * sine;
    const double axle_N = c.load.vertical_N[0] + c.load.vertical_N[1];
    const double moved_N = axle_N * unbalanced / kGravity_m_s2 * p.number("centre_of_gravity_mm") / distance;
    const std::string from = "quasi-static equilibrium in the curve; the case's own wheel loads are left as they are";
    r.quantities.push_back(
        {"unbalanced_acceleration", "Unbalanced lateral acceleration, + outward", "m/s2", unbalanced, from});
    r.quantities.push_back(
        {"cant_deficiency", "Cant deficiency, - is excess", "mm", distance * unbalanced / kGravity_m_s2, from});
    if (sine > 0)
      r.quantities.push_back({"balancing_speed", "Speed at which the cant balances the curve", "m/s",
                              std::sqrt(curve_m * kGravity_m_s2 * sine / cosine), from});
    r.quantities.push_back({"lateral_force_unbalanced", "Lateral force that the axle load asks of the track, + outward",
                            "N", axle_N * unbalanced / kGravity_m_s2, from});
    r.quantities.push_back({"outer_wheel_load", "Outer wheel load in balance", "N", axle_N / 2 + moved_N, from});
    r.quantities.push_back({"inner_wheel_load", "Inner wheel load in balance", "N", axle_N / 2 - moved_N, from});
    if (std::abs(moved_N) >= axle_N / 2)
      r.cautions.push_back({"wheel_unloaded", Severity::warning,
                            "Speed, radius and cant take all load from one wheel. This is no statement on safety "
                            "against overturning, which the applicable standards judge."});
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Steering)
