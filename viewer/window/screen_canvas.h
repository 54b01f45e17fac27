// The canvas of the screen: what plots draw on in a window.
#pragma once

#include <vector>

#include "viewer/plot/plot.h"
#include "viewer/window/screen.h"

namespace runband {

/// Draws on one of the interface's draw lists, in pixels. Cheap to make; lives for one frame.
class ScreenCanvas final : public plot::Canvas {
 public:
  ScreenCanvas(Screen& screen, ImDrawList* list, const plot::Box& page);
  ~ScreenCanvas() override;

  plot::Box page() const override { return page_; }
  void line(std::span<const plot::Point> points, const plot::Stroke& stroke, bool closed) override;
  void polygon(std::span<const plot::Point> points, const plot::Colour& fill) override;
  void text(plot::Point at, std::string_view words, const plot::Font& font, const plot::Colour& colour,
            plot::Anchor anchor, double turn_deg) override;
  plot::TextSize measure(std::string_view words, const plot::Font& font) const override;
  void image(const plot::Box& box, const plot::Image& image, bool smooth) override;
  void push_clip(std::span<const plot::Point> outline) override;
  void pop_clip() override;

  /// An OpenGL texture over the box; `upside_down` for textures whose first row is the lowest.
  void texture(const plot::Box& box, unsigned int name, bool upside_down);
  /// As text(), with every digit as wide as the widest, so that numbers stand in columns and do not tremble.
  void number(plot::Point at, std::string_view words, const plot::Font& font, const plot::Colour& colour,
              plot::Anchor anchor);
  double number_width(std::string_view words, const plot::Font& font) const;

 private:
  struct Clip {
    std::vector<plot::Point> outline;  ///< empty: the rectangle of the draw list does it
  };
  std::vector<plot::Point> clipped(std::vector<plot::Point> convex) const;
  double draw_letters(plot::Point at, std::string_view words, const plot::Font& font, std::uint32_t colour, bool equal);
  Screen& screen_;
  ImDrawList* list_;
  plot::Box page_;
  std::vector<Clip> clips_;
};

/// Style of plots on a screen: pixels, hair lines, the interface's sizes.
plot::Style screen_style(double scale);

}  // namespace runband
