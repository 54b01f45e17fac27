// How evenly a contact carries its load: mean pressure, peak over mean, and the area that lies above a share of the peak.
#include "core/analysis/plugin.h"

namespace runband {
namespace {

class MyAnalysis final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "my_analysis";
    d.title = "My analysis";
    d.summary = "Mean pressure of a contact, and how much of its patch lies above a share of the peak.";
    d.scope = Scope::patch;  // run() is called once for each loaded contact
    d.needs = {};            // for example {"force_across"}: then c.inputs.quantity("force_across") holds it
    d.gives = {"mean_pressure", "peak_over_mean", "area_above", "pressure_over_peak"};
    d.parameters = {{"level",
                     "Level",
                     "1",
                     0.5,
                     0.0,
                     1.0,
                     {},
                     "The area is counted where the pressure exceeds this share of the peak.",
                     "a free choice"}};
    d.references = {
        "H. Hertz (1881): of an ellipse the peak is 1.5 times the mean, and 1 - level^2 of its area lies above"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress& progress) const override {
    const Grid& grid = c.patch.grid;
    const double cell_mm2 = grid.dx_mm * grid.ds_mm;
    const double peak_MPa = c.patch.peak_pressure_MPa;
    Field share{"pressure_over_peak", "Pressure over its peak", "1", Field::Kind::scalar, 1, grid, {}, {}, "the patch"};
    double force_N = 0, above_mm2 = 0;
    for (const double pressure_MPa : c.patch.pressure.values) {  // cell (i, j) is values[j * grid.nx + i]
      force_N += pressure_MPa * cell_mm2;
      if (pressure_MPa > p.number("level") * peak_MPa) above_mm2 += cell_mm2;
      share.values.push_back(pressure_MPa / peak_MPa);
    }
    progress.check();  // in long loops: throws when the user asked to stop
    const double mean_MPa = force_N / c.patch.area_mm2;
    AnalysisResult r;
    r.quantities = {{"mean_pressure", "Mean pressure", "MPa", mean_MPa, "force over area of the patch"},
                    {"peak_over_mean", "Peak over mean pressure", "1", peak_MPa / mean_MPa, "the patch"},
                    {"area_above", "Area above the level", "mm2", above_mm2, "cells counted"}};
    r.fields.push_back(std::move(share));
    return r;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::MyAnalysis)
