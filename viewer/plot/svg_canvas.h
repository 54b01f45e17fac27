// The canvas as a page of SVG: words stay words, in an embedded font of the letters used.
#pragma once

#include <map>
#include <memory>
#include <set>
#include <string>

#include "viewer/plot/fonts.h"

namespace runband::plot {

/// Collects what is drawn; bytes() is the whole file. Canvas units are millimetres.
class SvgCanvas : public Canvas {
 public:
  SvgCanvas(double width_mm, double height_mm) : page_{0, 0, width_mm, height_mm} {}

  Box page() const override { return page_; }
  void line(std::span<const Point> points, const Stroke& stroke, bool closed) override;
  void polygon(std::span<const Point> points, const Colour& fill) override;
  void text(Point at, std::string_view words, const Font& font, const Colour& colour, Anchor anchor,
            double turn_deg) override;
  TextSize measure(std::string_view words, const Font& font) const override;
  void image(const Box& box, const Image& image, bool smooth) override;
  void push_clip(std::span<const Point> outline) override;
  void pop_clip() override { body_ += "</g>\n"; }

  /// @param title for readers, @param case_text kept in <metadata> where core/case/carried.h finds it.
  std::string bytes(const std::string& title, const std::string& case_text) const;

 private:
  Box page_;
  std::string body_;
  int clips_ = 0;
  std::map<const FontFile*, std::set<char32_t>> used_;
};

}  // namespace runband::plot
