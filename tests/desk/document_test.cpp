#include "viewer/desk/document.h"

#include <gtest/gtest.h>

#include <filesystem>

#include "core/base/error.h"
#include "core/base/file.h"

namespace runband {
namespace {

Case demo() { return load_case(std::filesystem::path(RUNBAND_DATA) / "demo" / "curve12.toml"); }

void move_to(Document& d, double y, const std::string& merge) {
  d.edit("Move", merge, [y](Case& c) { c.state.lateral_mm.assign(1, y); });
}

TEST(Document, UndoAndRedoWalkTheWholeHistory) {
  Document d(demo());
  const double start = d.current().state.lateral_mm.front();
  for (int k = 1; k <= 5; ++k) move_to(d, start + k, "");
  for (int k = 4; k >= 0; --k) {
    d.undo();
    EXPECT_EQ(d.current().state.lateral_mm.front(), start + k);
  }
  EXPECT_FALSE(d.can_undo());
  EXPECT_FALSE(d.unsaved());
  d.redo();
  EXPECT_EQ(d.current().state.lateral_mm.front(), start + 1);
  move_to(d, 9, "");
  EXPECT_FALSE(d.can_redo()) << "a new step ends what could be done again";
}

TEST(Document, ADragIsOneStep) {
  Document d(demo());
  const double start = d.current().state.lateral_mm.front();
  for (int k = 1; k <= 30; ++k) move_to(d, k * 0.1, "drag");
  d.end_gesture();
  for (int k = 1; k <= 30; ++k) move_to(d, 3 + k * 0.1, "drag");
  d.undo();
  EXPECT_NEAR(d.current().state.lateral_mm.front(), 3.0, 1e-12);
  d.undo();
  EXPECT_EQ(d.current().state.lateral_mm.front(), start);
}

TEST(Document, AnEditThatChangesNothingIsNoStep) {
  Document d(demo());
  EXPECT_FALSE(d.edit("Nothing", "", [](Case&) {}));
  EXPECT_FALSE(d.can_undo());
  EXPECT_EQ(d.revision(), 0U);
}

TEST(Document, SavedElsewhereItsProfilesAreStillFound) {
  const auto folder = std::filesystem::temp_directory_path() / "runband_document_test" / "deeper" / "still";
  std::filesystem::create_directories(folder);
  Document d(demo());
  d.edit("Title", "", [](Case& c) { c.title = "moved"; });
  EXPECT_TRUE(d.unsaved());
  d.save_as(folder / "moved.toml");
  EXPECT_FALSE(d.unsaved());
  const Case again = load_case(folder / "moved.toml");
  EXPECT_EQ(again.title, "moved");
  for (int k = 0; k < 2; ++k) {
    EXPECT_NO_THROW(load_profile(again.wheels[k].profile, ProfileKind::wheel, again.wheels[k].options, again.folder));
    EXPECT_NO_THROW(load_profile(again.rails[k].profile, ProfileKind::rail, again.rails[k].options, again.folder));
  }
  std::filesystem::remove_all(std::filesystem::temp_directory_path() / "runband_document_test");
}

TEST(Document, AFailedSaveLeavesTheDocumentUnsavedAndTheFileWhole) {
  Document d(demo());
  d.edit("Title", "", [](Case& c) { c.title = "x"; });
  EXPECT_THROW(d.save_as("/proc/nowhere/case.toml"), FileError);
  EXPECT_TRUE(d.unsaved());
  EXPECT_TRUE(d.file().empty());
}

}  // namespace
}  // namespace runband
