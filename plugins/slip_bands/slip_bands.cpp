// Stick and slip over the patch, and the creep forces that follow.
#include <algorithm>
#include <chrono>
#include <cmath>

#include "core/analysis/plugin.h"
#include "core/base/error.h"
#include "core/halfspace/creep_laws.h"
#include "core/halfspace/rolling.h"
#include "core/halfspace/simplified.h"

namespace runband {
namespace {

using namespace halfspace;

class SlipBands final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "slip_bands";
    d.title = "Slip bands";
    d.summary = "Tractions, stick and slip areas, slip velocity, creep forces and spin moment.";
    d.needs = {"rigid_slip", "longitudinal_creepage", "lateral_creepage", "spin"};
    d.gives = {"force_rolling", "force_across", "saturation"};
    d.parameters = {
        {"method",
         "Method",
         "",
         std::string("auto"),
         {},
         {},
         {"auto", "half_space", "simplified", "vermeulen_johnson", "shen_hedrick_elkins", "polach"},
         "auto takes the half-space for a half-space patch, else the simplified theory.",
         ""},
        {"tolerance", "Tolerance", "1", 1e-6, 1e-10, 1e-2, {}, "Of the half-space solution's friction law.", ""}};
    d.references = {"J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990)",
                    "J. J. Kalker, Vehicle System Dynamics 11 (1982) 1-13"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress& progress) const override {
    const auto start = std::chrono::steady_clock::now();
    std::string method = p.text("method");
    if (method == "auto") method = c.patch.method == PatchMethod::half_space ? "half_space" : "simplified";
    AnalysisResult r;
    const ElasticPair elastic = elastic_pair(c.material);
    double along = 0, across = 0, convolutions = 0;
    if (method == "half_space" || method == "simplified") {
      const RollingResult solved = fields_of(c, p, method, elastic, progress);
      along = solved.force_rolling_N;
      across = solved.force_across_N;
      convolutions = solved.convolutions;
      r.quantities.push_back({"moment_normal", "Spin moment", "N mm", solved.moment_normal_Nmm, method});
      add_fields(c, solved, method, r);
      if (const auto caution = mismatch_caution(elastic)) r.cautions.push_back(*caution);
    } else {
      const CreepForces forces = law(c, method, elastic);
      along = forces.rolling_N;
      across = forces.across_N;
    }
    const double limit = c.friction * c.zone.normal_force_N;
    if (c.zone.ellipse && limit > 0) r.curves.push_back(creep_curve(c, elastic));
    r.quantities.push_back({"force_rolling", "Creep force in rolling", "N", along, method});
    r.quantities.push_back({"force_across", "Creep force across", "N", across, method});
    r.quantities.push_back({"saturation", "Share of the friction limit used", "1",
                            limit > 0 ? std::hypot(along, across) / limit : 0.0, method});
    r.quantities.push_back({"convolutions", "Convolutions", "1", convolutions, method});
    r.quantities.push_back({"solve_time", "Solution time", "ms",
                            std::chrono::duration<double, std::milli>(std::chrono::steady_clock::now() - start).count(),
                            method});
    return r;
  }

 private:
  /// Force over the creepage, the state's creepages growing together from none to full slip, by the cubic law of Shen,
  /// Hedrick and Elkins: cheap enough to be there always, whatever method gives the state itself.
  static Curve creep_curve(const PatchContext& c, const ElasticPair& elastic) {
    const HertzEllipse& e = *c.zone.ellipse;
    Curve curve{"creep_curve",
                "Creep force over creepage",
                "creepage over that of this state",
                "1",
                "share of the friction limit",
                "1",
                {},
                {},
                "Shen, Hedrick and Elkins 1983"};
    const auto coefficients = creep_coefficients(e.semi_axis_rolling_mm / e.semi_axis_across_mm, elastic.poisson_ratio);
    const double limit = c.friction * c.zone.normal_force_N;
    for (int k = 0; k <= 60; ++k) {
      const double part = 0.05 * k;
      const CreepForces f = shen_hedrick_elkins(
          {e.semi_axis_rolling_mm, e.semi_axis_across_mm, c.zone.normal_force_N, c.friction, elastic.shear_modulus_MPa,
           elastic.poisson_ratio, part * c.inputs.quantity("longitudinal_creepage"),
           part * c.inputs.quantity("lateral_creepage"), part * c.inputs.quantity("spin")},
          coefficients);
      curve.x.push_back(part);
      curve.y.push_back(std::hypot(f.rolling_N, f.across_N) / limit);
    }
    return curve;
  }

