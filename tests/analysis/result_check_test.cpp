// What a plugin says and returns is held against the contract: one change to a sound result, one sentence.
#include "core/analysis/result_check.h"

#include <gtest/gtest.h>

#include <cmath>
#include <functional>

#include "core/analysis/registry.h"

namespace runband {
namespace {

const Grid kPatchGrid{3, 2, -1, -0.5, 1, 1};

Description sound_description() {
  Description d;
  d.id = "sound";
  d.gives = {"share", "zones", "line", "number", "ring", "depths"};
  d.parameters = {{"level", "Level", "1", 0.5, 0.0, 1.0, {}, "", ""},
                  {"law_MPa", "Law", "", std::string("a"), {}, {}, {"a", "b"}, "", ""}};
  return d;
}

AnalysisResult sound_result() {
  AnalysisResult r;
  r.fields = {{"share", "Share", "1", Field::Kind::vector, 2, kPatchGrid, std::vector<double>(12, 0.5), {}, ""},
              {"zones", "Zones", "1", Field::Kind::label, 1, kPatchGrid, {0, 1, 1, 0, 0, 1}, {"out", "in"}, ""}};
  r.curves = {{"line", "Line", "x", "mm", "y", "1", {1, 2}, {3, 4}, ""}};
  r.quantities = {{"number", "Number", "1", 1.0, ""}};
  r.marks = {{"ring", "Ring", true, {0, 1}, {0, 1}, ""}};
  r.volumes = {{"depths", "Depths", "MPa", {2, 2, 0, 0, 1, 1}, {0.1, 0.2}, std::vector<double>(8, 1.0), ""}};
  return r;
}

TEST(ResultCheck, ASoundOneHasNoFault) {
  EXPECT_EQ(fault_of(sound_description()), "");
  EXPECT_EQ(fault_of(sound_result(), sound_description(), &kPatchGrid), "");
}

TEST(ResultCheck, EachFaultHasItsSentence) {
  using Change = std::function<void(AnalysisResult&)>;
  const std::vector<std::pair<Change, std::string>> rows = {
      {[](AnalysisResult& r) { r.fields[0].components = 0; }, "field \"share\" has 0 components"},
      {[](AnalysisResult& r) { r.fields[0].values.pop_back(); },
       "field \"share\" has 11 values where its grid has room for 12."},
      {[](AnalysisResult& r) { r.fields[0].grid.nx = -3; },
       "field \"share\" has 12 values where its grid has room for 0."},
      {[](AnalysisResult& r) {
         r.fields[0].grid.nx = 2;
         r.fields[0].values.resize(8);
       },
       "field \"share\" lies on a grid of 2 x 2 cells, the patch's has 3 x 2 cells."},
      {[](AnalysisResult& r) { std::swap(r.fields[0].grid.nx, r.fields[0].grid.ns); },
       "field \"share\" lies on a grid of 2 x 3 cells, the patch's has 3 x 2 cells."},
      {[](AnalysisResult& r) { r.fields[0].grid.dx_mm = 2; }, "of another place or cell size than the patch's."},
      {[](AnalysisResult& r) { r.fields[0].values[3] = NAN; }, "field \"share\" holds a value that is not a number."},
      {[](AnalysisResult& r) { r.fields[0].values[3] = INFINITY; },
       "field \"share\" holds a value that is not a number."},
      {[](AnalysisResult& r) { r.fields[1].values[0] = 2; }, "field \"zones\" holds the label 2, and has names for 2."},
      {[](AnalysisResult& r) { r.fields[1].values[0] = 0.5; }, "field \"zones\" holds the label 0.5"},
      {[](AnalysisResult& r) { r.fields[1].values[0] = -1; }, "field \"zones\" holds the label -1"},
      {[](AnalysisResult& r) { r.curves[0].y.pop_back(); }, "curve \"line\" has 2 x and 1 y."},
      {[](AnalysisResult& r) { r.curves[0].x[0] = NAN; }, "curve \"line\" holds a value that is not a number."},
      {[](AnalysisResult& r) { r.quantities[0].value = NAN; }, "quantity \"number\" is not a number."},
      {[](AnalysisResult& r) { r.marks[0].s_mm.pop_back(); }, "mark \"ring\" has 2 x_mm and 1 s_mm."},
      {[](AnalysisResult& r) { r.marks[0].x_mm[0] = NAN; }, "mark \"ring\" holds a value that is not a number."},
      {[](AnalysisResult& r) { r.volumes[0].depth_mm.pop_back(); },
       "volume \"depths\" has 8 values where its grid and depths have room for 4."},
      {[](AnalysisResult& r) { r.volumes[0].depth_mm[0] = NAN; },
       "volume \"depths\" holds a value that is not a number."},
      {[](AnalysisResult& r) { r.quantities[0].name = "../number"; },
       "quantity \"../number\" is not a name in snake_case"},
      {[](AnalysisResult& r) { r.quantities.push_back(r.quantities[0]); }, "it gave the quantity \"number\" twice."},
      {[](AnalysisResult& r) { r.marks.clear(); }, "it promises \"ring\" and did not give it."}};
  for (const auto& [change, sentence] : rows) {
    AnalysisResult r = sound_result();
    change(r);
    const std::string said = fault_of(r, sound_description(), &kPatchGrid);
    EXPECT_NE(said.find(sentence), std::string::npos) << "said: " << said << "\nexpected: " << sentence;
  }
}

TEST(ResultCheck, AWheelsetsFieldsHaveAGridOfTheirOwn) {
  AnalysisResult r = sound_result();
  r.fields[0].grid.dx_mm = 2;
  EXPECT_EQ(fault_of(r, sound_description(), nullptr), "");
}

TEST(ResultCheck, ADescriptionIsChecked) {
  using Change = std::function<void(Description&)>;
  const std::vector<std::pair<Change, std::string>> rows = {
      {[](Description& d) { d.id = ""; }, "its id \"\" is not a name in snake_case"},
      {[](Description& d) { d.id = "Sound"; }, "its id \"Sound\" is not"},
      {[](Description& d) { d.id = "a/b"; }, "its id \"a/b\" is not"},
      {[](Description& d) { d.gives[0] = "sh are"; }, "its result \"sh are\" is not"},
      {[](Description& d) { d.parameters[0].key = "1st"; }, "its parameter \"1st\" is not"},
      {[](Description& d) { d.parameters[1].key = "level"; }, "its parameter \"level\" is there twice."},
      {[](Description& d) { d.parameters[0].value = 1.5; }, "has the default 1.5, which its own range does not allow."},
      {[](Description& d) { d.parameters[0].value = NAN; }, "has the default nan"},
      {[](Description& d) { d.parameters[1].value = std::string("c"); },
       "has the default \"c\", which is none of its choices."}};
  for (const auto& [change, sentence] : rows) {
    Description d = sound_description();
    change(d);
    EXPECT_NE(fault_of(d).find(sentence), std::string::npos) << "said: " << fault_of(d) << "\nexpected: " << sentence;
  }
}

TEST(ResultCheck, TheInstalledOnesAreSound) {
  for (const Description& d : installed_analyses().descriptions()) EXPECT_EQ(fault_of(d), "") << d.id;
}

}  // namespace
}  // namespace runband
