// How a plugin is told apart before any C++ object crosses: a tag of plain numbers, compared first.
#pragma once

#include <Eigen/Core>
#include <cstdint>

#include "core/analysis/analysis.h"

namespace runband {

/// Counts up whenever a type or meaning in core/analysis changes.
constexpr std::uint32_t kSdkVersion = 3;

/// Plain data in a fixed order; every entry is compared for equality.
struct PluginTag {
  std::uint32_t magic;  ///< 0x52424e44
  std::uint32_t sdk_version;
  std::uint32_t tag_size;
  std::uint32_t result_size, field_size, description_size, parameter_size, patch_context_size, wheelset_context_size;
  std::uint32_t eigen_alignment, eigen_version;
  std::uint32_t compiler;          ///< family (gcc 1, clang 2) and C++ ABI version
  std::uint32_t standard_library;  ///< libstdc++ with which string ABI, or libc++
  std::uint32_t language;          ///< __cplusplus
};

/// The tag of whatever is being compiled.
constexpr PluginTag plugin_tag() {
  PluginTag tag{};
  tag.magic = 0x52424e44;
  tag.sdk_version = kSdkVersion;
  tag.tag_size = sizeof(PluginTag);
  tag.result_size = sizeof(AnalysisResult);
  tag.field_size = sizeof(Field);
  tag.description_size = sizeof(Description);
  tag.parameter_size = sizeof(Parameter);
  tag.patch_context_size = sizeof(PatchContext);
  tag.wheelset_context_size = sizeof(WheelsetContext);
  tag.eigen_alignment = EIGEN_MAX_ALIGN_BYTES;
  tag.eigen_version = EIGEN_WORLD_VERSION * 10000 + EIGEN_MAJOR_VERSION * 100 + EIGEN_MINOR_VERSION;
#if defined(__clang__)
  tag.compiler = 2'000'000 + __GXX_ABI_VERSION;
#else
  tag.compiler = 1'000'000 + __GXX_ABI_VERSION;
#endif
#if defined(_GLIBCXX_USE_CXX11_ABI)
  tag.standard_library = 10 + _GLIBCXX_USE_CXX11_ABI;
#else
  tag.standard_library = 20;
#endif
  tag.language = static_cast<std::uint32_t>(__cplusplus);
  return tag;
}

}  // namespace runband

/// Once in a plugin, outside every namespace: RUNBAND_ANALYSIS(my_namespace::MyAnalysis)
#define RUNBAND_ANALYSIS(Type)                                        \
  extern "C" const runband::PluginTag* runband_plugin_tag() {         \
    static constexpr runband::PluginTag kTag = runband::plugin_tag(); \
    return &kTag;                                                     \
  }                                                                   \
  extern "C" runband::Analysis* runband_plugin_make() { return new Type; }  // NOLINT