  static const HertzEllipse& ellipse_of(const PatchContext& c, const std::string& method) {
    if (c.zone.ellipse) return *c.zone.ellipse;
    throw InputError(ErrorCode::conflicting_keys, method + " needs an ellipse, and this patch has none.",
                     "use method half_space.");
  }

  static RollingResult fields_of(const PatchContext& c, const Parameters& p, const std::string& method,
                                 const ElasticPair& elastic, const Progress& progress) {
    RollingProblem problem;
    problem.grid = c.patch.grid;
    problem.pressure_MPa = c.patch.pressure.values;
    problem.friction = {c.friction};
    problem.slip = c.inputs.field("rigid_slip").values;
    problem.elastic = elastic;
    if (c.patch.method == PatchMethod::hertz && c.zone.ellipse)
      problem.area_fraction =
          ellipse_fraction(c.patch.grid, c.zone.ellipse->semi_axis_rolling_mm, c.zone.ellipse->semi_axis_across_mm);
    if (method == "half_space") {
      RollingOptions options;
      options.tolerance = p.number("tolerance");
      return solve_rolling(problem, options, progress);
    }
    const HertzEllipse& e = ellipse_of(c, method);
    const auto coefficients = creep_coefficients(e.semi_axis_rolling_mm / e.semi_axis_across_mm, elastic.poisson_ratio);
    const Flexibility soft =
        flexibility(e.semi_axis_rolling_mm, e.semi_axis_across_mm, elastic.shear_modulus_MPa, coefficients);
    RollingResult result = simplified_rolling(problem, soft);
    if (c.patch.method == PatchMethod::hertz) {
      // The ellipse's own strips follow its outline, which whole cells do not: forces from them, fields from the cells.
      SimplifiedEllipse ellipse{e.semi_axis_rolling_mm, e.semi_axis_across_mm, c.zone.normal_force_N, c.friction, soft};
      ellipse.bound = TractionBound::elliptic;
      ellipse.longitudinal = c.inputs.quantity("longitudinal_creepage");
      ellipse.lateral = c.inputs.quantity("lateral_creepage");
      ellipse.spin_per_mm = c.inputs.quantity("spin");
      ellipse.strips = ellipse.elements = std::max(c.patch.grid.nx, c.patch.grid.ns);
      const SimplifiedForces forces = simplified_forces(ellipse);
      result.force_rolling_N = forces.force_rolling_N;
      result.force_across_N = forces.force_across_N;
      result.moment_normal_Nmm = forces.moment_normal_Nmm;
    }
    return result;
  }

  static CreepForces law(const PatchContext& c, const std::string& method, const ElasticPair& elastic) {
    const HertzEllipse& e = ellipse_of(c, method);
    const CreepContact contact{e.semi_axis_rolling_mm,
                               e.semi_axis_across_mm,
                               c.zone.normal_force_N,
                               c.friction,
                               elastic.shear_modulus_MPa,
                               elastic.poisson_ratio,
                               c.inputs.quantity("longitudinal_creepage"),
                               c.inputs.quantity("lateral_creepage"),
                               c.inputs.quantity("spin")};
    if (method == "vermeulen_johnson") return vermeulen_johnson(contact);
    const auto coefficients = creep_coefficients(e.semi_axis_rolling_mm / e.semi_axis_across_mm, elastic.poisson_ratio);
    if (method == "shen_hedrick_elkins") return shen_hedrick_elkins(contact, coefficients);
    return polach(contact, coefficients);
  }

  static void add_fields(const PatchContext& c, const RollingResult& solved, const std::string& method,
                         AnalysisResult& r) {
    const Grid& g = c.patch.grid;
    r.fields.push_back(
        {"traction", "Traction on the wheel", "MPa", Field::Kind::vector, 2, g, solved.traction_MPa, {}, method});
    r.fields.push_back(
        {"slip", "Slip, wheel minus rail over V", "1", Field::Kind::vector, 2, g, solved.slip, {}, method});
    Field state{"adhesion", "Stick and slip", "", Field::Kind::label, 1, g, {}, {"open", "stick", "slip"}, method};
    double in_contact = 0, slipping = 0;
    for (const RollingState s : solved.state) {
      state.values.push_back(static_cast<double>(s));
      in_contact += s != RollingState::open;
      slipping += s == RollingState::slip;
    }
    r.fields.push_back(std::move(state));
    r.quantities.push_back({"slip_area_fraction", "Slipping part of the patch", "1",
                            in_contact > 0 ? slipping / in_contact : 0.0, method});
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::SlipBands)
