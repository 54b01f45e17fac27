#include "core/analysis/analysis.h"

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace {

[[noreturn]] void refuse_scope(const Description& d) {
  throw Error(ErrorCode::plugin_failed, d.id + ": it does not do what its scope promises.",
              "report it to whoever made the plugin.");
}

template <typename List>
auto* named(const List& list, const std::string& name) {
  const auto found = std::find_if(list.begin(), list.end(), [&](const auto& entry) { return entry.name == name; });
  return found == list.end() ? nullptr : &*found;
}

Error missing(const std::string& name) {
  return {ErrorCode::plugin_failed, "\"" + name + "\" was not given by any analysis before.",
          "switch on the analysis that gives it."};
}

}  // namespace

AnalysisResult Analysis::run(const PatchContext&, const Parameters&, const Progress&) const {
  refuse_scope(describe());
}
AnalysisResult Analysis::run(const WheelsetContext&, const Parameters&, const Progress&) const {
  refuse_scope(describe());
}

const Field& Inputs::field(const std::string& name) const {
  for (const AnalysisResult* result : results_)
    if (const Field* found = named(result->fields, name)) return *found;
  throw missing(name);
}
double Inputs::quantity(const std::string& name) const {
  for (const AnalysisResult* result : results_)
    if (const Quantity* found = named(result->quantities, name)) return found->value;
  throw missing(name);
}
const Curve& Inputs::curve(const std::string& name) const {
  for (const AnalysisResult* result : results_)
    if (const Curve* found = named(result->curves, name)) return *found;
  throw missing(name);
}
bool Inputs::has(const std::string& name) const {
  return std::any_of(results_.begin(), results_.end(), [&](const AnalysisResult* r) {
    return named(r->fields, name) || named(r->quantities, name) || named(r->curves, name) || named(r->marks, name) ||
           named(r->volumes, name);
  });
}

Parameters checked_parameters(const Description& d, const std::map<std::string, ParameterValue>& asked) {
  std::map<std::string, ParameterValue> values;
  std::vector<std::string> keys;
  for (const Parameter& p : d.parameters) {
    values[p.key] = p.value;
    keys.push_back(p.key);
  }
  for (const auto& [key, value] : asked) {
    const std::string where = "analyses." + d.id + "." + key;
    const auto parameter = std::find_if(d.parameters.begin(), d.parameters.end(),
                                        [&, &k = key](const Parameter& p) { return p.key == k; });
    if (parameter == d.parameters.end()) {
      const std::string near = nearest_name(key, keys);
      throw InputError(ErrorCode::unknown_key, where + " is not a parameter of " + d.id + ".",
                       near.empty() ? (keys.empty() ? "it takes none." : "it takes " + join_names(keys) + ".")
                                    : "did you mean " + d.id + "." + near + "?");
    }
    if (value.index() != parameter->value.index()) {
      const char* const kinds[] = {"a number", "true or false", "a text in quotes"};
      throw InputError(ErrorCode::wrong_type, where + " must be " + kinds[parameter->value.index()] + ".",
                       "`runband analyses " + d.id + "` lists its parameters.");
    }
    if (const double* number = std::get_if<double>(&value)) {
      const bool low = parameter->min && *number < *parameter->min, high = parameter->max && *number > *parameter->max;
      if (!std::isfinite(*number) || low || high) {
        std::string range = "finite";
        if (parameter->min) range += ", at least " + number_text(*parameter->min);
        if (parameter->max) range += ", at most " + number_text(*parameter->max);
        throw out_of_range("", where, *number, parameter->unit, range);
      }
    }
    if (const std::string* text = std::get_if<std::string>(&value); text && !parameter->choices.empty()) {
      if (std::find(parameter->choices.begin(), parameter->choices.end(), *text) == parameter->choices.end()) {
        const std::string near = nearest_name(*text, parameter->choices);
        throw InputError(ErrorCode::unknown_name,
                         where + " is \"" + *text + "\"; it must be one of " + join_names(parameter->choices) + ".",
                         near.empty() ? "choose one of them." : "did you mean \"" + near + "\"?");
      }
    }
    values[key] = value;
  }
  return Parameters(std::move(values));
}

}  // namespace runband
