// Shakedown map, surface fatigue index and damage function.
#include <algorithm>
#include <array>
#include <cmath>

#include "core/analysis/plugin.h"

namespace runband {
namespace {

/// Elastic shakedown limit p0/k of a rolling and sliding line contact: one over the largest orthogonal shear (closed form of the
/// sliding line contact, maximised with 10 digits), and 1/mu where the surface decides, from 0.3672 on.
/// Source: K. L. Johnson, Contact Mechanics (1985), section 9.2, whose 0.367 it reproduces.
double shakedown_limit(double friction) {
  constexpr std::array<double, 8> kLimit{4,           3.771814666, 3.564208651, 3.375043759,
                                         3.202364604, 3.044403259, 2.899574689, 2.766466045};
  constexpr double kStep = 0.05, kSurface = 0.3672;
  if (friction >= kSurface) return 1 / friction;
  const double place = friction / kStep;
  const auto k = std::min<std::size_t>(static_cast<std::size_t>(place), kLimit.size() - 1);
  if (k + 1 == kLimit.size()) {  // from 0.35 to where the surface takes over
    const double t = (friction - 0.35) / (kSurface - 0.35);
    return kLimit[k] + t * (1 / kSurface - kLimit[k]);
  }
  return kLimit[k] + (place - static_cast<double>(k)) * (kLimit[k + 1] - kLimit[k]);
}

/// Burstow 2004 (memory): 1e-6 of a life per axle pass over the wear number.
double damage(double wear_number) {
  if (wear_number < 15) return 0;
  if (wear_number < 65) return 0.2 * (wear_number - 15);
  return 10 - 10.0 / 110 * (wear_number - 65);
}

class Fatigue final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "fatigue";
    d.title = "Fatigue";
    d.summary = "Shakedown map, surface fatigue index and the damage function on wear number.";
    d.needs = {"force_rolling", "force_across", "wear_number"};
    d.gives = {"load_factor", "friction_used", "surface_fatigue_index"};
    d.parameters = {{"shear_yield_MPa",
                     "Yield stress in shear, k",
                     "MPa",
                     300.0,
                     50.0,
                     2000.0,
                     {},
                     "Of the weaker body, work-hardened; the case's material.shear_yield_MPa wins.",
                     "(memory)"}};
    d.references = {"K. L. Johnson, Contact Mechanics (1985), section 9.2",
                    "A. R. S. Ponter, A. D. Hearle, K. L. Johnson, J. Mech. Phys. Solids 33 (1985) 339",
                    "A. Ekberg, E. Kabo, H. Andersson, Fatigue Fract. Eng. Mater. Struct. 25 (2002) 899 (memory)",
                    "M. Burstow, damage function on wear number (2004) (memory)"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress&) const override {
    const double k = c.material.shear_yield_MPa.value_or(p.number("shear_yield_MPa"));
    const double used =
        std::hypot(c.inputs.quantity("force_rolling"), c.inputs.quantity("force_across")) / c.zone.normal_force_N;
    const double factor = c.patch.peak_pressure_MPa / k, limit = shakedown_limit(used);
    AnalysisResult r;
    r.quantities = {{"load_factor", "Load factor p0/k", "1", factor, ""},
                    {"friction_used", "Friction used, F/N", "1", used, ""},
                    {"shakedown_limit", "Elastic shakedown limit of p0/k", "1", limit, "line contact"},
                    {"shakedown_used", "Shakedown limit used", "1", factor / limit, "line contact"},
                    {"surface_fatigue_index", "Surface fatigue index", "1", used - k / c.patch.peak_pressure_MPa,
                     "mu - k/p0; damage above 0"},
                    {"damage_per_pass", "Damage in one axle pass", "1e-6", damage(c.inputs.quantity("wear_number")),
                     "below 0: wear takes the cracks away"}};
    Curve curve{"shakedown_limit_over_friction",
                "Elastic shakedown limit",
                "friction used",
                "1",
                "p0/k",
                "1",
                {},
                {},
                "line contact"};
    for (int i = 0; i <= 60; ++i) {
      curve.x.push_back(i * 0.01);
      curve.y.push_back(shakedown_limit(i * 0.01));
    }
    r.curves.push_back(std::move(curve));
    r.cautions.push_back({"fatigue_is_an_indication", Severity::caution,
                          "An indication, not a life: rolling contact fatigue is judged by inspection, the applicable "
                          "standards and licensed practice."});
    return r;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Fatigue)
