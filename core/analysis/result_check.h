// What an analysis says of itself and what it returns, held against the contract before anybody reads it.
#pragma once

#include <string>

#include "core/analysis/analysis.h"

namespace runband {

/// What is wrong with a description, as a sentence; empty if nothing: names that are not snake_case, a parameter twice, a
/// default outside its own range or choices.
std::string fault_of(const Description&);

/// What is wrong with a result, as a sentence; empty if nothing: shapes that do not fit, values that are not finite,
/// labels that have no name, names that are not snake_case or that two of a kind share, promises that were not kept.
/// @param patch_grid the grid on which every field of a contact must lie; null for an analysis of the wheelset.
std::string fault_of(const AnalysisResult&, const Description&, const Grid* patch_grid);

}  // namespace runband
