// Words of a plate stay apart, inside the page and in the sizes of a drawing, whatever the paper.
#include <gtest/gtest.h>

#include <cmath>

#include "core/solve/solution.h"
#include "tests/plot/recording_canvas.h"
#include "viewer/plates/sheet.h"

namespace runband {
namespace {

using plot::RecordingCanvas;

Case demo(const std::string& name, const std::vector<std::string>& settings = {}) {
  return load_case(std::string(RUNBAND_DATA) + "/demo/" + name, settings);
}

Plate of_size(double width_mm, double height_mm) {
  Plate plate;
  plate.width_mm = width_mm;
  plate.height_mm = height_mm;
  return plate;
}

void expect_sound(const RecordingCanvas& canvas, const std::string& what) {
  EXPECT_EQ(canvas.first_overlap(), "") << what;
  EXPECT_EQ(canvas.first_outside(), "") << what;
  EXPECT_TRUE(canvas.balanced()) << what;
  for (const auto& words : canvas.words) {
    EXPECT_TRUE(words.font.size == plot::Style{}.small_text || words.font.size == plot::Style{}.text)
        << what << ": " << words.text;
  }
}

// Postcard to A3, lying and standing, and a column of a journal.
constexpr std::pair<double, double> kPapers[] = {{180, 120}, {120, 180}, {85, 60}, {85, 120}, {297, 210}, {420, 297}};

class Papers : public testing::TestWithParam<std::pair<double, double>> {};
INSTANTIATE_TEST_SUITE_P(Sizes, Papers, testing::ValuesIn(kPapers), [](const auto& instance) {
  return std::to_string(std::lround(instance.param.first)) + "x" + std::to_string(std::lround(instance.param.second));
});

TEST_P(Papers, PatchAndSectionKeepTheirWordsApart) {
  const auto [width, height] = GetParam();
  for (const char* name : {"curve12.toml", "flange_contact.toml", "new_1_40.toml"}) {
    const Solution solution = solve(demo(name));
    Plate plate = of_size(width, height);
    for (const std::string kind : {"patch", "section"}) {
      plate.kind = kind;
      RecordingCanvas canvas(width, height);
      kind == "patch" ? draw_patch_plate(solution, plate, canvas) : draw_section_plate(solution, plate, canvas);
      expect_sound(canvas, kind + " of " + name);
      EXPECT_TRUE(canvas.has("Peak pressure") || width < 100) << canvas.all_words();
    }
  }
}

TEST_P(Papers, TraverseKeepsItsWordsApart) {
  const auto [width, height] = GetParam();
  static const Traverse kTraverse = traverse(demo("curve12.toml"), -6, 6, 0.25);
  Plate plate = of_size(width, height);
  plate.kind = "traverse";
  RecordingCanvas canvas(width, height);
  draw_traverse_plate(kTraverse, plate, canvas);
  expect_sound(canvas, "traverse");
  EXPECT_TRUE(canvas.has("mm"));
}

TEST(PatchPlate, ShowsEveryLoadedContactAtOneScaleOrTheOneAskedFor) {
  const Solution solution = solve(demo("curve12.toml"));
  Plate plate = of_size(180, 120);
  plate.kind = "patch";
  RecordingCanvas all(180, 120);
  draw_patch_plate(solution, plate, all);
  std::vector<std::size_t> maps;
  for (std::size_t i = 0; i < all.images.size(); ++i)
    if (all.pictures[i].height > 1) maps.push_back(i);  // a colour bar is one pixel high
  const auto chosen = chosen_contacts(solution, "");
  ASSERT_EQ(maps.size(), chosen.size());
  ASSERT_GE(maps.size(), 2u);
  const double scale = all.images[maps[0]].width /
                       (solution.contacts[chosen[0]].patch->grid.nx * solution.contacts[chosen[0]].patch->grid.dx_mm);
  for (std::size_t k = 0; k < maps.size(); ++k) {
    const Grid& grid = solution.contacts[chosen[k]].patch->grid;
    EXPECT_NEAR(all.images[maps[k]].width, scale * grid.nx * grid.dx_mm, 1e-9);
    EXPECT_NEAR(all.images[maps[k]].height, scale * grid.ns * grid.ds_mm, 1e-9);
  }
  plate.contact = "left";
  RecordingCanvas one(180, 120);
  draw_patch_plate(solution, plate, one);
  EXPECT_EQ(one.images.size(), 2u);  // one patch, one colour bar
}

}  // namespace
}  // namespace runband
