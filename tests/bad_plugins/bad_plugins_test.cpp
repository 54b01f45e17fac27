// Each bad plugin gives its own sentence, and Runband goes on.
#include <gtest/gtest.h>
#include <sys/wait.h>
#include <unistd.h>

#include <algorithm>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <set>

#include "core/analysis/plugin.h"
#include "core/base/error.h"
#include "core/solve/solution.h"

namespace runband {
namespace {

namespace fs = std::filesystem;

const fs::path kBad = RUNBAND_BAD_PLUGINS;
const fs::path kBench = fs::path(RUNBAND_DATA) / "demo/bench.toml";

struct Row {
  std::string fault, sentence;
};

/// Refused before any of their code but the entry points runs, or while they describe themselves.
const std::vector<Row> kNotUsed = {
    {"not_a_library", "it cannot be loaded: "},
    {"no_entry", "it has no entry point; declare one with RUNBAND_ANALYSIS."},
    {"no_tag", "it is not a plugin of this program (it shows no tag)."},
    {"magic", "it is not a plugin of this program (its tag does not begin as one)."},
    {"old_version",
     "its SDK version is " + std::to_string(kSdkVersion - 1) + ", this program's is " + std::to_string(kSdkVersion)},
    {"wrong_tag_size", "its size of the tag is "},
    {"wrong_size", "its size of a field is "},
    {"wrong_alignment", "its Eigen's alignment is 32, this program's is 16; build it again against this version."},
    {"other_compiler", "its compiler is clang, ABI 1002, this program's is "},
    {"makes_nothing", "it made no analysis."},
    {"make_throws", "it failed while it made its analysis: nothing to make it of"},
    {"describe_throws", "it failed while it described itself: the words are missing"},
    {"bad_description", "its parameter \"level\" has the default 2, which its own range does not allow."},
    {"twin", "its id \"flange_climb\" is taken by another analysis; give it an id of its own."}};

/// Used, and failing as they run.
const std::vector<Row> kFailing = {{"run_throws", "the load is not to its taste"},
                                   {"wrong_shapes", "field \"share\" lies on a grid of "},
                                   {"returns_nan", "field \"share\" holds a value that is not a number."},
                                   {"cancels_itself", "it stopped although nobody asked it to."}};

/// The plugins of the build, then these bad ones.
AnalysisRegistry registry_with(const std::vector<std::string>& faults) {
  AnalysisRegistry registry;
  registry.load_folder(plugin_folders().front());
  for (const std::string& fault : faults) registry.load_folder(kBad / fault, true);
  return registry;
}

/// Everything but what it took: equal for two runs, or something was harmed.
bool same(const AnalysisResult& a, const AnalysisResult& b) {
  const auto quantity = [](const Quantity& p, const Quantity& q) {
    return p.name == q.name && (p.value == q.value || p.unit == "ms");
  };
  const auto field = [](const Field& f, const Field& g) { return f.name == g.name && f.values == g.values; };
  return std::equal(a.quantities.begin(), a.quantities.end(), b.quantities.begin(), b.quantities.end(), quantity) &&
         std::equal(a.fields.begin(), a.fields.end(), b.fields.begin(), b.fields.end(), field) &&
         a.cautions == b.cautions;
}

TEST(BadPlugins, WhatCannotBeUsedIsASentenceEach) {
  const AnalysisRegistry good = registry_with({});
  ASSERT_TRUE(good.problems().empty());
  std::set<std::string> sentences;
  for (const Row& row : kNotUsed) {
    const AnalysisRegistry registry = registry_with({row.fault});
    ASSERT_EQ(registry.problems().size(), 1U) << row.fault;
    const PluginProblem& problem = registry.problems().front();
    EXPECT_EQ(problem.file.filename(), "runband_bad_" + row.fault + ".so");
    EXPECT_NE(problem.text.find(row.sentence), std::string::npos) << row.fault << ": " << problem.text;
    EXPECT_TRUE(sentences.insert(problem.text).second) << row.fault << " shares a sentence: " << problem.text;
    EXPECT_EQ(registry.descriptions().size(), good.descriptions().size()) << row.fault;
  }
}

TEST(BadPlugins, WithoutTheFaultItIsUsed) {
  const AnalysisRegistry registry = registry_with({"nothing"});
  EXPECT_TRUE(registry.problems().empty());
  const auto got = solve(load_case(kBench), {}, {&registry, {"bad"}}).contacts.front().analyses;
  EXPECT_TRUE(got.at("bad").cautions.empty());
  EXPECT_EQ(got.at("bad").fields.size(), 1U);
}

TEST(BadPlugins, TheFirstOfATwinStays) {
  const AnalysisRegistry registry = registry_with({"twin"});
  ASSERT_NE(registry.find("flange_climb"), nullptr);
  EXPECT_EQ(registry.find("flange_climb")->title, "Flange climb");
}

TEST(BadPlugins, FailingOnesAreCautionsAndTheOthersAnswerAsBefore) {
  std::vector<std::string> faults;
  for (const Row& row : kFailing) faults.push_back(row.fault);
  const AnalysisRegistry good = registry_with({}), registry = registry_with(faults);
  ASSERT_TRUE(registry.problems().empty()) << registry.problems().front().text;
  const Case c = load_case(kBench, {"creepage.longitudinal=0.001"});
  const auto expected = solve(c, {}, {&good, {}}).contacts.front().analyses;
  const auto got = solve(c, {}, {&registry, {}}).contacts.front().analyses;
  ASSERT_GE(expected.size(), 5U);
  ASSERT_FALSE(expected.at("slip_bands").fields.empty());
  for (const auto& [id, result] : expected) EXPECT_TRUE(same(got.at(id), result)) << id;
  for (const Row& row : kFailing) {
    const AnalysisResult& result = got.at("bad_" + row.fault);
    EXPECT_TRUE(result.fields.empty()) << row.fault;
    ASSERT_EQ(result.cautions.size(), 1U) << row.fault;
    EXPECT_EQ(result.cautions.front().code, "analysis_failed");
    EXPECT_EQ(result.cautions.front().severity, Severity::warning);
    EXPECT_NE(result.cautions.front().text.find(row.sentence), std::string::npos) << result.cautions.front().text;
  }
}

TEST(BadPlugins, OneThatNeverReturnsEndsWhenAskedTo) {
  const AnalysisRegistry registry = registry_with({"never_returns"});
  std::stop_source stop;
  int reports = 0;
  const Progress progress{[&](double, std::string_view what) {
                            if (what == "waiting for ever" && ++reports == 3) stop.request_stop();
                          },
                          stop.get_token()};
  EXPECT_THROW(solve(load_case(kBench), progress, {&registry, {"bad_never_returns"}}), Cancelled);
  EXPECT_EQ(reports, 3);
}

#if defined(RUNBAND_PROGRAM)

struct Answer {
  int status = -1;
  std::string out, err;
};

std::string bytes_of(const fs::path& path) {
  std::ifstream stream(path, std::ios::binary);
  return {std::istreambuf_iterator<char>(stream), {}};
}

/// The program with these folders in $RUNBAND_PLUGIN_PATH.
Answer run_program(const std::vector<std::string>& faults, const std::string& arguments,
                   const std::string& environment = "") {
  const fs::path place = fs::temp_directory_path() / ("runband_bad_plugins_" + std::to_string(::getpid()));
  fs::create_directories(place);
  std::string path;
  for (const std::string& fault : faults) path += (path.empty() ? "" : ":") + (kBad / fault).string();
  const std::string command = environment + " RUNBAND_PLUGIN_PATH='" + path + "' '" RUNBAND_PROGRAM "' " + arguments +
                              " >'" + (place / "out").string() + "' 2>'" + (place / "err").string() + "' </dev/null";
  const int status = std::system(command.c_str());
  Answer answer{WIFEXITED(status) ? WEXITSTATUS(status) : -1, bytes_of(place / "out"), bytes_of(place / "err")};
  fs::remove_all(place);
  return answer;
}

TEST(BadPlugins, TheProgramSolvesWithAllOfThemAndSaysWhatIsWrongWithEach) {
  std::vector<std::string> faults;
  for (const Row& row : kNotUsed) faults.push_back(row.fault);
  for (const Row& row : kFailing) faults.push_back(row.fault);
  faults.push_back("there_is_no_such_folder");
  const Answer answer = run_program(faults, "solve '" + kBench.string() + "'");
  EXPECT_EQ(answer.status, 0) << answer.err;
  EXPECT_NE(answer.out.find("Ellipse, peak pressure"), std::string::npos);
  EXPECT_NE(answer.out.find("Largest flash temperature"), std::string::npos) << "an analysis of the build is missing";
  for (const auto* rows : {&kNotUsed, &kFailing}) {
    for (const Row& row : *rows) EXPECT_NE(answer.out.find(row.sentence), std::string::npos) << row.sentence;
  }
  EXPECT_NE(answer.out.find("there is no such folder"), std::string::npos);
  const Answer list = run_program(faults, "analyses");
  EXPECT_EQ(list.status, 0);
  for (const Row& row : kNotUsed) EXPECT_NE(list.out.find(row.sentence), std::string::npos) << row.sentence;
}

TEST(BadPlugins, TheProgramStopsOnTheUsersSignalAndLeavesNothing) {
  const fs::path out = fs::temp_directory_path() / ("runband_stopped_" + std::to_string(::getpid()));
  const Answer answer = run_program({"never_returns"}, "solve '" + kBench.string() + "' --out '" + out.string() + "'",
                                    "RUNBAND_TEST_INTERRUPT=1");
  EXPECT_EQ(answer.status, 130) << answer.err;
  EXPECT_FALSE(fs::exists(out));
}

#endif

}  // namespace
}  // namespace runband
