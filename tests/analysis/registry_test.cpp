// The registry orders, runs, isolates and explains.
#include "core/analysis/registry.h"

#include <gtest/gtest.h>
#include <sys/stat.h>

#include <cmath>
#include <filesystem>
#include <functional>

#include "core/base/error.h"

namespace runband {
namespace {

/// An analysis made of its description and a function.
class Made final : public Analysis {
 public:
  using Run = std::function<AnalysisResult(const PatchContext&, const Parameters&, const Progress&)>;
  Made(std::string id, std::vector<std::string> needs, std::vector<std::string> gives, Run run = {})
      : run_(std::move(run)) {
    d_.id = std::move(id);
    d_.title = d_.id;
    d_.needs = std::move(needs);
    d_.gives = std::move(gives);
    d_.parameters = {{"depth", "Depth", "mm", 1.0, 0.0, 5.0, {}, "", ""},
                     {"law", "Law", "", std::string("a"), {}, {}, {"a", "both"}, "", ""},
                     {"on", "On", "", true, {}, {}, {}, "", ""}};
  }
  Description describe() const override { return d_; }
  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress& progress) const override {
    if (run_) return run_(c, p, progress);
    AnalysisResult r;
    for (const std::string& name : d_.gives) {
      double value = 1;
      for (const std::string& need : d_.needs) value += c.inputs.quantity(need);
      r.quantities.push_back({name, name, "1", value, ""});
    }
    return r;
  }

