#include "core/case/case_table.h"

#include <cmath>
#include <sstream>

namespace runband {

namespace {

toml::table profile_table(const ProfileRequest& request) {
  toml::table t;
  t.insert("profile", request.profile);
  if (request.options.noise_mm) t.insert("noise_mm", *request.options.noise_mm);
  if (!request.options.unit.empty()) t.insert("unit", request.options.unit);
  if (!request.options.y_axis.empty()) t.insert("y_axis", request.options.y_axis);
  if (!request.options.z_axis.empty()) t.insert("z_axis", request.options.z_axis);
  return t;
}

toml::table elastic_table(const Material& m) {
  return toml::table{{"youngs_modulus_MPa", m.youngs_modulus_MPa}, {"poisson_ratio", m.poisson_ratio}};
}

toml::table analyses_table(const Case& c) {
  toml::table all;
  for (const auto& [id, parameters] : c.analyses) {
    toml::table one;
    for (const auto& [key, value] : parameters) std::visit([&, &k = key](const auto& v) { one.insert(k, v); }, value);
    all.insert(id, std::move(one));
  }
  return all;
}

}  // namespace

toml::table case_table(const Case& c) {
  toml::table t;
  t.insert("title", c.title);
  if (c.bench) {
    toml::table bench;
    if (c.bench->gap_file.empty()) {
      bench.insert("curvature_rolling_per_mm", c.bench->curvature_rolling_per_mm);
      bench.insert("curvature_across_per_mm", c.bench->curvature_across_per_mm);
    } else {
      bench.insert("gap_file", c.bench->gap_file);
    }
    bench.insert("normal_force_N", c.bench->normal_force_N);
    t.insert("bench", std::move(bench));
  } else {
    t.insert("track", toml::table{{"gauge_mm", c.track.gauge_mm},
                                  {"gauge_depth_mm", c.track.gauge_depth_mm},
                                  {"inclination", std::tan(c.track.inclination_rad)},
                                  {"curve_radius_m", c.track.curve_radius_m},
                                  {"cant_mm", c.track.cant_mm}});
    t.insert("wheelset", toml::table{{"back_to_back_mm", c.wheelset.back_to_back_mm},
                                     {"running_circle_offset_mm", c.wheelset.running_circle_offset_mm},
                                     {"left_rolling_radius_mm", c.wheelset.rolling_radius_mm[0]},
                                     {"right_rolling_radius_mm", c.wheelset.rolling_radius_mm[1]}});
    t.insert("wheel", toml::table{{"left", profile_table(c.wheels[0])}, {"right", profile_table(c.wheels[1])}});
    t.insert("rail", toml::table{{"left", profile_table(c.rails[0])}, {"right", profile_table(c.rails[1])}});
  }
  toml::table state{{"yaw_mrad", c.state.yaw_mrad},
                    {"speed_m_s", c.state.speed_m_s},
                    {"lateral_reference", c.state.reference == LateralReference::axle ? "axle" : "rail"}};
  if (c.state.lateral_mm.size() == 1) {
    state.insert("lateral_mm", c.state.lateral_mm.front());
  } else {
    toml::array values;
    for (double v : c.state.lateral_mm) values.push_back(v);
    state.insert("lateral_mm", std::move(values));
  }
  t.insert("state", std::move(state));
  t.insert("load", toml::table{{"left_N", c.load.vertical_N[0]}, {"right_N", c.load.vertical_N[1]}});
  toml::table material{{"wheel", elastic_table(c.material.wheel)}, {"rail", elastic_table(c.material.rail)}};
  if (c.material.hardness_MPa) material.insert("hardness_MPa", *c.material.hardness_MPa);
  if (c.material.shear_yield_MPa) material.insert("shear_yield_MPa", *c.material.shear_yield_MPa);
  t.insert("material", std::move(material));
  t.insert("friction", toml::table{{"coefficient", c.friction}});
  t.insert("patch", toml::table{{"method", c.patch.method == PatchMethod::hertz ? "hertz" : "half_space"},
                                {"cells", c.patch.cells}});
  toml::table creepage;
  if (c.creepage.longitudinal) creepage.insert("longitudinal", *c.creepage.longitudinal);
  if (c.creepage.lateral) creepage.insert("lateral", *c.creepage.lateral);
  if (c.creepage.spin_per_mm) creepage.insert("spin_per_mm", *c.creepage.spin_per_mm);
  if (!creepage.empty()) t.insert("creepage", std::move(creepage));
  if (!c.analyses.empty()) t.insert("analyses", analyses_table(c));
  if (!c.plates.empty()) {
    toml::array plates;
    for (const PlateRequest& p : c.plates)
      plates.push_back(
          toml::table{{"plate", p.plate}, {"file", p.file}, {"size", p.size}, {"dpi", p.dpi}, {"theme", p.theme}});
    t.insert("plate", std::move(plates));
  }
  return t;
}

std::string write_case(const Case& c) {
  std::ostringstream stream;
  stream << toml::toml_formatter(case_table(c)) << '\n';
  return std::move(stream).str();
}

}  // namespace runband
