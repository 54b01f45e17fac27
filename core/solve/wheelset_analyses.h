// What solve() and traverse() share of running analyses.
#pragma once

#include <map>
#include <string>
#include <vector>

#include "core/solve/solution.h"

namespace runband {

/// Those of scope wheelset, at a pose.
std::map<std::string, AnalysisResult> analyses_of_wheelset(const Case&, const Locator&, const WheelsetPose&,
                                                           const AnalysisChoice&, const Progress&);

/// Parameters of an analysis that is not there would otherwise be taken in silence.
/// @throws InputError (unknown_name) with the nearest name.
void refuse_missing_analyses(const Case&, const AnalysisRegistry&);

/// One caution (plugin_not_used) for each plugin that was found and not used.
void add_plugin_problems(const AnalysisRegistry&, std::vector<Caution>&);

}  // namespace runband
