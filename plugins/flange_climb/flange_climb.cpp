// Nadal's limit, and how much of it a contact uses.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/analysis/plugin.h"

namespace runband {
namespace {

/// Y/Q at which the flange begins to climb. Source: M. J. Nadal, Locomotives a vapeur (1908).
double nadal(double angle_rad, double friction) {
  const double t = std::tan(angle_rad);
  return (t - friction) / (1 + friction * t);
}

/// d(Y/Q) / d(friction) of the above.
double per_friction(double angle_rad, double friction) {
  const double t = std::tan(angle_rad), below = 1 + friction * t;
  return -(1 + t * t) / (below * below);
}

constexpr double kFlange_rad = 0.5;  // no tread is that steep

class FlangeClimb final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "flange_climb";
    d.title = "Flange climb";
    d.summary = "Nadal's limit of lateral over vertical force, and its use by the contact's forces.";
    d.needs = {"force_across"};
    d.gives = {"lateral_over_vertical", "nadal_limit"};
    d.parameters = {{"friction_spread",
                     "Spread of friction",
                     "1",
                     0.1,
                     0.0,
                     1.0,
                     {},
                     "The limit is also given for friction lower and higher by this.",
                     ""}};
    d.references = {"M. J. Nadal (1908)"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress&) const override {
    const double angle = c.zone.contact_angle_rad;
    const double n = c.zone.normal_force_N, s = c.inputs.quantity("force_across");
    // In the wheel's cross-section: outward and up. The normal leans to the gauge side by the contact angle.
    const double outward = -n * std::sin(angle) + s * std::cos(angle);
    const double up = n * std::cos(angle) + s * std::sin(angle);
    const double ratio = up > 0 ? -outward / up : 0.0;  // positive pushes the flange against the rail
    const double limit = nadal(angle, c.friction);
    AnalysisResult r;
    const std::string from = "Nadal 1908, friction " + std::to_string(c.friction).substr(0, 4);
    r.quantities = {{"lateral_over_vertical", "Lateral over vertical force, Y/Q", "1", ratio,
                     "normal and creep force of the contact"},
                    {"nadal_limit", "Nadal's limit", "1", limit, from},
                    {"nadal_limit_low_friction", "Nadal's limit, friction lower by the spread", "1",
                     nadal(angle, std::max(0.0, c.friction - p.number("friction_spread"))), from},
                    {"nadal_limit_high_friction", "Nadal's limit, friction higher by the spread", "1",
                     nadal(angle, c.friction + p.number("friction_spread")), from}};
    const double low = std::max(0.0, c.friction - p.number("friction_spread")),
                 high = c.friction + p.number("friction_spread");
    r.quantities.push_back({"nadal_limit_per_friction", "Change of Nadal's limit with friction", "1",
                            per_friction(angle, c.friction), from});
    const auto used = [&](const char* name, const char* title, double at) {
      if (at > 0) r.quantities.push_back({name, title, "1", ratio / at, from});
    };
    used("climb_limit_used", "Climb limit used", limit);
    used("climb_limit_used_low_friction", "Climb limit used, friction lower by the spread", nadal(angle, low));
    used("climb_limit_used_high_friction", "Climb limit used, friction higher by the spread", nadal(angle, high));
    if (!c.on_bench && angle < kFlange_rad)
      r.cautions.push_back(
          {"not_on_the_flange", Severity::note,
           "This contact lies off the flange: Nadal's limit is meant for the flange, and for the forces "
           "of the whole wheel."});
    Curve over_friction{"nadal_limit_over_friction",
                        "Nadal's limit at this contact angle",
                        "friction",
                        "1",
                        "Y/Q",
                        "1",
                        {},
                        {},
                        "Nadal 1908"};
    for (int k = 0; k <= 16; ++k) {
      over_friction.x.push_back(0.05 * k);
      over_friction.y.push_back(nadal(angle, 0.05 * k));
    }
    r.curves.push_back(std::move(over_friction));
    Curve curve{"nadal_limit_over_angle", "Nadal's limit", "contact angle", "deg", "Y/Q", "1", {}, {}, from};
    for (int deg = 40; deg <= 80; ++deg) {
      curve.x.push_back(deg);
      curve.y.push_back(nadal(deg * std::numbers::pi / 180, c.friction));
    }
    r.curves.push_back(std::move(curve));
    r.cautions.push_back({"not_a_derailment_verdict", Severity::caution,
                          "Nadal's limit is not a safety acceptance: derailment is judged by the applicable standards "
                          "(over distance, for the vehicle) and licensed practice."});
    return r;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::FlangeClimb)
