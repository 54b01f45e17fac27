#include "core/case/case.h"

#include <algorithm>
#include <cmath>
#include <sstream>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/case/carried.h"
#include "core/case/toml_section.h"

namespace runband {

namespace {

const std::vector<std::string> kSections = {"title",    "track", "wheelset", "wheel",    "rail",
                                            "state",    "load",  "material", "friction", "patch",
                                            "creepage", "bench", "analyses", "plate"};

/// "1:40" or the slope itself, as an angle.
std::optional<double> read_inclination(TomlSection& track) {
  const toml::node* found = track.node("inclination");
  if (found == nullptr) return std::nullopt;
  double slope = NAN;
  if (found->is_number()) {
    slope = *track.number("inclination");
  } else if (found->is_string()) {
    const std::string text = *found->value<std::string>();
    const auto colon = text.find(':');
    if (colon != std::string::npos) {
      const auto rise = parse_number(text.substr(0, colon));
      const auto run = parse_number(text.substr(colon + 1));
      if (rise && run && *run != 0) slope = *rise / *run;
    }
  }
  if (!std::isfinite(slope) || std::abs(slope) > 0.2) {
    throw InputError(ErrorCode::out_of_range,
                     track.where("inclination") + " must be a slope of at most 1:5, such as \"1:40\" or 0.025.",
                     "write inclination = \"1:40\", or 0 for upright rails.");
  }
  return std::atan(slope);
}

void read_track(TomlSection section, TrackGeometry& track) {
  if (auto v = section.number_in("gauge_mm", 300, 3000, "mm")) track.gauge_mm = *v;
  if (auto v = section.number_in("gauge_depth_mm", 1, 40, "mm")) track.gauge_depth_mm = *v;
  track.inclination_rad = read_inclination(section).value_or(std::atan(1.0 / 40.0));
  if (auto v = section.number("curve_radius_m")) {
    if (*v != 0 && std::abs(*v) < 10) {
      throw InputError(ErrorCode::out_of_range,
                       section.where("curve_radius_m") + " is " + number_text(*v) + " m; a curve has at least 10 m.",
                       "write 0 for straight track; positive turns left.");
    }
    track.curve_radius_m = *v;
  }
  if (auto v = section.number_in("cant_mm", -300, 300, "mm")) track.cant_mm = *v;
  section.finish();
}

void read_wheelset(TomlSection section, WheelsetGeometry& wheelset) {
  if (auto v = section.number_in("back_to_back_mm", 200, 3000, "mm")) wheelset.back_to_back_mm = *v;
  if (auto v = section.number_in("running_circle_offset_mm", 20, 150, "mm")) wheelset.running_circle_offset_mm = *v;
  if (auto v = section.number_in("rolling_radius_mm", 50, 2000, "mm")) wheelset.rolling_radius_mm = {*v, *v};
  if (auto v = section.number_in("left_rolling_radius_mm", 50, 2000, "mm")) wheelset.rolling_radius_mm[0] = *v;
  if (auto v = section.number_in("right_rolling_radius_mm", 50, 2000, "mm")) wheelset.rolling_radius_mm[1] = *v;
  section.finish();
}

void read_profile_keys(TomlSection& section, ProfileRequest& request) {
  if (auto v = section.text("profile")) request.profile = *v;
  if (auto v = section.number_in("noise_mm", 0, 1, "mm")) request.options.noise_mm = *v;
  if (auto v = section.choice("unit", {"mm", "m", "um", "in"})) request.options.unit = *v;
  if (auto v = section.choice("y_axis", {"field", "gauge"})) request.options.y_axis = *v;
  if (auto v = section.choice("z_axis", {"up", "down"})) request.options.z_axis = *v;
}

void read_profiles(TomlSection section, const std::string& what, ProfileRequest (&requests)[2]) {
  ProfileRequest both;
  read_profile_keys(section, both);
  requests[0] = requests[1] = both;
  const char* const sides[2] = {"left", "right"};
  for (int i = 0; i < 2; ++i) {
    TomlSection own = section.section(sides[i]);
    read_profile_keys(own, requests[i]);
    own.finish();
  }
  section.finish();
  for (int i = 0; i < 2; ++i) {
    if (!requests[i].profile.empty()) continue;
    throw InputError(ErrorCode::missing_key,
                     section.where("profile") + " is missing: the " + sides[i] + " " + what + " has no profile.",
                     "add [" + what + "] profile = \"standard:" + (what == "wheel" ? "S1002" : "60E1") +
                         "\" or the name of a file.");
  }
}

void read_state(TomlSection section, StateRequest& state) {
  if (auto v = section.numbers("lateral_mm")) {
    for (double lateral : *v) {
      if (std::abs(lateral) > 100)
        throw InputError(
            ErrorCode::out_of_range,
            section.where("lateral_mm") + " is " + number_text(lateral) + " mm; it must lie between -100 and 100 mm.",
            "positive moves the wheelset to the left.");
    }
    state.lateral_mm = *v;
  }
  if (auto v = section.number_in("yaw_mrad", -100, 100, "mrad")) state.yaw_mrad = *v;
  if (auto v = section.number_in("speed_m_s", 0.001, 200, "m/s")) state.speed_m_s = *v;
  if (auto v = section.choice("lateral_reference", {"axle", "rail"}))
    state.reference = *v == "axle" ? LateralReference::axle : LateralReference::rail;
  section.finish();
}

void read_load(TomlSection section, WheelLoads& load) {
  if (auto v = section.number_in("wheel_N", 1, 1e7, "N")) load.vertical_N = {*v, *v};
  if (auto v = section.number_in("left_N", 1, 1e7, "N")) load.vertical_N[0] = *v;
  if (auto v = section.number_in("right_N", 1, 1e7, "N")) load.vertical_N[1] = *v;
  section.finish();
}

void read_elastic(TomlSection& section, Material& material) {
  if (auto v = section.number_in("youngs_modulus_MPa", 1, 1e7, "MPa")) material.youngs_modulus_MPa = *v;
  if (auto v = section.number_in("poisson_ratio", 0, 0.5, "1")) material.poisson_ratio = *v;
}

void read_material(TomlSection section, MaterialPair& material) {
  Material both;
  read_elastic(section, both);
  material.wheel = material.rail = both;
  TomlSection wheel = section.section("wheel");
  read_elastic(wheel, material.wheel);
  wheel.finish();
  TomlSection rail = section.section("rail");
  read_elastic(rail, material.rail);
  rail.finish();
  material.hardness_MPa = section.number_in("hardness_MPa", 1, 1e6, "MPa");
  material.shear_yield_MPa = section.number_in("shear_yield_MPa", 1, 1e6, "MPa");
  section.finish();
}

BenchRequest read_bench(TomlSection section) {
  BenchRequest bench;
  bench.gap_file = section.text("gap_file").value_or("");
  const auto rolling = section.number_in("curvature_rolling_per_mm", 1e-9, 1e3, "1/mm");
  const auto across = section.number_in("curvature_across_per_mm", 1e-9, 1e3, "1/mm");
  const auto force = section.number_in("normal_force_N", 1e-6, 1e9, "N");
  section.finish();
  const auto missing = [&](const std::string& key) {
    return InputError(ErrorCode::missing_key, section.where(key) + " is missing.",
                      "a bench contact needs curvature_rolling_per_mm, curvature_across_per_mm (1/R summed over both "
                      "bodies) and normal_force_N.");
  };
  if (!force) throw missing("normal_force_N");
  if (bench.gap_file.empty()) {
    if (!rolling) throw missing("curvature_rolling_per_mm");
    if (!across) throw missing("curvature_across_per_mm");
  } else if (rolling || across) {
    throw InputError(ErrorCode::conflicting_keys, section.where("gap_file") + " and the curvatures exclude each other.",
                     "keep either the gap file or the two curvatures.");
  }
  bench.curvature_rolling_per_mm = rolling.value_or(0);
  bench.curvature_across_per_mm = across.value_or(0);
  bench.normal_force_N = *force;
  return bench;
}

std::map<std::string, std::map<std::string, ParameterValue>> read_analyses(TomlSection section) {
  std::map<std::string, std::map<std::string, ParameterValue>> all;
  if (!section.present()) return all;
  for (const auto& [id, node] : *section.table()) {
    const std::string name(id.str());
    TomlSection one = section.section(name);
    auto& parameters = all[name];
    for (const auto& [key, value] : *one.table()) {
      const std::string parameter(key.str());
      if (value.is_number())
        parameters[parameter] = *one.number(parameter);
      else if (value.is_boolean())
        parameters[parameter] = *one.boolean(parameter);
      else if (value.is_string())
        parameters[parameter] = *one.text(parameter);
      else
        throw InputError(ErrorCode::wrong_type,
                         one.where(parameter) + " must be a number, true or false, or a text in quotes.", "");
    }
  }
  return all;
}

PlateRequest read_plate(TomlSection section) {
  PlateRequest plate;
  plate.plate = section.choice("plate", {"section", "patch", "scene", "traverse"}).value_or("");
  plate.file = section.text("file").value_or("");
  plate.size = section.text("size").value_or(plate.size);
  plate.dpi = section.number_in("dpi", 10, 2400, "dpi").value_or(plate.dpi);
  plate.theme = section.choice("theme", {"paper", "light", "dark"}).value_or(plate.theme);
  section.finish();
  if (plate.plate.empty())
    throw InputError(ErrorCode::missing_key, section.where("plate") + " is missing.",
                     "add plate = \"patch\" (or section, scene, traverse).");
  return plate;
}

/// Puts "section.key=value" into the table, as if the file said so.
void apply_setting(toml::table& table, const std::string& setting) {
  const auto refuse = [&](const std::string& why) {
    return InputError(ErrorCode::bad_option, "--set " + setting + ": " + why + ".",
                      "write --set section.key=value, for example --set track.gauge_mm=1437.");
  };
  const auto equals = setting.find('=');
  if (equals == std::string::npos || equals == 0) throw refuse("there is no key=value");
  std::string path = setting.substr(0, equals);
  const std::string value_text = setting.substr(equals + 1);
  if (value_text.empty()) throw refuse("the value is empty");
  std::vector<std::string> parts;
  std::istringstream stream(path);
  for (std::string part; std::getline(stream, part, '.');) parts.push_back(part);
  if (parts.empty() || path.back() == '.') throw refuse("the key is empty");
  for (const std::string& part : parts)
    if (part.empty()) throw refuse("the key is empty");
  // "slip_bands.tolerance" means analyses.slip_bands.tolerance.
  if (parts.size() == 2 && std::find(kSections.begin(), kSections.end(), parts[0]) == kSections.end())
    parts.insert(parts.begin(), "analyses");

  toml::table parsed;
  try {
    parsed = toml::parse("value = " + value_text, std::string("--set"));
  } catch (const toml::parse_error&) {
    parsed.insert("value", value_text);  // a bare word is a text
  }
  if (parsed.size() != 1) throw refuse("the value is more than one value");
  toml::table* here = &table;
  for (std::size_t i = 0; i + 1 < parts.size(); ++i) {
    toml::node* next = here->get(parts[i]);
    if (next == nullptr) {
      here->insert(parts[i], toml::table{});
      next = here->get(parts[i]);
    }
    if (!next->is_table()) throw refuse(parts[i] + " is not a section");
    here = next->as_table();
  }
  here->insert_or_assign(parts.back(), std::move(*parsed.get("value")));
}

}  // namespace

Case parse_case(const std::string& toml_text, const std::string& origin, const std::filesystem::path& folder,
                const std::vector<std::string>& settings) {
  toml::table table = parse_toml(toml_text, origin);
  for (const std::string& setting : settings) apply_setting(table, setting);

  Case c;
  c.origin = origin;
  c.folder = folder;
  TomlSection top(&table, origin, "");
  c.title = top.text("title").value_or("");
  if (top.has("bench")) {
    for (const char* other : {"track", "wheelset", "wheel", "rail"}) {
      if (top.has(other))
        throw InputError(ErrorCode::conflicting_keys,
                         top.where(other) + ": [bench] is one contact without a wheelset, so [" + std::string(other) +
                             "] has no place beside it.",
                         "remove [bench] or [" + std::string(other) + "].");
    }
    c.bench = read_bench(top.section("bench"));
  } else {
    read_track(top.section("track"), c.track);
    read_wheelset(top.section("wheelset"), c.wheelset);
    read_profiles(top.section("wheel"), "wheel", c.wheels);
    read_profiles(top.section("rail"), "rail", c.rails);
  }
  read_state(top.section("state"), c.state);
  read_load(top.section("load"), c.load);
  read_material(top.section("material"), c.material);
  TomlSection friction = top.section("friction");
  if (auto v = friction.number_in("coefficient", 0, 2, "1")) c.friction = *v;
  friction.finish();
  TomlSection patch = top.section("patch");
  if (auto v = patch.choice("method", {"hertz", "half_space"}))
    c.patch.method = *v == "hertz" ? PatchMethod::hertz : PatchMethod::half_space;
  if (auto v = patch.integer_in("cells", 8, 512)) c.patch.cells = static_cast<int>(*v);
  patch.finish();
  TomlSection creepage = top.section("creepage");
  c.creepage.longitudinal = creepage.number_in("longitudinal", -1, 1, "1");
  c.creepage.lateral = creepage.number_in("lateral", -1, 1, "1");
  c.creepage.spin_per_mm = creepage.number_in("spin_per_mm", -1, 1, "1/mm");
  creepage.finish();
  c.analyses = read_analyses(top.section("analyses"));
  for (TomlSection& plate : top.sections("plate")) c.plates.push_back(read_plate(plate));
  top.finish();
  if (c.bench && !c.bench->gap_file.empty() && c.patch.method == PatchMethod::hertz)
    c.patch.method = PatchMethod::half_space;
  return c;
}

Case load_case(const std::filesystem::path& file, const std::vector<std::string>& settings) {
  const std::string bytes = read_file(file);
  return parse_case(carried_case(bytes, file.string()).value_or(bytes), file.string(), file.parent_path(), settings);
}

}  // namespace runband
