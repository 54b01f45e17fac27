// Which analyses there are, in which order they run, and how each is kept from harming the others.
#pragma once

#include <filesystem>
#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/analysis/analysis.h"

namespace runband {

/// A plugin that was found but not used, and why, in one sentence.
struct PluginProblem {
  std::filesystem::path file;
  std::string text;
};

class AnalysisRegistry {
 public:
  AnalysisRegistry();
  ~AnalysisRegistry();
  AnalysisRegistry(AnalysisRegistry&&) noexcept;
  AnalysisRegistry& operator=(AnalysisRegistry&&) noexcept;

  /// Loads every runband_*.so in the folder; what cannot be used becomes a problem. A folder that others may write to is
  /// refused whole. A folder that does not exist is passed over, or a problem where it must exist.
  void load_folder(const std::filesystem::path& folder, bool must_exist = false);
  /// An analysis of the program's own, or of a test. @throws PluginError (plugin_failed) if its id is taken or its
  /// description breaks the contract (result_check.h).
  void add(std::unique_ptr<Analysis> analysis);

  const std::vector<PluginProblem>& problems() const;
  /// In order of id.
  std::vector<Description> descriptions() const;
  const Description* find(const std::string& id) const;

  /// The analyses of a scope in an order in which each comes after those whose results it needs: levels that may run side
  /// by side. @param wanted ids, and with them everything they need; empty: all.
  /// @throws InputError (unknown_name) for an unknown id; PluginError (plugin_failed) for a circle, naming its members.
  std::vector<std::vector<std::string>> order(Scope scope, const std::vector<std::string>& wanted) const;

  /// Runs them. A failing one becomes a result that holds only a caution (analysis_failed); those that need it become
  /// cautions (input_missing). Results are checked (result_check.h): shapes, names, promises, no not-a-number; what a stopped
  /// run returned is never read.
  /// @throws InputError from parameters; Cancelled if a stop was requested.
  std::map<std::string, AnalysisResult> run(PatchContext, const std::vector<std::string>& wanted,
                                            const std::map<std::string, std::map<std::string, ParameterValue>>& asked,
                                            const Progress&) const;
  std::map<std::string, AnalysisResult> run(WheelsetContext, const std::vector<std::string>& wanted,
                                            const std::map<std::string, std::map<std::string, ParameterValue>>& asked,
                                            const Progress&) const;

 private:
  struct Parts;
  std::unique_ptr<Parts> parts_;
};

/// Where plugins are looked for: the build's or the installation's plugin folder beside the library, then the folders in
/// $RUNBAND_PLUGIN_PATH (separated by colons).
std::vector<std::filesystem::path> plugin_folders();
/// The registry of those folders, loaded once.
const AnalysisRegistry& installed_analyses();

}  // namespace runband
