// Fields of a contact by name, as numbers and colours: shared by scene, plates and panels.
#pragma once

#include <string>
#include <vector>

#include "core/solve/solution.h"
#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"

namespace runband {

/// "pressure", or "analysis.field"; null if the contact has none of this name.
const Field* field_named(const Contact& contact, const std::string& name);
const Volume* volume_named(const Contact& contact, const std::string& name);

/// A scalar for each cell: the field itself, the length of a vector, or the label's number.
std::vector<double> scalars_of(const Field&);
/// Range that shows all of a field: from zero for magnitudes, symmetric for signed maps.
plot::Range range_of(const Field&, plot::ColourMap);
/// The map that suits a field: tide where it has both signs, else the wanted one.
plot::ColourMap map_for(const Field&, plot::ColourMap wanted);
/// Ink of each label of a label field; empty for others.
std::vector<plot::Colour> label_inks(const Field&);

}  // namespace runband
