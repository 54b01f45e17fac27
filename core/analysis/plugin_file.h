// One loadable module: opened, its tag compared, its analysis made.
#pragma once

#include <filesystem>
#include <memory>
#include <string>

#include "core/analysis/analysis.h"

namespace runband {

/// What kept a module from being used, as a sentence, or the analysis it made.
struct PluginFile {
  std::unique_ptr<Analysis> analysis;  ///< null where there is a problem
  std::string problem;
};

/// The module stays loaded for good: its code must outlive every object that it made.
PluginFile open_plugin_file(const std::filesystem::path& file);

}  // namespace runband
