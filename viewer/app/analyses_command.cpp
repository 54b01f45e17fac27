#include <iostream>

#include "core/analysis/registry.h"
#include "core/base/error.h"
#include "core/base/text.h"
#include "viewer/app/commands.h"
#include "viewer/app/table.h"

namespace runband {

namespace {

std::string value_text(const ParameterValue& value) {
  if (const double* number = std::get_if<double>(&value)) return number_text(*number);
  if (const bool* flag = std::get_if<bool>(&value)) return *flag ? "true" : "false";
  return std::get<std::string>(value);
}

std::string range_text(const Parameter& p) {
  if (!p.choices.empty()) return join_names(p.choices);
  if (p.min && p.max) return number_text(*p.min) + " to " + number_text(*p.max);
  if (p.min) return "at least " + number_text(*p.min);
  return p.max ? "at most " + number_text(*p.max) : "";
}

void print_list(const std::string& head, const std::vector<std::string>& names) {
  if (!names.empty()) std::cout << head << join_names(names) << "\n";
}

void print_page(const Description& d) {
  std::cout << d.title << " (" << d.id << "), "
            << (d.scope == Scope::patch ? "for each loaded contact" : "for the wheelset as a whole") << "\n"
            << d.summary << "\n\n";
  print_list("needs  ", d.needs);
  print_list("gives  ", d.gives);
  for (const Parameter& p : d.parameters) {
    std::cout << "\n"
              << d.id << "." << p.key << " = " << value_text(p.value)
              << (p.unit.empty() || p.unit == "1" ? "" : " " + p.unit) << "\n  " << p.title << ". " << p.help << "\n";
    if (const std::string range = range_text(p); !range.empty()) std::cout << "  range: " << range << "\n";
    if (!p.reference.empty()) std::cout << "  source: " << p.reference << "\n";
  }
  if (!d.references.empty()) std::cout << "\n";
  for (const std::string& reference : d.references) std::cout << "Source: " << reference << "\n";
}

}  // namespace

int analyses_command(const std::string& name) {
  const AnalysisRegistry& registry = installed_analyses();
  if (!name.empty()) {
    const Description* d = registry.find(name);
    if (d == nullptr) {
      std::vector<std::string> ids;
      for (const Description& each : registry.descriptions()) ids.push_back(each.id);
      const std::string near = nearest_name(name, ids);
      throw InputError(ErrorCode::unknown_name, "analysis \"" + name + "\" is not installed.",
                       near.empty() ? "installed: " + join_names(ids) + "." : "did you mean " + near + "?");
    }
    print_page(*d);
    return 0;
  }
  std::size_t width = 0;
  for (const Description& d : registry.descriptions()) width = std::max(width, d.id.size());
  for (const Description& d : registry.descriptions())
    std::cout << d.id << std::string(width + 3 - d.id.size(), ' ') << d.summary << "\n";
  for (const PluginProblem& problem : registry.problems())
    std::cout << "not used: " << problem.file.string() << ": " << problem.text << "\n";
  return 0;
}

}  // namespace runband
