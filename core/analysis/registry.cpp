#include "core/analysis/registry.h"

#include <dlfcn.h>
#include <sys/stat.h>
#include <tbb/parallel_for.h>
#include <unistd.h>

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <set>
#include <sstream>

#include "core/analysis/plugin.h"
#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace fs = std::filesystem;

namespace {

/// The first difference between two tags as a sentence; empty if there is none.
std::string difference(const PluginTag& theirs, const PluginTag& ours) {
  if (theirs.magic != ours.magic) return "it is not a plugin of this program (its tag does not begin as one).";
  const struct {
    const char* what;
    std::uint32_t theirs, ours;
  } rows[] = {{"SDK version", theirs.sdk_version, ours.sdk_version},
              {"size of the tag", theirs.tag_size, ours.tag_size},
              {"size of a result", theirs.result_size, ours.result_size},
              {"size of a field", theirs.field_size, ours.field_size},
              {"size of a description", theirs.description_size, ours.description_size},
              {"size of a parameter", theirs.parameter_size, ours.parameter_size},
              {"size of a patch context", theirs.patch_context_size, ours.patch_context_size},
              {"size of a wheelset context", theirs.wheelset_context_size, ours.wheelset_context_size},
              {"Eigen's alignment", theirs.eigen_alignment, ours.eigen_alignment},
              {"Eigen's version", theirs.eigen_version, ours.eigen_version},
              {"compiler", theirs.compiler, ours.compiler},
              {"standard library", theirs.standard_library, ours.standard_library},
              {"language level", theirs.language, ours.language}};
  for (const auto& row : rows) {
    if (row.theirs != row.ours)
      return std::string("its ") + row.what + " is " + std::to_string(row.theirs) + ", this program's is " +
             std::to_string(row.ours) + "; build it again against this version.";
  }
  return "";
}

/// What is wrong with a result; empty if nothing.
std::string fault_of(const AnalysisResult& result, const Description& d) {
  const auto finite = [](const std::vector<double>& values) {
    return std::all_of(values.begin(), values.end(), [](double v) { return std::isfinite(v); });
  };
  std::set<std::string> names;
  for (const Field& f : result.fields) {
    names.insert(f.name);
    if (f.components < 1 ||
        f.values.size() != static_cast<std::size_t>(f.grid.cells()) * static_cast<std::size_t>(f.components))
      return "field \"" + f.name + "\" has " + std::to_string(f.values.size()) +
             " values where its grid has room for " + std::to_string(f.grid.cells() * std::max(1, f.components)) + ".";
    if (!finite(f.values)) return "field \"" + f.name + "\" holds a value that is not a number.";
  }
  for (const Curve& c : result.curves) {
    names.insert(c.name);
    if (c.x.size() != c.y.size()) return "curve \"" + c.name + "\" has as many x as y no more.";
    if (!finite(c.x) || !finite(c.y)) return "curve \"" + c.name + "\" holds a value that is not a number.";
  }
  for (const Quantity& q : result.quantities) {
    names.insert(q.name);
    if (!std::isfinite(q.value)) return "quantity \"" + q.name + "\" is not a number.";
  }
  for (const Mark& m : result.marks) {
    names.insert(m.name);
    if (m.x_mm.size() != m.s_mm.size() || !finite(m.x_mm) || !finite(m.s_mm))
      return "mark \"" + m.name + "\" is not whole.";
  }
  for (const Volume& v : result.volumes) {
    names.insert(v.name);
    if (v.values.size() != static_cast<std::size_t>(v.grid.cells()) * v.depth_mm.size() || !finite(v.values))
      return "volume \"" + v.name + "\" does not fit its grid, or holds a value that is not a number.";
  }
  for (const std::string& name : d.gives)
    if (!names.contains(name)) return "it promises \"" + name + "\" and did not give it.";
  return "";
}

std::string sentence_of(const std::exception& error) {
  std::string text = error.what();
  std::replace(text.begin(), text.end(), '\n', ' ');
  return text;
}

}  // namespace

struct AnalysisRegistry::Parts {
  struct Entry {
    Description description;
    std::unique_ptr<Analysis> analysis;
  };
  std::map<std::string, Entry> entries;
  std::vector<PluginProblem> problems;

  void add(std::unique_ptr<Analysis> analysis, const fs::path& file) {
    Description d = analysis->describe();
    if (d.id.empty()) throw PluginError(ErrorCode::plugin_failed, "it has no id.", "give it one.");
    if (entries.contains(d.id))
      throw PluginError(ErrorCode::plugin_failed, "its id \"" + d.id + "\" is taken by another analysis.",
                        "give it an id of its own.");
    static_cast<void>(file);
    std::string id = d.id;
    entries.emplace(std::move(id), Entry{std::move(d), std::move(analysis)});
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
      throw;
    } catch (const std::exception& error) {
      return fail("analysis_failed", sentence_of(error));
    } catch (...) {
      return fail("analysis_failed", "it threw something that is not an exception.");
    }
    progress.check();
    result.id = d.id;
    if (const std::string fault = fault_of(result, d); !fault.empty()) return fail("analysis_failed", fault);
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

void AnalysisRegistry::add(std::unique_ptr<Analysis> analysis) { parts_->add(std::move(analysis), {}); }

void AnalysisRegistry::load_folder(const fs::path& folder) {
  std::error_code ignored;
  if (!fs::is_directory(folder, ignored)) return;
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
    const auto problem = [&](const std::string& text) { parts_->problems.push_back({file, text}); };
    void* handle = ::dlopen(file.c_str(), RTLD_NOW | RTLD_LOCAL);
    if (handle == nullptr) {
      const char* why = ::dlerror();
      problem(std::string("it cannot be loaded: ") + (why == nullptr ? "unknown" : why));
      continue;
    }
    using Tag = const PluginTag* (*)();
    using Make = Analysis* (*)();
    const auto tag = reinterpret_cast<Tag>(::dlsym(handle, "runband_plugin_tag"));
    const auto make = reinterpret_cast<Make>(::dlsym(handle, "runband_plugin_make"));
    if (tag == nullptr || make == nullptr) {
      problem("it has no entry point; declare one with RUNBAND_ANALYSIS.");
      continue;
    }
    if (const std::string text = difference(*tag(), plugin_tag()); !text.empty()) {
      problem(text);
      continue;
    }
    // The library stays loaded: its code must outlive every object it made.
    try {
      parts_->add(std::unique_ptr<Analysis>(make()), file);
    } catch (const std::exception& error) {
      problem("it failed while it described itself: " + sentence_of(error));
    } catch (...) {
      problem("it failed while it described itself.");
    }
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
    for (const fs::path& folder : plugin_folders()) registry.load_folder(folder);
    return registry;
  }();
  return kRegistry;
}

}  // namespace runband
