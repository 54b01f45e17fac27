#include <gtest/gtest.h>

#include <cmath>
#include <numbers>

#include "tests/plot/recording_canvas.h"
#include "viewer/plot/plot.h"

namespace runband::plot {
namespace {

Plot waves() {
  Plot plot;
  plot.title = "Waves";
  plot.caption = "of a seed, for looking";
  plot.x = {"lateral displacement", "mm", {}, false, true};
  plot.y = {"rolling radius difference", "mm", {}, false, true};
  Line line;
  for (int i = 0; i <= 100; ++i) {
    line.x.push_back(-8 + 0.16 * i);
    line.y.push_back(1500 * std::sin(0.1 * i));
  }
  line.label = "left";
  plot.lines.push_back(line);
  for (double& v : line.y) v = -v;
  line.label = "right";
  line.paint.ink = Ink::accent;
  plot.lines.push_back(line);
  plot.posts = {{-2, "", {Ink::warning, 1, {}}}, {5.6, "contact jumps here", {Ink::warning, 1, {}}}};
  plot.pointer = Pointer{3.25, "3.25"};
  plot.notes = {{0, 0, "middle", {}, Anchor::middle, 0, 1}};
  return plot;
}

Plot blob() {
  Plot plot;
  plot.title = "Left, tread";
  plot.x = {"along", "mm", {}, false, true};
  plot.y = {"across", "mm", {}, false, true};
  plot.equal_aspect = true;
  HeatMap map{40, 20, -10, -5, 0.5, 0.5, {}, ColourMap::ember, {0, 1000}, 0.0, {}};
  for (int j = 0; j < 20; ++j)
    for (int i = 0; i < 40; ++i) {
      const double r = std::hypot((i - 19.5) / 16, (j - 9.5) / 8);
      map.values.push_back(r < 1 ? 1000 * std::sqrt(1 - r * r) : 0.0);
    }
  plot.maps.push_back(map);
  plot.disc = ScaleDisc{};
  return plot;
}

class PlotSizes : public testing::TestWithParam<std::pair<double, double>> {};
INSTANTIATE_TEST_SUITE_P(Sizes, PlotSizes,
                         testing::Values(std::pair{40.0, 25.0}, std::pair{60.0, 60.0}, std::pair{90.0, 50.0},
                                         std::pair{180.0, 60.0}, std::pair{300.0, 200.0}));

TEST_P(PlotSizes, WordsStayApartAndInside) {
  const auto [width, height] = GetParam();
  for (const Plot& plot : {waves(), blob()}) {
    RecordingCanvas canvas(width, height);
    draw_plot(plot, canvas.page(), canvas, theme(ThemeName::paper), Style{});
    EXPECT_EQ(canvas.first_overlap(), "");
    EXPECT_EQ(canvas.first_outside(), "");
    EXPECT_TRUE(canvas.balanced());
    EXPECT_GE(canvas.words.size(), 4u);
    for (const auto& words : canvas.words)
      EXPECT_TRUE(words.font.size == Style{}.small_text || words.font.size == Style{}.text);
  }
}

TEST(DrawPlot, NamesAxesWithTheirUnits) {
  RecordingCanvas canvas(120, 60);
  draw_plot(waves(), canvas.page(), canvas, theme(ThemeName::paper), Style{});
  EXPECT_TRUE(canvas.has("lateral displacement, mm")) << canvas.all_words();
  EXPECT_TRUE(canvas.has("rolling radius difference, mm"));
  EXPECT_TRUE(canvas.has("\u22121\u2009000"));
  EXPECT_TRUE(canvas.has("3.25"));
}

TEST(DrawPlot, EqualAspectMeansEqualScale) {
  RecordingCanvas canvas(120, 50);
  const Frame frame = draw_plot(blob(), canvas.page(), canvas, theme(ThemeName::paper), Style{});
  EXPECT_NEAR(frame.data.width / frame.x.span(), frame.data.height / frame.y.span(), 1e-9);
  const Point there = frame.at(2.5, -1.5), back = frame.value(there);
  EXPECT_NEAR(back.x, 2.5, 1e-9);
  EXPECT_NEAR(back.y, -1.5, 1e-9);
}

TEST(DrawPlot, LogarithmicAxisPutsEqualRatiosAtEqualDistances) {
  Plot plot;
  plot.x = {"creepage", "1", Range{1e-4, 1e-1}, true, true};
  plot.y = {"force", "N", Range{1, 1000}, true, true};
  RecordingCanvas canvas(100, 60);
  const Frame frame = draw_plot(plot, canvas.page(), canvas, theme(ThemeName::paper), Style{});
  EXPECT_NEAR(frame.at(1e-3, 1).x - frame.at(1e-4, 1).x, frame.at(1e-1, 1).x - frame.at(1e-2, 1).x, 1e-9);
  EXPECT_TRUE(canvas.has("10\u207b\u00b3")) << canvas.all_words();
}

TEST(DrawPlot, BreaksALineAtNotANumber) {
  Plot plot;
  Line line;
  line.x = {0, 1, 2, 3, 4};
  line.y = {0, 1, std::nan(""), 1, 0};
  plot.lines.push_back(line);
  plot.grid = false;
  RecordingCanvas canvas(60, 40);
  draw_plot(plot, canvas.page(), canvas, theme(ThemeName::paper), Style{});
  int bold = 0;
  for (const auto& drawn : canvas.drawn) bold += drawn.stroke.width == Style{}.bold ? 1 : 0;
  EXPECT_EQ(bold, 2);
}

TEST(DrawPlot, SurvivesEmptyData) {
  RecordingCanvas canvas(60, 40);
  Plot plot;
  plot.lines.push_back({});
  EXPECT_NO_THROW(draw_plot(plot, canvas.page(), canvas, theme(ThemeName::dark), Style{}));
}

TEST(HeatMapImage, LeavesEmptyCellsClearAndPutsTheUpperRowFirst) {
  const HeatMap map{2, 2, 0, 0, 1, 1, {0, 1, 2, 3}, ColourMap::ember, {0, 3}, 0.0, {}};
  const Image image = image_of(map);
  EXPECT_EQ(image.rgba[3], 255);        // upper left is value 2
  EXPECT_EQ(image.rgba[4 * 2 + 3], 0);  // lower left is value 0: empty
  const Colour peak = colour_at(ColourMap::ember, 1);
  EXPECT_EQ(image.rgba[4], byte_of(peak.r));
}

TEST(CutTo, KeepsTheAreaInsideTheBox) {
  const auto area = [](const std::vector<Point>& ring) {
    double twice = 0;
    for (std::size_t i = 0; i < ring.size(); ++i) {
      const Point p = ring[i], q = ring[(i + 1) % ring.size()];
      twice += p.x * q.y - q.x * p.y;
    }
    return std::abs(twice) / 2;
  };
  // A quarter of a large square, a figure wholly inside, a figure wholly outside.
  EXPECT_NEAR(area(cut_to({{-10, -10}, {5, -10}, {5, 5}, {-10, 5}}, {0, 0, 10, 10})), 25, 1e-12);
  EXPECT_NEAR(area(cut_to({{1, 1}, {3, 1}, {3, 3}}, {0, 0, 10, 10})), 2, 1e-12);
  EXPECT_TRUE(cut_to({{20, 1}, {30, 1}, {30, 3}}, {0, 0, 10, 10}).empty());
}

TEST(Hatch, StaysInsideItsOutlineAndCoversIt) {
  RecordingCanvas canvas(40, 40);
  const auto outline = circle({20, 20}, 10);
  draw_hatch(canvas, outline, 45, 2, {{0, 0, 0, 1}, 0.1, Dash::solid});
  EXPECT_NEAR(static_cast<double>(canvas.drawn.size()), 10, 1);
  double length = 0;
  for (const auto& drawn : canvas.drawn) {
    for (const Point& p : drawn.points) EXPECT_LE(std::hypot(p.x - 20, p.y - 20), 10 + 1e-9);
    length += std::hypot(drawn.points[1].x - drawn.points[0].x, drawn.points[1].y - drawn.points[0].y);
  }
  // Length times spacing is about the area of the circle.
  EXPECT_NEAR(length * 2, std::numbers::pi * 100, 0.03 * std::numbers::pi * 100);
}

}  // namespace
}  // namespace runband::plot
