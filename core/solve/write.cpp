// Solutions as JSON and CSV. Numbers stand in the unit of the key's ending.
#include <algorithm>
#include <nlohmann/json.hpp>
#include <numbers>
#include <sstream>

#include "core/base/file.h"
#include "core/base/text.h"
#include "core/base/version.h"
#include "core/case/case_table.h"
#include "core/solve/solution.h"
#include "core/solve/vtk_xml.h"
#include "core/surface/mesh.h"

namespace runband {

namespace {

using Json = nlohmann::ordered_json;

Json to_json(const toml::node& node) {
  if (const auto* table = node.as_table()) {
    Json object = Json::object();
    for (const auto& [key, value] : *table) object[std::string(key.str())] = to_json(value);
    return object;
  }
  if (const auto* array = node.as_array()) {
    Json list = Json::array();
    for (const auto& value : *array) list.push_back(to_json(value));
    return list;
  }
  if (node.is_boolean()) return *node.value<bool>();
  if (node.is_integer()) return *node.value<int64_t>();
  if (node.is_floating_point()) return *node.value<double>();
  return *node.value<std::string>();
}

const char* severity_name(Severity severity) {
  switch (severity) {
    case Severity::note:
      return "note";
    case Severity::caution:
      return "caution";
    default:
      return "warning";
  }
}

Json cautions_json(const std::vector<Caution>& cautions) {
  Json list = Json::array();
  for (const Caution& c : cautions)
    list.push_back({{"code", c.code}, {"severity", severity_name(c.severity)}, {"text", c.text}});
  return list;
}

Json curve_json(const Curve& c) {
  return {{"title", c.title},   {"x_title", c.x_title},
          {"x_unit", c.x_unit}, {"y_title", c.y_title},
          {"y_unit", c.y_unit}, {"x", c.x},
          {"y", c.y},           {"from", c.from}};
}

Json analysis_json(const AnalysisResult& result) {
  Json object = Json::object();
  for (const Quantity& q : result.quantities)
    object[q.name] = {{"value", q.value}, {"unit", q.unit}, {"title", q.title}, {"from", q.from}};
  if (!result.curves.empty()) {
    Json curves = Json::object();
    for (const Curve& c : result.curves) curves[c.name] = curve_json(c);
    object["curves"] = std::move(curves);
  }
  if (!result.fields.empty()) {
    Json fields = Json::object();
    for (const Field& f : result.fields) {
      const auto [low, high] = std::minmax_element(f.values.begin(), f.values.end());
      Json one = {
          {"title", f.title}, {"unit", f.unit}, {"components", f.components}, {"cells", {f.grid.nx, f.grid.ns}}};
      if (low != f.values.end()) {
        one["min"] = *low;
        one["max"] = *high;
      }
      if (!f.labels.empty()) one["labels"] = f.labels;
      fields[f.name] = std::move(one);
    }
    object["fields"] = std::move(fields);
  }
  if (!result.volumes.empty()) {
    Json volumes = Json::object();
    for (const Volume& v : result.volumes)
      volumes[v.name] = {{"title", v.title}, {"unit", v.unit}, {"cells", {v.grid.nx, v.grid.ns, v.depth_mm.size()}}};
    object["volumes"] = std::move(volumes);
  }
  if (!result.marks.empty()) {
    Json marks = Json::object();
    for (const Mark& m : result.marks)
      marks[m.name] = {{"title", m.title}, {"line", m.is_line}, {"x_mm", m.x_mm}, {"s_mm", m.s_mm}};
    object["marks"] = std::move(marks);
  }
  if (!result.cautions.empty()) object["cautions"] = cautions_json(result.cautions);
  return object;
}

Json analyses_json(const std::map<std::string, AnalysisResult>& analyses) {
  Json object = Json::object();
  for (const auto& [id, result] : analyses) object[id] = analysis_json(result);
  return object;
}

double degrees(double rad) { return rad * 180.0 / std::numbers::pi; }

Json contact_json(const Contact& contact) {
  const ContactZone& z = contact.zone;
  Json j;
  j["side"] = contact.on_bench ? "bench" : side_name(z.side);
  j["zone"] = z.zone;
  j["carries_load"] = z.carries_load;
  if (!contact.on_bench) {
    j["wheel_y_mm"] = z.wheel_y_mm;
    j["wheel_z_mm"] = z.wheel_z_mm;
    j["rail_y_mm"] = z.rail_y_mm;
    j["rail_z_mm"] = z.rail_z_mm;
    j["track_mm"] = {z.track_mm.x(), z.track_mm.y(), z.track_mm.z()};
    j["contact_angle_deg"] = degrees(z.contact_angle_rad);
    j["rolling_radius_mm"] = z.rolling_radius_mm;
    j["gap_mm"] = z.gap_mm;
  }
  j["normal_force_N"] = z.normal_force_N;
  if (!contact.on_bench) {
    j["wheel_curvature_across_per_mm"] = z.curvature.wheel_across_per_mm;
    j["rail_curvature_across_per_mm"] = z.curvature.rail_across_per_mm;
  }
  j["curvature_rolling_per_mm"] = z.curvature.rolling_per_mm;
  j["curvature_across_per_mm"] = z.curvature.across_per_mm;
  if (z.ellipse) {
    const HertzEllipse& e = *z.ellipse;
    j["ellipse"] = {{"semi_axis_rolling_mm", e.semi_axis_rolling_mm},
                    {"semi_axis_across_mm", e.semi_axis_across_mm},
                    {"area_mm2", e.area_mm2()},
                    {"peak_pressure_MPa", e.peak_pressure_MPa},
                    {"approach_mm", e.approach_mm},
                    {"stiffness_N_per_mm", e.stiffness_N_per_mm},
                    {"misfit", z.curvature.misfit}};
  }
  if (contact.patch) {
    const Patch& p = *contact.patch;
    j["patch"] = {{"method", p.method == PatchMethod::hertz ? "hertz" : "half_space"},
                  {"area_mm2", p.area_mm2},
                  {"peak_pressure_MPa", p.peak_pressure_MPa},
                  {"approach_mm", p.approach_mm},
                  {"cells", {p.grid.nx, p.grid.ns}},
                  {"iterations", p.iterations},
                  {"convolutions", p.convolutions},
                  {"solve_ms", p.solve_ms}};
  }
  j["analyses"] = analyses_json(contact.analyses);
  if (!z.cautions.empty()) j["cautions"] = cautions_json(z.cautions);
  return j;
}

std::string dump(const Json& json) { return json.dump(2) + "\n"; }

}  // namespace

std::string solution_json(const Solution& solution) {
  Json j;
  j["runband"] = version();
  j["case"] = to_json(case_table(solution.asked));
  if (!solution.asked.bench) {
    j["state"] = {{"lateral_mm", solution.pose.lateral_mm},
                  {"lateral_reference", solution.pose.reference == LateralReference::axle ? "axle" : "rail"},
                  {"yaw_mrad", solution.pose.yaw_rad * 1e3},
                  {"roll_mrad", solution.pose.roll_rad * 1e3},
                  {"height_mm", solution.pose.height_mm}};
  }
  j["contacts"] = Json::array();
  for (const Contact& contact : solution.contacts) j["contacts"].push_back(contact_json(contact));
  j["analyses"] = analyses_json(solution.analyses);
  j["cautions"] = cautions_json(solution.cautions);
  j["solve_ms"] = solution.solve_ms;
  return dump(j);
}

std::string traverse_json(const Traverse& t) {
  Json j;
  j["runband"] = version();
  j["case"] = to_json(case_table(t.asked));
  j["lateral_mm"] = t.lateral_mm;
  j["rolling_radius_difference_mm"] = t.rolling_radius_difference_mm;
  j["roll_mrad"] = t.roll_mrad;
  j["height_mm"] = t.height_mm;
  for (const auto& [name, side] : {std::pair<const char*, const SideTraverse&>{"left", t.left}, {"right", t.right}}) {
    j[name] = {{"contact_angle_deg", side.contact_angle_deg},
               {"rolling_radius_mm", side.rolling_radius_mm},
               {"wheel_y_mm", side.wheel_y_mm},
               {"rail_y_mm", side.rail_y_mm}};
  }
  j["jumps"] = Json::array();
  for (const ContactJump& jump : t.jumps) {
    j["jumps"].push_back({{"side", side_name(jump.side)},
                          {"lateral_mm", jump.lateral_mm},
                          {"wheel_y_from_mm", jump.wheel_y_from_mm},
                          {"wheel_y_to_mm", jump.wheel_y_to_mm}});
  }
  j["analyses"] = analyses_json(t.analyses);
  j["cautions"] = cautions_json(t.cautions);
  return dump(j);
}

std::string solution_csv(const Solution& solution) {
  std::ostringstream csv;
  csv << "side,zone,carries_load,wheel_y_mm,wheel_z_mm,rail_y_mm,rail_z_mm,track_x_mm,track_y_mm,track_z_mm,contact_"
         "angle_deg,rolling_radius_mm,gap_mm,"
         "normal_force_N,curvature_rolling_per_mm,curvature_across_per_mm,semi_axis_rolling_mm,semi_axis_across_mm,"
         "ellipse_area_mm2,"
         "ellipse_peak_pressure_MPa,ellipse_approach_mm,ellipse_misfit,patch_method,patch_area_mm2,patch_peak_pressure_"
         "MPa,patch_approach_mm\n";
  for (const Contact& contact : solution.contacts) {
    const ContactZone& z = contact.zone;
    const auto number = [&](double value) { csv << ',' << number_text(value); };
    csv << (contact.on_bench ? "bench" : side_name(z.side)) << ',' << z.zone << ',' << (z.carries_load ? 1 : 0);
    for (double v : {z.wheel_y_mm, z.wheel_z_mm, z.rail_y_mm, z.rail_z_mm, z.track_mm.x(), z.track_mm.y(),
                     z.track_mm.z(), degrees(z.contact_angle_rad), z.rolling_radius_mm, z.gap_mm, z.normal_force_N,
                     z.curvature.rolling_per_mm, z.curvature.across_per_mm})
      number(v);
    if (z.ellipse) {
      for (double v : {z.ellipse->semi_axis_rolling_mm, z.ellipse->semi_axis_across_mm, z.ellipse->area_mm2(),
                       z.ellipse->peak_pressure_MPa, z.ellipse->approach_mm, z.curvature.misfit})
        number(v);
    } else {
      csv << ",,,,,,";
    }
    if (contact.patch) {
      csv << ',' << (contact.patch->method == PatchMethod::hertz ? "hertz" : "half_space");
      for (double v : {contact.patch->area_mm2, contact.patch->peak_pressure_MPa, contact.patch->approach_mm})
        number(v);
    } else {
      csv << ",,,,";
    }
    csv << '\n';
  }
  return std::move(csv).str();
}

std::string traverse_csv(const Traverse& t) {
  std::ostringstream csv;
  csv << "lateral_mm,rolling_radius_difference_mm,roll_mrad,height_mm";
  for (const char* side : {"left", "right"}) {
    csv << ',' << side << "_contact_angle_deg," << side << "_rolling_radius_mm," << side << "_wheel_y_mm," << side
        << "_rail_y_mm";
  }
  csv << '\n';
  for (std::size_t i = 0; i < t.lateral_mm.size(); ++i) {
    csv << number_text(t.lateral_mm[i]) << ',' << number_text(t.rolling_radius_difference_mm[i]) << ','
        << number_text(t.roll_mrad[i]) << ',' << number_text(t.height_mm[i]);
    for (const SideTraverse* side : {&t.left, &t.right}) {
      csv << ',' << number_text(side->contact_angle_deg[i]) << ',' << number_text(side->rolling_radius_mm[i]) << ','
          << number_text(side->wheel_y_mm[i]) << ',' << number_text(side->rail_y_mm[i]);
    }
    csv << '\n';
  }
  return std::move(csv).str();
}

void write_solution(const Solution& solution, const std::filesystem::path& folder) {
  write_file(folder / "solution.json", solution_json(solution));
  write_file(folder / "contacts.csv", solution_csv(solution));
  write_file(folder / "case.toml", write_case(solution.asked));
  std::map<std::string, int> seen;
  for (const Contact& contact : solution.contacts) {
    if (!contact.patch) continue;
    std::string name = contact.on_bench
                           ? "patch_bench"
                           : std::string("patch_") + side_name(contact.zone.side) + "_" + contact.zone.zone;
    std::replace(name.begin(), name.end(), ' ', '_');
    if (const int n = ++seen[name]; n > 1) name += "_" + std::to_string(n);
    std::vector<Field> fields{contact.patch->pressure};
    std::vector<Volume> volumes;
    for (const auto& [id, result] : contact.analyses) {
      for (Field field : result.fields) {
        field.name = id + "." + field.name;
        if (field.grid == contact.patch->grid) fields.push_back(std::move(field));
      }
      for (Volume volume : result.volumes) {
        volume.name = id + "." + volume.name;
        volumes.push_back(std::move(volume));
      }
    }
    write_patch_vti(folder / (name + ".vti"), contact.patch->grid, fields);
    for (const Volume& volume : volumes) write_volume_vtr(folder / (name + "_" + volume.name + ".vtr"), volume);
  }
  if (solution.locator == nullptr) return;
  const Pairing& pairing = solution.locator->pairing();
  constexpr double kRailHalfLength = 300.0;
  for (const Side side : {Side::left, Side::right}) {
    const std::string name = side_name(side);
    write_mesh(folder / ("rail_" + name + ".vtp"),
               rail_mesh(pairing.rail(side), -kRailHalfLength, kRailHalfLength, {.chord_error_mm = 0.05}));
    write_mesh(folder / ("wheel_" + name + ".vtp"),
               wheel_mesh(pairing.wheel(side), pairing.rolling_radius_mm(side), {.chord_error_mm = 0.1}));
  }
}

}  // namespace runband
