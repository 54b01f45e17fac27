// Flash temperature of a fast moving source of heat, strip by strip.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/analysis/plugin.h"
#include "core/base/text.h"

namespace runband {
namespace {

class Heat final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "heat";
    d.title = "Heat";
    d.summary = "Flash temperature over the patch and its largest value.";
    d.needs = {"frictional_power"};
    d.gives = {"flash_temperature", "largest_flash_temperature"};
    d.parameters = {
        {"conductivity_W_m_K",
         "Heat conductivity",
         "W/(m K)",
         50.0,
         0.1,
         1000.0,
         {},
         "Of both bodies.",
         "carbon steel (memory)"},
        {"density_kg_m3", "Density", "kg/m3", 7850.0, 100.0, 30000.0, {}, "Of both bodies.", "carbon steel (memory)"},
        {"heat_capacity_J_kg_K",
         "Heat capacity",
         "J/(kg K)",
         480.0,
         10.0,
         10000.0,
         {},
         "Of both bodies.",
         "carbon steel (memory)"},
        {"rail_share",
         "Part of the heat that enters the rail",
         "1",
         0.5,
         0.0,
         1.0,
         {},
         "Half for like materials: both surfaces pass at nearly the same speed.",
         "H. Blok (1937) (memory)"}};
    d.references = {"J. C. Jaeger, Proc. R. Soc. NSW 76 (1942) 203 (memory)",
                    "M. Ertz, K. Knothe, Wear 253 (2002) 498"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress& progress) const override {
    const Grid& g = c.patch.grid;
    const std::vector<double>& power = c.inputs.field("frictional_power").values;
    const double conductivity = p.number("conductivity_W_m_K"),
                 stored = p.number("density_kg_m3") * p.number("heat_capacity_J_kg_K");
    const double effusivity = std::sqrt(conductivity * stored), speed = c.motion.speed_m_s;
    // T(x) = 1 / (beta sqrt(pi V)) * integral over x' > x of q(x') / sqrt(x' - x): what passed the leading edge first is hottest.
    // A cell of constant q from u to u + dx ahead gives 2 (sqrt(u + dx) - sqrt(u)); at the trailing side of the own cell u = 0.
    const double dx_m = g.dx_mm * 1e-3,
                 scale = p.number("rail_share") * 1e6 / (effusivity * std::sqrt(std::numbers::pi * speed));
    std::vector<double> weight(static_cast<std::size_t>(g.nx));
    for (std::size_t k = 0; k < weight.size(); ++k) {
      const double near = static_cast<double>(k) * dx_m;
      weight[k] = 2 * (std::sqrt(near + dx_m) - std::sqrt(near));
    }
    Field temperature{"flash_temperature",
                      "Flash temperature of the rail, at the trailing side of each cell",
                      "K",
                      Field::Kind::scalar,
                      1,
                      g,
                      {},
                      {},
                      "fast moving source on a half-space"};
    double highest = 0;
    for (int j = 0; j < g.ns; ++j) {
      progress.check();
      const double* q = &power[static_cast<std::size_t>(j * g.nx)];
      for (int i = 0; i < g.nx; ++i) {
        double sum = 0;
        for (int k = i; k < g.nx; ++k) sum += q[k] * weight[static_cast<std::size_t>(k - i)];
        temperature.values.push_back(scale * sum);
        highest = std::max(highest, scale * sum);
      }
    }
    const double half = c.zone.ellipse ? c.zone.ellipse->semi_axis_rolling_mm : 0.5 * g.nx * g.dx_mm;
    const double peclet = speed * half * 1e-3 / (2 * conductivity / stored);
    AnalysisResult r;
    r.quantities = {
        {"largest_flash_temperature", "Largest flash temperature of the rail", "K", highest, temperature.from},
        {"peclet_number", "Peclet number", "1", peclet, "V a / (2 kappa)"}};
    r.fields = {std::move(temperature)};
    if (peclet < 10)
      r.cautions.push_back({"slow_source", Severity::caution,
                            "The Peclet number is " + number_text(peclet, 2) +
                                ": heat also flows along and across the patch, and the temperature is overstated."});
    return r;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Heat)
