#include "core/analysis/registry.h"

#include <dlfcn.h>
#include <sys/stat.h>
#include <tbb/parallel_for.h>
#include <unistd.h>

#include <algorithm>
#include <cstdlib>
#include <set>
#include <sstream>
#include <utility>

#include "core/analysis/plugin_file.h"
#include "core/analysis/result_check.h"
#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace fs = std::filesystem;

namespace {

/// An exception's words on one line.
std::string sentence_of(const std::exception& error) {
  std::istringstream words(error.what());
  std::string text;
  for (std::string word; words >> word;) text += (text.empty() ? "" : " ") + word;
  return text.empty() ? "it threw an exception without a word." : text;
}

const Grid* grid_of(const PatchContext& context) { return &context.patch.grid; }
const Grid* grid_of(const WheelsetContext&) { return nullptr; }

}  // namespace

struct AnalysisRegistry::Parts {
  struct Entry {
    Description description;
    std::unique_ptr<Analysis> analysis;
  };
  std::map<std::string, Entry> entries;
  std::vector<PluginProblem> problems;

  /// @return why it cannot be used, or an empty text.
  std::string add(std::unique_ptr<Analysis> analysis) {
    Description d;
    try {
      d = analysis->describe();
    } catch (const std::exception& error) {
      return "it failed while it described itself: " + sentence_of(error);
    } catch (...) {
      return "it failed while it described itself.";
    }
    if (std::string fault = fault_of(d); !fault.empty()) return fault;
    if (entries.contains(d.id))
      return "its id \"" + d.id + "\" is taken by another analysis; give it an id of its own.";
    std::string id = d.id;
    entries.emplace(std::move(id), Entry{std::move(d), std::move(analysis)});
    return "";
  }

  template <typename Context>
  AnalysisResult run_one(const Entry& entry, Context context, const std::map<std::string, AnalysisResult>& done,
                         const Parameters& parameters, const Progress& progress) const {
    const Description& d = entry.description;
    AnalysisResult result;
    const auto fail = [&](const char* code, const std::string& text) {
      AnalysisResult failed;
      failed.id = d.id;
      failed.cautions.push_back({code, Severity::warning, d.title + ": " + text});
      return failed;
    };
    for (const auto& [id, earlier] : done) context.inputs.add(earlier);
    for (const std::string& need : d.needs)
      if (!context.inputs.has(need))
        return fail("input_missing", "it needs \"" + need + "\", which no analysis before it gave.");
    try {
      result = entry.analysis->run(context, parameters, progress);
    } catch (const Cancelled&) {
      if (progress.stop.stop_requested()) throw;
      return fail("analysis_failed", "it stopped although nobody asked it to.");
    } catch (const std::exception& error) {
      return fail("analysis_failed", sentence_of(error));
    } catch (...) {
      return fail("analysis_failed", "it threw something that is not an exception.");
    }
    progress.check();
    result.id = d.id;
    if (const std::string fault = fault_of(result, d, grid_of(context)); !fault.empty())
      return fail("analysis_failed", fault);
    return result;
  }

  template <typename Context>
  std::map<std::string, AnalysisResult> run(const AnalysisRegistry& registry, Scope scope, const Context& context,
                                            const std::vector<std::string>& wanted,
                                            const std::map<std::string, std::map<std::string, ParameterValue>>& asked,
                                            const Progress& progress) const {
    std::map<std::string, AnalysisResult> done;
    for (const auto& level : registry.order(scope, wanted)) {
      std::vector<AnalysisResult> results(level.size());
      std::vector<Parameters> parameters;
      for (const std::string& id : level) {
        const auto found = asked.find(id);
        parameters.push_back(
            checked_parameters(entries.at(id).description,
                               found == asked.end() ? std::map<std::string, ParameterValue>{} : found->second));
      }
      tbb::parallel_for(std::size_t{0}, level.size(), [&](std::size_t k) {
        results[k] = run_one(entries.at(level[k]), context, done, parameters[k], progress);
      });
      for (std::size_t k = 0; k < level.size(); ++k) done[level[k]] = std::move(results[k]);
    }
    return done;
  }
};

AnalysisRegistry::AnalysisRegistry() : parts_(std::make_unique<Parts>()) {}
AnalysisRegistry::~AnalysisRegistry() = default;
AnalysisRegistry::AnalysisRegistry(AnalysisRegistry&&) noexcept = default;
AnalysisRegistry& AnalysisRegistry::operator=(AnalysisRegistry&&) noexcept = default;

void AnalysisRegistry::add(std::unique_ptr<Analysis> analysis) {
  if (const std::string problem = parts_->add(std::move(analysis)); !problem.empty())
    throw PluginError(ErrorCode::plugin_failed, "an analysis cannot be used: " + problem, "mend its description.");
}

