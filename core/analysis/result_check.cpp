#include "core/analysis/result_check.h"

#include <algorithm>
#include <cmath>
#include <set>

#include "core/base/text.h"

namespace runband {

namespace {

bool is_lower(char c) { return c >= 'a' && c <= 'z'; }

/// Lower-case letters, digits and _; with units, which keep their capitals, also upper-case ones (hardness_MPa).
bool is_name(const std::string& name, bool with_units) {
  const auto belongs = [&](char c) {
    return is_lower(c) || (c >= '0' && c <= '9') || c == '_' || (with_units && c >= 'A' && c <= 'Z');
  };
  return !name.empty() && is_lower(name.front()) && std::all_of(name.begin(), name.end(), belongs);
}

std::string not_a_name(const std::string& what, const std::string& name) {
  return what + " \"" + name + "\" is not a name in snake_case (letters, digits and _, a small letter first).";
}

bool finite(const std::vector<double>& values) {
  return std::all_of(values.begin(), values.end(), [](double v) { return std::isfinite(v); });
}

std::string shape(const Grid& grid) { return std::to_string(grid.nx) + " x " + std::to_string(grid.ns) + " cells"; }

std::size_t room(const Grid& grid) {
  if (grid.nx < 0 || grid.ns < 0) return 0;
  return static_cast<std::size_t>(grid.nx) * static_cast<std::size_t>(grid.ns);
}

/// Every fault_of_* below returns the end of a sentence that begins with the value's kind and name.
std::string fault_of_field(const Field& f, const Grid* patch_grid) {
  if (f.components < 1) return "has " + std::to_string(f.components) + " components; it needs at least one.";
  const std::size_t wanted = room(f.grid) * static_cast<std::size_t>(f.components);
  if (f.values.size() != wanted)
    return "has " + std::to_string(f.values.size()) + " values where its grid has room for " + std::to_string(wanted) +
           ".";
  if (patch_grid != nullptr && !(f.grid == *patch_grid))
    return room(f.grid) == room(*patch_grid) && f.grid.nx == patch_grid->nx
               ? "lies on a grid of another place or cell size than the patch's."
               : "lies on a grid of " + shape(f.grid) + ", the patch's has " + shape(*patch_grid) + ".";
  if (!finite(f.values)) return "holds a value that is not a number.";
  if (f.kind != Field::Kind::label) return "";
  const auto named = [&](double v) { return v >= 0 && v < static_cast<double>(f.labels.size()) && v == std::floor(v); };
  if (const auto bad = std::find_if_not(f.values.begin(), f.values.end(), named); bad != f.values.end())
    return "holds the label " + number_text(*bad) + ", and has names for " + std::to_string(f.labels.size()) + ".";
  return "";
}

std::string fault_of_curve(const Curve& c) {
  if (c.x.size() != c.y.size())
    return "has " + std::to_string(c.x.size()) + " x and " + std::to_string(c.y.size()) + " y.";
  return finite(c.x) && finite(c.y) ? "" : "holds a value that is not a number.";
}

std::string fault_of_mark(const Mark& m) {
  if (m.x_mm.size() != m.s_mm.size())
    return "has " + std::to_string(m.x_mm.size()) + " x_mm and " + std::to_string(m.s_mm.size()) + " s_mm.";
  return finite(m.x_mm) && finite(m.s_mm) ? "" : "holds a value that is not a number.";
}

std::string fault_of_volume(const Volume& v) {
  const std::size_t wanted = room(v.grid) * v.depth_mm.size();
  if (v.values.size() != wanted)
    return "has " + std::to_string(v.values.size()) + " values where its grid and depths have room for " +
           std::to_string(wanted) + ".";
  return finite(v.values) && finite(v.depth_mm) ? "" : "holds a value that is not a number.";
}

/// @return what is wrong with the default, as the end of a sentence.
std::string fault_of_default(const Parameter& p) {
  if (const double* number = std::get_if<double>(&p.value)) {
    if (!std::isfinite(*number) || (p.min && *number < *p.min) || (p.max && *number > *p.max))
      return "has the default " + number_text(*number) + ", which its own range does not allow.";
  }
  const std::string* text = std::get_if<std::string>(&p.value);
  if (text != nullptr && !p.choices.empty() && std::find(p.choices.begin(), p.choices.end(), *text) == p.choices.end())
    return "has the default \"" + *text + "\", which is none of its choices.";
  return "";
}

}  // namespace

std::string fault_of(const Description& d) {
  if (!is_name(d.id, false)) return not_a_name("its id", d.id);
  for (const std::string& name : d.gives)
    if (!is_name(name, true)) return not_a_name("its result", name);
  std::set<std::string> keys;
  for (const Parameter& p : d.parameters) {
    if (!is_name(p.key, true)) return not_a_name("its parameter", p.key);
    if (!keys.insert(p.key).second) return "its parameter \"" + p.key + "\" is there twice.";
    if (const std::string fault = fault_of_default(p); !fault.empty())
      return "its parameter \"" + p.key + "\" " + fault;
  }
  return "";
}

std::string fault_of(const AnalysisResult& result, const Description& d, const Grid* patch_grid) {
  std::set<std::string> names, once;
  std::string fault;
  const auto check = [&](const char* kind, const std::string& name, const std::string& ending) {
    if (!fault.empty()) return;
    names.insert(name);
    if (!is_name(name, true))
      fault = not_a_name(kind, name);
    else if (!once.insert(std::string(kind) + " " + name).second)
      fault = "it gave the " + std::string(kind) + " \"" + name + "\" twice.";
    else if (!ending.empty())
      fault = std::string(kind) + " \"" + name + "\" " + ending;
  };
  for (const Field& f : result.fields) check("field", f.name, fault_of_field(f, patch_grid));
  for (const Curve& c : result.curves) check("curve", c.name, fault_of_curve(c));
  for (const Quantity& q : result.quantities)
    check("quantity", q.name, std::isfinite(q.value) ? "" : "is not a number.");
  for (const Mark& m : result.marks) check("mark", m.name, fault_of_mark(m));
  for (const Volume& v : result.volumes) check("volume", v.name, fault_of_volume(v));
  if (!fault.empty()) return fault;
  for (const std::string& name : d.gives)
    if (!names.contains(name)) return "it promises \"" + name + "\" and did not give it.";
  return "";
}

}  // namespace runband
