#include "core/analysis/plugin_file.h"

#include <dlfcn.h>

#include "core/analysis/plugin.h"

namespace runband {

namespace {

/// "gcc, ABI 1017" of the number in a tag.
std::string compiler_text(std::uint32_t number) {
  const std::uint32_t family = number / 1'000'000;
  return (family == 1   ? "gcc"
          : family == 2 ? "clang"
                        : "compiler " + std::to_string(family)) +
         ", ABI " + std::to_string(number % 1'000'000);
}

std::string library_text(std::uint32_t number) {
  if (number == 20) return "libc++";
  return "libstdc++ with the " + std::string(number == 10 ? "old" : "new") + " text type";
}

/// The first difference between two tags as a sentence; empty if there is none. Nothing beyond the first differing entry
/// is read: where the size of the tag differs, the rest may not be there.
std::string difference(const PluginTag& theirs, const PluginTag& ours) {
  if (theirs.magic != ours.magic) return "it is not a plugin of this program (its tag does not begin as one).";
  const auto number = [](std::uint32_t value) { return std::to_string(value); };
  const struct {
    const char* what;
    std::uint32_t PluginTag::*entry;
    std::string (*text)(std::uint32_t);
  } rows[] = {{"SDK version", &PluginTag::sdk_version, number},
              {"size of the tag", &PluginTag::tag_size, number},
              {"size of a result", &PluginTag::result_size, number},
              {"size of a field", &PluginTag::field_size, number},
              {"size of a description", &PluginTag::description_size, number},
              {"size of a parameter", &PluginTag::parameter_size, number},
              {"size of a patch context", &PluginTag::patch_context_size, number},
              {"size of a wheelset context", &PluginTag::wheelset_context_size, number},
              {"Eigen's alignment", &PluginTag::eigen_alignment, number},
              {"Eigen's version", &PluginTag::eigen_version, number},
              {"compiler", &PluginTag::compiler, compiler_text},
              {"standard library", &PluginTag::standard_library, library_text},
              {"language level", &PluginTag::language, number}};
  for (const auto& row : rows) {
    if (theirs.*row.entry != ours.*row.entry)
      return std::string("its ") + row.what + " is " + row.text(theirs.*row.entry) + ", this program's is " +
             row.text(ours.*row.entry) + "; build it again against this version.";
  }
  return "";
}

}  // namespace

PluginFile open_plugin_file(const std::filesystem::path& file) {
  void* handle = ::dlopen(file.c_str(), RTLD_NOW | RTLD_LOCAL);
  if (handle == nullptr) {
    const char* why = ::dlerror();
    return {nullptr, std::string("it cannot be loaded: ") + (why == nullptr ? "no reason given" : why) + "."};
  }
  using Tag = const PluginTag* (*)();
  using Make = Analysis* (*)();
  const auto tag = reinterpret_cast<Tag>(::dlsym(handle, "runband_plugin_tag"));
  const auto make = reinterpret_cast<Make>(::dlsym(handle, "runband_plugin_make"));
  if (tag == nullptr || make == nullptr) return {nullptr, "it has no entry point; declare one with RUNBAND_ANALYSIS."};
  const PluginTag* theirs = tag();
  if (theirs == nullptr) return {nullptr, "it is not a plugin of this program (it shows no tag)."};
  if (std::string text = difference(*theirs, plugin_tag()); !text.empty()) return {nullptr, std::move(text)};
  std::unique_ptr<Analysis> analysis(make());
  if (analysis == nullptr) return {nullptr, "it made no analysis."};
  return {std::move(analysis), ""};
}

}  // namespace runband
