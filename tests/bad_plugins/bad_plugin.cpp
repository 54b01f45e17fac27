// One analysis, one fault: CMakeLists.txt defines one BAD_* word per module. Without a word it is in order.
#include <unistd.h>

#include <csignal>
#include <cstdlib>
#include <limits>
#include <stdexcept>

#include "core/analysis/plugin.h"

namespace {

using namespace runband;

#if defined(BAD_TWIN)
constexpr const char* kId = "flange_climb";
#elif defined(BAD_RUN_THROWS)
constexpr const char* kId = "bad_run_throws";
#elif defined(BAD_WRONG_SHAPES)
constexpr const char* kId = "bad_wrong_shapes";
#elif defined(BAD_RETURNS_NAN)
constexpr const char* kId = "bad_returns_nan";
#elif defined(BAD_CANCELS_ITSELF)
constexpr const char* kId = "bad_cancels_itself";
#elif defined(BAD_NEVER_RETURNS)
constexpr const char* kId = "bad_never_returns";
#else
constexpr const char* kId = "bad";
#endif

class Bad final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = kId;
    d.title = "Bad";
    d.summary = "An analysis with a fault.";
    d.gives = {"share"};
    d.parameters = {{"level", "Level", "1", 0.5, 0.0, 1.0, {}, "Of nothing.", ""}};
#if defined(BAD_DESCRIBE_THROWS)
    throw std::runtime_error("the words are missing");
#elif defined(BAD_BAD_DESCRIPTION)
    d.parameters.front().value = 2.0;
#endif
    return d;
  }

  AnalysisResult run(const PatchContext& context, const Parameters&, const Progress& progress) const override {
    AnalysisResult result;
    Field share{"share", "Share", "1", Field::Kind::scalar, 1, context.patch.grid, context.patch.pressure.values,
                {},      ""};
#if defined(BAD_RUN_THROWS)
    throw std::runtime_error("the load is not to its taste");
#elif defined(BAD_WRONG_SHAPES)
    // In itself the field is whole: its values fit its grid, which is not the patch's.
    share.grid.nx -= 1;
    share.values.resize(static_cast<std::size_t>(share.grid.cells()));
#elif defined(BAD_RETURNS_NAN)
    share.values[share.values.size() / 2] = std::numeric_limits<double>::quiet_NaN();
#elif defined(BAD_CANCELS_ITSELF)
    throw Cancelled();
#elif defined(BAD_NEVER_RETURNS)
    if (std::getenv("RUNBAND_TEST_INTERRUPT") != nullptr)
      ::kill(::getpid(), SIGINT);  // as a user at the keyboard would
    for (;;) progress.at(0.5, "waiting for ever");
#endif
    progress.check();
    result.fields.push_back(std::move(share));
    return result;
  }
};

#if !defined(BAD_NO_ENTRY) && !defined(BAD_NO_TAG)
/// The tag of this compilation with one entry spoiled.
PluginTag spoiled_tag() {
  PluginTag tag = plugin_tag();
#if defined(BAD_MAGIC)
  tag.magic = 0x4d5a4d5a;
#elif defined(BAD_OLD_VERSION)
  tag.sdk_version = kSdkVersion - 1;
#elif defined(BAD_WRONG_TAG_SIZE)
  tag.tag_size -= 4;
#elif defined(BAD_WRONG_SIZE)
  tag.field_size += 8;
#elif defined(BAD_WRONG_ALIGNMENT)
  tag.eigen_alignment = 32;
#elif defined(BAD_OTHER_COMPILER)
  tag.compiler = 2'001'002;
#endif
  return tag;
}
#endif

}  // namespace

#if !defined(BAD_NO_ENTRY)
extern "C" const runband::PluginTag* runband_plugin_tag() {
#if defined(BAD_NO_TAG)
  return nullptr;
#else
  static const runband::PluginTag kTag = spoiled_tag();
  return &kTag;
#endif
}
extern "C" runband::Analysis* runband_plugin_make() {
#if defined(BAD_MAKES_NOTHING)
  return nullptr;
#elif defined(BAD_MAKE_THROWS)
  throw std::runtime_error("nothing to make it of");
#else
  return new Bad;
#endif
}
#else
// Loadable, and nothing in it that Runband could call.
extern "C" runband::Analysis* somebody_elses_entry() { return new Bad; }
#endif
