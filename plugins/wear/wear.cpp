// Frictional power, wear number and wear of wheel and rail.
#include <cmath>
#include <numbers>

#include "core/analysis/plugin.h"

namespace runband {
namespace {

class Wear final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "wear";
    d.title = "Wear";
    d.summary = "Frictional power, wear number, and wear of wheel and rail by two laws.";
    d.needs = {"force_rolling", "force_across", "longitudinal_creepage", "lateral_creepage", "spin",
               "traction",      "slip"};
    d.gives = {"frictional_power", "wear_number", "power"};
    const std::string map = "Jendel, Wear 253 (2002) 86 (memory)",
                      law = "Braghin et al., Wear 261 (2006) 1253 (memory)";
    d.parameters = {
        {"hardness_MPa", "Hardness of the softer body", "MPa", 3000.0, 100.0, 20000.0, {}, "Archard's H.", map},
        {"archard_mild",
         "Archard's coefficient, mild",
         "1",
         5e-4,
         0.0,
         1.0,
         {},
         "Slip speed below the first or above the second bound.",
         map},
        {"archard_severe",
         "Archard's coefficient, severe",
         "1",
         3.5e-3,
         0.0,
         1.0,
         {},
         "Slip speed between the bounds.",
         map},
        {"archard_seizure",
         "Archard's coefficient, seizure",
         "1",
         3.5e-2,
         0.0,
         1.0,
         {},
         "Pressure above 0.8 of the hardness.",
         map},
        {"slip_speed_low_m_s", "First bound of slip speed", "m/s", 0.2, 0.0, 100.0, {}, "Mild wear below.", map},
        {"slip_speed_high_m_s", "Second bound of slip speed", "m/s", 0.7, 0.0, 100.0, {}, "Mild wear above.", map},
        {"loss_mild",
         "Mass loss, mild",
         "ug/(m N)",
         5.3,
         0.0,
         1e4,
         {},
         "Times wear number over area, below the first bound.",
         law},
        {"loss_plateau", "Mass loss, plateau", "ug/(m mm2)", 55.0, 0.0, 1e6, {}, "Between the bounds.", law},
        {"loss_catastrophic",
         "Mass loss, catastrophic",
         "ug/(m N)",
         61.9,
         0.0,
         1e4,
         {},
         "Slope above the second bound.",
         law},
        {"loss_first_bound", "First bound", "N/mm2", 10.4, 0.0, 1e4, {}, "Of wear number over area.", law},
        {"loss_second_bound", "Second bound", "N/mm2", 77.2, 0.0, 1e4, {}, "Of wear number over area.", law}};
    d.references = {"J. F. Archard, J. Appl. Phys. 24 (1953) 981", map, law};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress&) const override {
    const Grid& g = c.patch.grid;
    const std::vector<double>& traction = c.inputs.field("traction").values;
    const std::vector<double>& slip = c.inputs.field("slip").values;
    const double cell = g.dx_mm * g.ds_mm, speed = c.motion.speed_m_s;
    Field power{"frictional_power",
                "Frictional power",
                "W/mm2",
                Field::Kind::scalar,
                1,
                g,
                {},
                {},
                "traction times slip times speed"};
    Curve per_pass{
        "wear_depth_per_pass",    "Wear depth of the rail in one pass", "across, s", "mm", "wear depth", "nm", {}, {},
        "Archard with a wear map"};
    Curve wheel{"wheel_wear_1000_km",
                "Wear depth of the wheel in 1000 km",
                "across, s",
                "mm",
                "wear depth",
                "mm",
                {},
                {},
                "Archard with a wear map, this state all the way"};
    const double passes = 1e9 / (2 * std::numbers::pi * c.zone.rolling_radius_mm);
    double dissipated = 0, worn = 0;  // N (J/m); mm^2 of section a pass
    for (int j = 0; j < g.ns; ++j) {
      double depth = 0;  // mm a pass of this strip
      for (int i = 0; i < g.nx; ++i) {
        const auto k = static_cast<std::size_t>(j * g.nx + i);
        const double pressure = c.patch.pressure.values[k];
        const double w = std::hypot(slip[2 * k], slip[2 * k + 1]);
        const double rate =
            pressure > 0 ? std::max(0.0, -(traction[2 * k] * slip[2 * k] + traction[2 * k + 1] * slip[2 * k + 1]))
                         : 0.0;
        power.values.push_back(rate * speed);
        dissipated += rate * cell;
        if (pressure > 0 && rate > 0)
          depth += archard(p, w * speed, pressure) * pressure * w * g.dx_mm / p.number("hardness_MPa");
      }
      worn += depth * g.ds_mm;
      per_pass.x.push_back(g.s(j));
      per_pass.y.push_back(depth * 1e6);
      wheel.x.push_back(g.s(j));
      wheel.y.push_back(depth * passes);
    }
    const double from_forces = -(c.inputs.quantity("force_rolling") * c.inputs.quantity("longitudinal_creepage") +
                                 c.inputs.quantity("force_across") * c.inputs.quantity("lateral_creepage"));
    const double intensity = c.patch.area_mm2 > 0 ? dissipated / c.patch.area_mm2 : 0.0;
    AnalysisResult r;
    r.quantities = {
        {"power", "Frictional power", "W", dissipated * speed, "sum of the field"},
        {"wear_number", "Wear number T\u03b3", "N", dissipated, "sum of traction times slip"},
        {"wear_number_from_forces", "Wear number from forces and creepages", "N", from_forces, "without spin"},
        {"wear_number_over_area", "Wear number over patch area", "N/mm2", intensity, ""},
        {"worn_section_per_pass", "Section worn off the rail in one pass", "mm2", worn, "Archard with a wear map"},
        {"mass_loss_1000_km", "Mass lost in 1000 km", "g", loss(p, intensity) * c.patch.area_mm2,
         "mass loss law on T\u03b3/A"}};
    r.curves = {std::move(per_pass), std::move(wheel)};
    r.fields = {std::move(power)};
    r.cautions.push_back({"wear_is_a_rate", Severity::caution,
                          "A wear rate of this one state with coefficients from dry tests; wear limits are set by the "
                          "applicable standards and licensed practice."});
    return r;
  }

 private:
  static double archard(const Parameters& p, double slip_speed, double pressure) {
    if (pressure > 0.8 * p.number("hardness_MPa")) return p.number("archard_seizure");
    const bool severe = slip_speed >= p.number("slip_speed_low_m_s") && slip_speed <= p.number("slip_speed_high_m_s");
    return p.number(severe ? "archard_severe" : "archard_mild");
  }

  /// Mass loss, ug per m rolled and mm2, of the wear number over area; continuous at the second bound.
  static double loss(const Parameters& p, double intensity) {
    if (intensity < p.number("loss_first_bound")) return p.number("loss_mild") * intensity;
    if (intensity <= p.number("loss_second_bound")) return p.number("loss_plateau");
    return p.number("loss_plateau") + p.number("loss_catastrophic") * (intensity - p.number("loss_second_bound"));
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Wear)
