#include "viewer/scene/fields.h"

#include <algorithm>
#include <cmath>

namespace runband {

namespace {

const AnalysisResult* result_named(const Contact& contact, const std::string& name, std::size_t dot) {
  if (dot == std::string::npos) return nullptr;
  const auto result = contact.analyses.find(name.substr(0, dot));
  return result == contact.analyses.end() ? nullptr : &result->second;
}

}  // namespace

const Field* field_named(const Contact& contact, const std::string& name) {
  if (name == "pressure") return contact.patch ? &contact.patch->pressure : nullptr;
  const std::size_t dot = name.find('.');
  const AnalysisResult* result = result_named(contact, name, dot);
  if (result == nullptr) return nullptr;
  for (const Field& field : result->fields)
    if (field.name == name.substr(dot + 1)) return &field;
  return nullptr;
}

const Volume* volume_named(const Contact& contact, const std::string& name) {
  const std::size_t dot = name.find('.');
  const AnalysisResult* result = result_named(contact, name, dot);
  if (result == nullptr) return nullptr;
  for (const Volume& volume : result->volumes)
    if (volume.name == name.substr(dot + 1)) return &volume;
  return nullptr;
}

std::vector<double> scalars_of(const Field& field) {
  if (field.components == 1) return field.values;
  std::vector<double> lengths;
  const auto n = static_cast<std::size_t>(field.components);
  for (std::size_t i = 0; i + n <= field.values.size(); i += n) {
    double sum = 0;
    for (std::size_t c = 0; c < n; ++c) sum += field.values[i + c] * field.values[i + c];
    lengths.push_back(std::sqrt(sum));
  }
  return lengths;
}

plot::Range range_of(const Field& field, plot::ColourMap map) {
  plot::Range range{0, 0};
  for (const double v : scalars_of(field)) range.include(v);
  if (plot::is_signed(map)) {
    const double reach = std::max(-range.low, range.high);
    range = {-reach, reach};
  }
  if (!(range.span() > 0)) range.high = range.low + 1;
  return range;
}

plot::ColourMap map_for(const Field& field, plot::ColourMap wanted) {
  if (field.components > 1) return wanted;
  return std::any_of(field.values.begin(), field.values.end(), [](double v) { return v < 0; }) ? plot::ColourMap::tide
                                                                                               : wanted;
}

std::vector<plot::Colour> label_inks(const Field& field) {
  std::vector<plot::Colour> inks;
  if (field.kind != Field::Kind::label) return inks;
  // Labels come in twos and threes; those that roll one way and the other are inked as stick and slip are.
  for (const std::string& label : field.labels)
    inks.push_back(plot::state_colour(label == "stick" || label == "forward"   ? plot::StateInk::stick
                                      : label == "slip" || label == "backward" ? plot::StateInk::slip
                                                                               : plot::StateInk::open));
  return inks;
}

}  // namespace runband
