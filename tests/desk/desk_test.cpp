#include "viewer/desk/desk.h"

#include <gtest/gtest.h>
#include <unistd.h>

#include <filesystem>
#include <set>

#include "core/base/error.h"
#include "core/base/file.h"

namespace runband {
namespace {

const std::filesystem::path kDemo = std::filesystem::path(RUNBAND_DATA) / "demo";

std::filesystem::path fresh_folder(const std::string& name) {
  const auto folder = std::filesystem::temp_directory_path() / ("runband_desk_" + name + std::to_string(::getpid()));
  std::filesystem::remove_all(folder);
  return folder;
}

TEST(Desk, OpensSolvesAndShowsTheSolutionThatSolveGives) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  desk.settle();
  ASSERT_TRUE(desk.now().solution);
  EXPECT_TRUE(desk.now().whole);
  EXPECT_FALSE(desk.behind(0));
  const Solution direct = solve(load_case(kDemo / "curve12.toml"));
  EXPECT_EQ(solution_csv(*desk.now().solution), solution_csv(direct)) << "the window and the command answer alike";
  ASSERT_TRUE(desk.now().traverse);
  EXPECT_GT(desk.now().traverse->lateral_mm.size(), 100U);
  EXPECT_FALSE(desk.now().traverse->jumps.empty());
}

TEST(Desk, ManyQuickMovesEndInTheLastState) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  for (int k = 0; k <= 60; ++k) {
    desk.edit("Move", "drag", [k](Case& c) { c.state.lateral_mm.assign(1, -3 + k * 0.1); });
    desk.tick(k * 0.01);
  }
  desk.settle();
  ASSERT_TRUE(desk.now().solution);
  EXPECT_NEAR(desk.now().solution->asked.state.lateral_mm.front(), 3.0, 1e-9);
  EXPECT_TRUE(desk.now().whole);
  EXPECT_FALSE(desk.behind(0));
}

TEST(Desk, AStateWithoutContactSaysSoAndKeepsTheLastPicture) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  desk.settle();
  const auto before = desk.now().solution;
  desk.edit("Move", "", [](Case& c) { c.state.lateral_mm.assign(1, 80); });
  desk.settle();
  ASSERT_TRUE(desk.now().failure);
  EXPECT_NE(desk.now().failure->message.find("80"), std::string::npos) << desk.now().failure->message;
  EXPECT_EQ(desk.now().solution, before);
  desk.undo();
  desk.settle();
  EXPECT_FALSE(desk.now().failure);
  EXPECT_TRUE(desk.now().solution);
}

TEST(Desk, UndoTakesBackViewAndCaseInTheOrderTheyWereDone) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  const double start = desk.now().document.current().state.lateral_mm.front();
  desk.edit("Move", "", [](Case& c) { c.state.lateral_mm.assign(1, 1.5); });
  desk.edit_view("Cut", "", [](View& v) { v.section_cut = true; });
  desk.edit("Yaw", "", [](Case& c) { c.state.yaw_mrad = -2; });
  EXPECT_EQ(desk.undo_words(), "Yaw");
  desk.undo();
  EXPECT_NE(desk.now().document.current().state.yaw_mrad, -2);
  EXPECT_TRUE(desk.view().section_cut);
  desk.undo();
  EXPECT_FALSE(desk.view().section_cut);
  desk.undo();
  EXPECT_EQ(desk.now().document.current().state.lateral_mm.front(), start);
  for (int k = 0; k < 3; ++k) desk.redo();
  EXPECT_TRUE(desk.view().section_cut);
  EXPECT_EQ(desk.now().document.current().state.yaw_mrad, -2);
}

TEST(Desk, ACaseThatCannotBeReadLeavesTheDeskAsItWas) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  desk.settle();
  const std::string name = desk.now().document.name();
  EXPECT_THROW(desk.open(kDemo / "no_such_case.toml"), Error);
  EXPECT_THROW(desk.open(kDemo / "wheel_new.csv"), Error);
  EXPECT_EQ(desk.now().document.name(), name);
  EXPECT_TRUE(desk.now().solution);
}

TEST(Desk, UnsavedWorkIsAskedAboutBeforeItIsLost) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  desk.ask_to_quit();
  EXPECT_TRUE(desk.quit_asked()) << "nothing was changed";
  Desk second({});
  second.open(kDemo / "curve12.toml");
  second.edit("Move", "", [](Case& c) { c.state.lateral_mm.assign(1, 1); });
  second.ask_to_quit();
  EXPECT_FALSE(second.quit_asked());
  EXPECT_EQ(second.prompt.kind, Prompt::Kind::unsaved);
}

