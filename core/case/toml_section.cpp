#include "core/case/toml_section.h"

#include <algorithm>
#include <cmath>

#include "core/base/text.h"

namespace runband {

toml::table parse_toml(const std::string& text, const std::string& origin) {
  try {
    return toml::parse(text, origin);
  } catch (const toml::parse_error& error) {
    throw InputError(ErrorCode::bad_syntax,
                     origin + ":" + std::to_string(error.source().begin.line) +
                         ": not TOML: " + std::string(error.description()) + ".",
                     "mend that line; strings need quotes and every key its value.");
  }
}

TomlSection::TomlSection(const toml::table* table, std::string origin, std::string path)
    : table_(table), origin_(std::move(origin)), path_(std::move(path)) {}

const toml::node* TomlSection::node(const std::string& key) {
  if (std::find(known_.begin(), known_.end(), key) == known_.end()) known_.push_back(key);
  return table_ == nullptr ? nullptr : table_->get(key);
}

std::string TomlSection::where(const std::string& key) const {
  std::string text = origin_;
  if (table_ != nullptr) {
    // A value that a setting on the command line put there has no line.
    if (const toml::node* found = table_->get(key); found != nullptr && found->source().begin.line > 0)
      text += ":" + std::to_string(found->source().begin.line);
  }
  return text + ": " + full_name(key);
}

void TomlSection::wrong_type(const std::string& key, const std::string& wanted) const {
  throw InputError(ErrorCode::wrong_type, where(key) + " must be " + wanted + ".",
                   "write " + key + " = " + wanted + ".");
}

std::optional<double> TomlSection::number(const std::string& key) {
  const toml::node* found = node(key);
  if (found == nullptr) return std::nullopt;
  if (!found->is_number()) wrong_type(key, "a number");
  const double value = found->value<double>().value();
  if (!std::isfinite(value))
    throw InputError(ErrorCode::out_of_range, where(key) + " is not a finite number.", "give a finite value.");
  return value;
}

std::optional<double> TomlSection::number_in(const std::string& key, double low, double high, const std::string& unit) {
  const auto value = number(key);
  if (value && (*value < low || *value > high)) {
    const std::string with_unit = unit.empty() || unit == "1" ? "" : " " + unit;
    throw InputError(ErrorCode::out_of_range,
                     where(key) + " is " + number_text(*value) + with_unit + "; it must lie between " +
                         number_text(low) + " and " + number_text(high) + with_unit + ".",
                     "correct " + key + "; is it in the unit that its name states?");
  }
  return value;
}

std::optional<long> TomlSection::integer_in(const std::string& key, long low, long high) {
  const toml::node* found = node(key);
  if (found == nullptr) return std::nullopt;
  if (!found->is_integer()) wrong_type(key, "a whole number");
  return static_cast<long>(*number_in(key, static_cast<double>(low), static_cast<double>(high), ""));
}

std::optional<std::string> TomlSection::text(const std::string& key) {
  const toml::node* found = node(key);
  if (found == nullptr) return std::nullopt;
  if (!found->is_string()) wrong_type(key, "a text in quotes");
  return found->value<std::string>();
}

std::optional<std::string> TomlSection::choice(const std::string& key, const std::vector<std::string>& choices) {
  const auto value = text(key);
  if (value && std::find(choices.begin(), choices.end(), *value) == choices.end()) {
    const std::string near = nearest_name(*value, choices);
    throw InputError(ErrorCode::unknown_name,
                     where(key) + " is \"" + *value + "\"; it must be one of " + join_names(choices) + ".",
                     near.empty() ? "choose one of them." : "did you mean \"" + near + "\"?");
  }
  return value;
}

std::optional<bool> TomlSection::boolean(const std::string& key) {
  const toml::node* found = node(key);
  if (found == nullptr) return std::nullopt;
  if (!found->is_boolean()) wrong_type(key, "true or false");
  return found->value<bool>();
}

std::optional<std::vector<double>> TomlSection::numbers(const std::string& key) {
  const toml::node* found = node(key);
  if (found == nullptr) return std::nullopt;
  if (found->is_number()) return std::vector<double>{*number(key)};
  if (const toml::array* array = found->as_array()) {
    std::vector<double> values;
    for (const toml::node& entry : *array) {
      if (!entry.is_number() || !std::isfinite(*entry.value<double>()))
        wrong_type(key, "a number, a list of numbers or { from, to, step }");
      values.push_back(*entry.value<double>());
    }
    if (values.empty()) wrong_type(key, "a number, a list of numbers or { from, to, step }");
    return values;
  }
  if (found->is_table()) {
    TomlSection range(found->as_table(), origin_, full_name(key));
    const auto from = range.number("from");
    const auto to = range.number("to");
    const auto step = range.number("step");
    range.finish();
    if (!from || !to || !step) wrong_type(key, "{ from = .., to = .., step = .. } with all three");
    const double count = std::floor((*to - *from) / *step + 1e-9);
    if (!(*step > 0) || !(*to >= *from) || count > 100000) {
      throw InputError(ErrorCode::out_of_range,
                       where(key) + " runs from " + number_text(*from) + " to " + number_text(*to) + " by " +
                           number_text(*step) +
                           "; the step must be above 0, lead upward, and make at most 100000 positions.",
                       "correct from, to or step.");
    }
    std::vector<double> values;
    for (int i = 0; i <= static_cast<int>(count); ++i) values.push_back(*from + i * *step);
    return values;
  }
  wrong_type(key, "a number, a list of numbers or { from, to, step }");
}

TomlSection TomlSection::section(const std::string& key) {
  const toml::node* found = node(key);
  if (found != nullptr && !found->is_table()) wrong_type(key, "a section, [" + full_name(key) + "]");
  return {found == nullptr ? nullptr : found->as_table(), origin_, full_name(key)};
}

std::vector<TomlSection> TomlSection::sections(const std::string& key) {
  const toml::node* found = node(key);
  std::vector<TomlSection> all;
  if (found == nullptr) return all;
  const toml::array* array = found->as_array();
  if (array == nullptr) wrong_type(key, "a list of sections, [[" + full_name(key) + "]]");
  for (const toml::node& entry : *array) {
    if (!entry.is_table()) wrong_type(key, "a list of sections, [[" + full_name(key) + "]]");
    all.emplace_back(entry.as_table(), origin_, full_name(key));
  }
  return all;
}

void TomlSection::finish() const {
  if (table_ == nullptr) return;
  for (const auto& [key, value] : *table_) {
    const std::string name(key.str());
    if (std::find(known_.begin(), known_.end(), name) != known_.end()) continue;
    const std::string near = nearest_name(name, known_);
    std::vector<std::string> sorted = known_;
    std::sort(sorted.begin(), sorted.end());
    throw InputError(
        ErrorCode::unknown_key, where(name) + " is not a known key.",
        near.empty() ? "known here: " + join_names(sorted) + "." : "did you mean " + full_name(near) + "?");
  }
}

}  // namespace runband
