// A canvas that remembers what was drawn on it, so that tests can ask about words, boxes and edges.
#pragma once

#include <string>
#include <vector>

#include "viewer/plot/canvas.h"
#include "viewer/plot/fonts.h"

namespace runband::plot {

class RecordingCanvas : public Canvas {
 public:
  struct Words {
    std::string text;
    Box box;
    Font font;
    Colour colour;
    double turn_deg = 0;
  };
  struct Drawn {
    std::vector<Point> points;
    Stroke stroke;  // width 0: a filled polygon of stroke.colour
    bool clipped = false;
  };

  RecordingCanvas(double width, double height) : page_{0, 0, width, height} {}
  Box page() const override { return page_; }
  void line(std::span<const Point> points, const Stroke& stroke, bool) override {
    drawn.push_back({{points.begin(), points.end()}, stroke, clips_ > 0});
  }
  void polygon(std::span<const Point> points, const Colour& fill) override {
    drawn.push_back({{points.begin(), points.end()}, {fill, 0, Dash::solid}, clips_ > 0});
  }
  void text(Point at, std::string_view text, const Font& font, const Colour& colour, Anchor anchor,
            double turn_deg) override {
    words.push_back({std::string(text), text_box(*this, at, text, font, anchor), font, colour, turn_deg});
  }
  TextSize measure(std::string_view text, const Font& font) const override {
    return Fonts::shared().measure(text, font);
  }
  void image(const Box& box, const Image& image, bool) override {
    images.push_back(box);
    pictures.push_back(image);
  }
  void push_clip(std::span<const Point>) override { ++clips_; }
  void pop_clip() override { --clips_; }

  /// "a" over "b" for the first two words that overlap; empty if none do.
  std::string first_overlap() const {
    for (std::size_t i = 0; i < words.size(); ++i)
      for (std::size_t j = i + 1; j < words.size(); ++j)
        if (words[i].turn_deg == 0 && words[j].turn_deg == 0 && words[i].box.overlaps(words[j].box))
          return "\"" + words[i].text + "\" over \"" + words[j].text + "\"";
    return {};
  }
  /// The first thing that leaves the page; empty if nothing does.
  std::string first_outside() const {
    const Box page = page_.grown(1e-6);
    for (const Words& w : words)
      if (!page.contains({w.box.x, w.box.y}) || !page.contains({w.box.right(), w.box.bottom()}))
        return "\"" + w.text + "\"";
    for (const Drawn& d : drawn)
      for (const Point& p : d.points)
        if (!d.clipped && !page.contains(p)) return "a line at " + std::to_string(p.x) + ", " + std::to_string(p.y);
    return {};
  }
  bool has(const std::string& piece) const {
    for (const Words& w : words)
      if (w.text.find(piece) != std::string::npos) return true;
    return false;
  }
  std::string all_words() const {
    std::string all;
    for (const Words& w : words) all += w.text + "\n";
    return all;
  }
  bool balanced() const { return clips_ == 0; }

  std::vector<Words> words;
  std::vector<Drawn> drawn;
  std::vector<Box> images;
  std::vector<Image> pictures;

 private:
  Box page_;
  int clips_ = 0;
};

}  // namespace runband::plot