TEST(Desk, WhatACrashLeftIsOfferedAtTheNextStart) {
  const auto state = fresh_folder("crash");
  std::filesystem::create_directories(state / "kept");
  // A process that is gone: its number is beyond the largest that Linux gives.
  write_file(state / "kept" / "99999999-0.json",
             std::string("{\"case\": \"title = \\\"lost\\\"\\n\", \"folder\": \"/\", \"file\": \"\"}"));
  Desk desk({state, &installed_analyses(), {}});
  ASSERT_EQ(desk.recoverable.size(), 1U);
  EXPECT_EQ(desk.prompt.kind, Prompt::Kind::recover);
  EXPECT_NE(desk.recoverable[0].case_text.find("lost"), std::string::npos);
  std::filesystem::remove_all(state);
}

TEST(Desk, WorkIsKeptWhileItIsUnsavedAndForgottenWhenItIsNot) {
  const auto state = fresh_folder("keep");
  {
    Desk desk({state, &installed_analyses(), {}});
    desk.open(kDemo / "curve12.toml");
    desk.edit("Move", "", [](Case& c) { c.state.lateral_mm.assign(1, 1.25); });
    desk.tick(10);
    std::size_t kept = 0;
    for (const auto& entry : std::filesystem::directory_iterator(state / "kept")) {
      ++kept;
      EXPECT_NE(read_file(entry.path()).find("1.25"), std::string::npos);
    }
    EXPECT_EQ(kept, 1U);
    EXPECT_TRUE(desk.store().left_behind().empty()) << "this process is alive";
    desk.undo();
    desk.tick(20);
    EXPECT_TRUE(std::filesystem::is_empty(state / "kept"));
  }
  std::filesystem::remove_all(state);
}

TEST(Desk, RecentFilesAndLayoutOutliveTheProgram) {
  const auto state = fresh_folder("layout");
  {
    Desk desk({state, &installed_analyses(), {}});
    desk.open(kDemo / "curve12.toml");
    desk.open(kDemo / "bench.toml");
    desk.layout().theme = plot::ThemeName::dark;
    desk.layout().left = 333;
  }
  const Store again(state);
  EXPECT_EQ(again.layout.theme, plot::ThemeName::dark);
  EXPECT_EQ(again.layout.left, 333);
  ASSERT_EQ(again.recent().size(), 2U);
  EXPECT_EQ(std::filesystem::path(again.recent()[0]).filename(), "bench.toml");
  std::filesystem::remove_all(state);
}

TEST(Desk, ADamagedLayoutFileIsAFirstStart) {
  const auto state = fresh_folder("damaged");
  std::filesystem::create_directories(state);
  write_file(state / "window.json", std::string("{\"left\": \"wide\", "));
  const Store store(state);
  EXPECT_EQ(store.layout.left, Layout{}.left);
  std::filesystem::remove_all(state);
}

TEST(Desk, TwoCasesAreSolvedSideBySide) {
  Desk desk({});
  desk.open(kDemo / "curve12.toml");
  ASSERT_TRUE(desk.actions().run("compare.copy"));
  EXPECT_TRUE(desk.two());
  EXPECT_EQ(desk.active(), 0);
  desk.edit("Move", "", [](Case& c) { c.state.lateral_mm.assign(1, -2); });
  desk.settle();
  ASSERT_TRUE(desk.place(0).solution && desk.place(1).solution);
  EXPECT_NE(desk.place(0).solution->pose.lateral_mm, desk.place(1).solution->pose.lateral_mm);
  ASSERT_TRUE(desk.actions().run("compare.swap"));
  EXPECT_EQ(desk.active(), 1);
  desk.close_second();
  EXPECT_FALSE(desk.two());
}

TEST(Actions, EveryOneHasWordsAGroupAndAKeyOfItsOwn) {
  Desk desk({});
  std::set<std::string> ids, chords;
  for (const Action& action : desk.actions().all()) {
    EXPECT_TRUE(ids.insert(action.id).second) << action.id;
    EXPECT_FALSE(action.words.empty());
    EXPECT_FALSE(action.group.empty());
    EXPECT_FALSE(action.help.empty()) << action.id;
    if (!action.chord.key.empty()) {
      EXPECT_TRUE(chords.insert(action.chord.words()).second) << action.chord.words();
    }
  }
  EXPECT_GT(ids.size(), 40U);
}

TEST(Actions, AreFoundByPartsOfTheirWords) {
  Desk desk({});
  const auto found = desk.actions().matching("keep pict");
  ASSERT_FALSE(found.empty());
  EXPECT_EQ(found.front()->id, "file.keep_picture");
  EXPECT_TRUE(desk.actions().matching("no such thing at all").empty());
}

}  // namespace
}  // namespace runband