void AnalysisRegistry::load_folder(const fs::path& folder, bool must_exist) {
  std::error_code ignored;
  if (!fs::is_directory(folder, ignored)) {
    if (must_exist)
      parts_->problems.push_back(
          {folder, "there is no such folder, so no plugin was looked for in it; see $RUNBAND_PLUGIN_PATH."});
    return;
  }
  struct stat status {};
  if (::stat(folder.c_str(), &status) != 0 || (status.st_mode & (S_IWGRP | S_IWOTH)) != 0 ||
      (status.st_uid != ::geteuid() && status.st_uid != 0)) {
    parts_->problems.push_back(
        {folder, "the folder can be written by others, so nothing in it is loaded; chmod go-w it."});
    return;
  }
  std::vector<fs::path> files;
  for (const auto& entry : fs::directory_iterator(folder, ignored)) {
    const std::string name = entry.path().filename().string();
    if (name.starts_with("runband_") && entry.path().extension() == ".so") files.push_back(entry.path());
  }
  std::sort(files.begin(), files.end());
  for (const fs::path& file : files) {
    PluginFile opened;
    try {
      opened = open_plugin_file(file);
    } catch (const std::exception& error) {
      opened.problem = "it failed while it made its analysis: " + sentence_of(error);
    } catch (...) {
      opened.problem = "it failed while it made its analysis.";
    }
    if (opened.analysis) opened.problem = parts_->add(std::move(opened.analysis));
    if (!opened.problem.empty()) parts_->problems.push_back({file, opened.problem});
  }
}

const std::vector<PluginProblem>& AnalysisRegistry::problems() const { return parts_->problems; }

std::vector<Description> AnalysisRegistry::descriptions() const {
  std::vector<Description> all;
  for (const auto& [id, entry] : parts_->entries) all.push_back(entry.description);
  return all;
}

const Description* AnalysisRegistry::find(const std::string& id) const {
  const auto found = parts_->entries.find(id);
  return found == parts_->entries.end() ? nullptr : &found->second.description;
}

std::vector<std::vector<std::string>> AnalysisRegistry::order(Scope scope,
                                                              const std::vector<std::string>& wanted) const {
  std::map<std::string, const Description*> pool;
  std::map<std::string, std::string> giver;
  std::vector<std::string> ids;
  for (const auto& [id, entry] : parts_->entries) {
    ids.push_back(id);
    if (entry.description.scope != scope) continue;
    pool[id] = &entry.description;
    for (const std::string& name : entry.description.gives) giver.emplace(name, id);
  }
  std::set<std::string> chosen;
  std::vector<std::string> open;
  for (const std::string& id : wanted) {
    if (!parts_->entries.contains(id)) {
      const std::string near = nearest_name(id, ids);
      throw InputError(ErrorCode::unknown_name, "analysis \"" + id + "\" is not installed.",
                       near.empty() ? "installed: " + join_names(ids) + "." : "did you mean \"" + near + "\"?");
    }
    if (pool.contains(id)) open.push_back(id);
  }
  if (wanted.empty())
    for (const auto& [id, d] : pool) open.push_back(id);
  while (!open.empty()) {
    const std::string id = open.back();
    open.pop_back();
    if (!chosen.insert(id).second) continue;
    for (const std::string& need : pool.at(id)->needs)
      if (const auto found = giver.find(need); found != giver.end()) open.push_back(found->second);
  }
  std::vector<std::vector<std::string>> levels;
  std::set<std::string> done;
  while (done.size() < chosen.size()) {
    std::vector<std::string> level;
    for (const std::string& id : chosen) {
      if (done.contains(id)) continue;
      const auto& needs = pool.at(id)->needs;
      const bool ready = std::all_of(needs.begin(), needs.end(), [&](const std::string& need) {
        const auto found = giver.find(need);
        return found == giver.end() || done.contains(found->second);
      });
      if (ready) level.push_back(id);
    }
    if (level.empty()) {
      std::vector<std::string> circle;
      for (const std::string& id : chosen)
        if (!done.contains(id)) circle.push_back(id);
      throw PluginError(ErrorCode::plugin_failed,
                        "the analyses " + join_names(circle) + " need each other's results in a circle.",
                        "run without one of them: --with names those to run.");
    }
    done.insert(level.begin(), level.end());
    levels.push_back(std::move(level));
  }
  return levels;
}

std::map<std::string, AnalysisResult> AnalysisRegistry::run(
    PatchContext context, const std::vector<std::string>& wanted,
    const std::map<std::string, std::map<std::string, ParameterValue>>& asked, const Progress& progress) const {
  return parts_->run(*this, Scope::patch, context, wanted, asked, progress);
}

std::map<std::string, AnalysisResult> AnalysisRegistry::run(
    WheelsetContext context, const std::vector<std::string>& wanted,
    const std::map<std::string, std::map<std::string, ParameterValue>>& asked, const Progress& progress) const {
  return parts_->run(*this, Scope::wheelset, context, wanted, asked, progress);
}

std::vector<fs::path> plugin_folders() {
  std::vector<fs::path> folders;
  Dl_info info{};
  std::error_code ignored;
  if (::dladdr(reinterpret_cast<const void*>(&plugin_folders), &info) != 0 && info.dli_fname != nullptr)
    folders.push_back(fs::weakly_canonical(info.dli_fname, ignored).parent_path() / "runband");
  if (const char* path = std::getenv("RUNBAND_PLUGIN_PATH"); path != nullptr) {
    std::istringstream stream(path);
    for (std::string folder; std::getline(stream, folder, ':');)
      if (!folder.empty()) folders.emplace_back(folder);
  }
  return folders;
}

const AnalysisRegistry& installed_analyses() {
  static const AnalysisRegistry kRegistry = [] {
    AnalysisRegistry registry;
    bool named_by_user = false;  // the first is the program's own
    for (const fs::path& folder : plugin_folders()) registry.load_folder(folder, std::exchange(named_by_user, true));
    return registry;
  }();
  return kRegistry;
}

}  // namespace runband