 private:
  Description d_;
  Run run_;
};

struct Bench {
  ContactZone zone;
  Patch patch;
  MaterialPair material;
  WheelsetPose pose;
  PatchContext context() const { return {true, zone, patch, material, 0.3, {}, {}, pose, nullptr, {}}; }
};

std::map<std::string, AnalysisResult> run(const AnalysisRegistry& r, const std::vector<std::string>& with = {},
                                          const Progress& progress = {}) {
  static const Bench kBench;
  return r.run(kBench.context(), with, {}, progress);
}

TEST(Registry, RunsEachAfterWhatItNeeds) {
  AnalysisRegistry r;
  r.add(std::make_unique<Made>("a_last", std::vector<std::string>{"y"}, std::vector<std::string>{"z"}));
  r.add(std::make_unique<Made>("b_first", std::vector<std::string>{}, std::vector<std::string>{"x"}));
  r.add(std::make_unique<Made>("c_middle", std::vector<std::string>{"x"}, std::vector<std::string>{"y"}));
  const auto results = run(r);
  EXPECT_EQ(results.at("a_last").quantities.front().value, 3.0);
  EXPECT_EQ(r.order(Scope::patch, {"c_middle"}).size(), 2U);  // with what it needs, without the last
  EXPECT_EQ(run(r, {"c_middle"}).size(), 2U);
}

TEST(Registry, NamesTheMembersOfACircle) {
  AnalysisRegistry r;
  r.add(std::make_unique<Made>("one", std::vector<std::string>{"y"}, std::vector<std::string>{"x"}));
  r.add(std::make_unique<Made>("two", std::vector<std::string>{"x"}, std::vector<std::string>{"y"}));
  try {
    run(r);
    FAIL();
  } catch (const PluginError& error) {
    EXPECT_NE(std::string(error.what()).find("one and two"), std::string::npos) << error.what();
  }
}

TEST(Registry, AMissingInputIsASentence) {
  AnalysisRegistry r;
  r.add(std::make_unique<Made>("lonely", std::vector<std::string>{"nowhere"}, std::vector<std::string>{"x"}));
  const auto results = run(r);
  ASSERT_EQ(results.at("lonely").cautions.size(), 1U);
  EXPECT_EQ(results.at("lonely").cautions[0].code, "input_missing");
  EXPECT_NE(results.at("lonely").cautions[0].text.find("\"nowhere\""), std::string::npos);
}

TEST(Registry, AFailingOneDoesNotHarmTheOthers) {
  const auto with = [](Made::Run run_it) {
    AnalysisRegistry r;
    r.add(std::make_unique<Made>("bad", std::vector<std::string>{}, std::vector<std::string>{"x"}, std::move(run_it)));
    r.add(std::make_unique<Made>("good", std::vector<std::string>{}, std::vector<std::string>{"g"}));
    r.add(std::make_unique<Made>("late", std::vector<std::string>{"x"}, std::vector<std::string>{"l"}));
    return run(r);
  };
  const auto quantity = [](double v) {
    AnalysisResult r;
    r.quantities.push_back({"x", "x", "1", v, ""});
    return r;
  };
  const std::vector<std::pair<Made::Run, std::string>> bad = {
      {[](const PatchContext&, const Parameters&, const Progress&) -> AnalysisResult {
         throw std::runtime_error("the sky fell");
       },
       "the sky fell"},
      {[](const PatchContext&, const Parameters&, const Progress&) -> AnalysisResult { throw 7; }, "not an exception"},
      {[&](const PatchContext&, const Parameters&, const Progress&) { return quantity(NAN); }, "not a number"},
      {[](const PatchContext&, const Parameters&, const Progress&) { return AnalysisResult{}; }, "promises \"x\""},
      {[&](const PatchContext&, const Parameters&, const Progress&) {
         AnalysisResult r = quantity(1);
         Field f;
         f.name = "f";
         f.grid = {3, 3, 0, 0, 1, 1};
         f.values = {1, 2};
         r.fields.push_back(f);
         return r;
       },
       "2 values"},
      {[&](const PatchContext&, const Parameters&, const Progress&) {
         AnalysisResult r = quantity(1);
         Field f;
         f.name = "f";
         f.grid = {3, 1, 0, 0, 1, 1};
         f.values = {1, 2, 3};
         r.fields.push_back(f);
         return r;
       },
       "lies on a grid of 3 x 1 cells, the patch's has 0 x 0 cells"},
      {[](const PatchContext&, const Parameters&, const Progress&) -> AnalysisResult { throw Cancelled(); },
       "nobody asked"}};
  for (const auto& [run_it, sentence] : bad) {
    const auto results = with(run_it);
    ASSERT_EQ(results.at("bad").cautions.size(), 1U);
    EXPECT_NE(results.at("bad").cautions[0].text.find(sentence), std::string::npos)
        << results.at("bad").cautions[0].text;
    EXPECT_TRUE(results.at("bad").quantities.empty());
    EXPECT_EQ(results.at("good").quantities.size(), 1U);
    EXPECT_EQ(results.at("late").cautions[0].code, "input_missing");
  }
}

TEST(Registry, StopsOneThatWaits) {
  AnalysisRegistry r;
  std::stop_source stop;
  r.add(std::make_unique<Made>("endless", std::vector<std::string>{}, std::vector<std::string>{"x"},
                               [&](const PatchContext&, const Parameters&, const Progress& progress) -> AnalysisResult {
                                 stop.request_stop();
                                 for (;;) progress.check();
                               }));
  EXPECT_THROW(run(r, {}, Progress{nullptr, stop.get_token()}), Cancelled);
}

TEST(Registry, NothingIsReadFromOneThatSwallowedTheStop) {
  AnalysisRegistry r;
  std::stop_source stop;
  r.add(std::make_unique<Made>("deaf", std::vector<std::string>{}, std::vector<std::string>{"x"},
                               [&](const PatchContext&, const Parameters&, const Progress&) {
                                 stop.request_stop();
                                 return AnalysisResult{};
                               }));
  EXPECT_THROW(run(r, {}, Progress{nullptr, stop.get_token()}), Cancelled);
}

TEST(Registry, RefusesATakenIdAndAnUnknownOne) {
  AnalysisRegistry r;
  r.add(std::make_unique<Made>("steer", std::vector<std::string>{}, std::vector<std::string>{"x"}));
  EXPECT_THROW(r.add(std::make_unique<Made>("steer", std::vector<std::string>{}, std::vector<std::string>{"y"})),
               PluginError);
  try {
    r.order(Scope::patch, {"stear"});
    FAIL();
  } catch (const InputError& error) {
    EXPECT_NE(std::string(error.what()).find("\"steer\""), std::string::npos);
  }
}

TEST(Parameters, AreCheckedAndFilledIn) {
  const Description d = Made("a", {}, {}).describe();
  EXPECT_EQ(checked_parameters(d, {}).number("depth"), 1.0);
  EXPECT_EQ(checked_parameters(d, {{"depth", 2.0}}).number("depth"), 2.0);
  EXPECT_EQ(checked_parameters(d, {{"law", std::string("both")}}).text("law"), "both");
  EXPECT_FALSE(checked_parameters(d, {{"on", false}}).flag("on"));
  EXPECT_THROW(checked_parameters(d, {{"depth", 6.0}}), InputError);
  EXPECT_THROW(checked_parameters(d, {{"depth", -1.0}}), InputError);
  EXPECT_THROW(checked_parameters(d, {{"depth", true}}), InputError);
  EXPECT_THROW(checked_parameters(d, {{"law", std::string("bath")}}), InputError);
  EXPECT_THROW(checked_parameters(d, {{"dept", 1.0}}), InputError);
}

TEST(PluginFolder, WritableByOthersIsRefusedWhole) {
  const std::filesystem::path folder = std::filesystem::path(testing::TempDir()) / "runband_open_folder";
  std::filesystem::create_directories(folder);
  ASSERT_EQ(::chmod(folder.c_str(), 0777), 0);
  AnalysisRegistry r;
  r.load_folder(folder);
  ASSERT_EQ(r.problems().size(), 1U);
  EXPECT_NE(r.problems()[0].text.find("written by others"), std::string::npos);
  AnalysisRegistry nothing;
  nothing.load_folder(folder / "nowhere");
  EXPECT_TRUE(nothing.problems().empty());
  nothing.load_folder(folder / "nowhere", true);
  ASSERT_EQ(nothing.problems().size(), 1U);
  EXPECT_NE(nothing.problems()[0].text.find("no such folder"), std::string::npos);
}

TEST(Installed, ThePluginsOfTheBuildAreThere) {
  EXPECT_TRUE(installed_analyses().problems().empty()) << installed_analyses().problems().front().text;
  for (const char* id : {"creepage", "slip_bands", "steering", "flange_climb"})
    EXPECT_NE(installed_analyses().find(id), nullptr) << id;
}

}  // namespace
}  // namespace runband
