#include <cmath>

#include "viewer/plot/plot.h"

namespace runband::plot {

Image image_of(const HeatMap& map) {
  Image image{map.nx, map.ny, {}};
  image.rgba.reserve(static_cast<std::size_t>(map.nx) * static_cast<std::size_t>(map.ny) * 4);
  for (int j = map.ny - 1; j >= 0; --j) {
    for (int i = 0; i < map.nx; ++i) {
      const double value =
          map.values[static_cast<std::size_t>(j) * static_cast<std::size_t>(map.nx) + static_cast<std::size_t>(i)];
      Colour colour{0, 0, 0, 0};
      if (!std::isnan(value) && !(map.empty_value && value == *map.empty_value)) {
        if (map.inks.empty()) {
          colour = colour_at(map.map, map.range.span() > 0 ? (value - map.range.low) / map.range.span() : 0.0);
        } else {
          colour = map.inks[static_cast<std::size_t>(std::max(0.0, value)) % map.inks.size()];
        }
      }
      image.rgba.insert(image.rgba.end(), {byte_of(colour.r), byte_of(colour.g), byte_of(colour.b), byte_of(colour.a)});
    }
  }
  return image;
}

Box draw_colour_bar(const Box& box, ColourMap map, const Range& range, const std::string& title,
                    const std::string& unit, Canvas& canvas, const Theme& theme, const Style& style) {
  const Font font = style.small();
  const TextSize size = canvas.measure("0", font);
  const double gap = style.mm, height = 2.6 * style.mm;
  Box bar{box.x, box.y, box.width, height};
  const std::string words = unit.empty() ? title : title + ", " + unit;
  const double label = canvas.measure(words, font).width;
  // The name stands at the end of the bar; where that leaves too little bar, below it.
  const bool beside = bar.width - label - 2 * gap > 30 * style.mm;
  if (beside) bar.width -= label + 2 * gap;
  constexpr int kSteps = 256;
  HeatMap steps{kSteps, 1, 0, 0, 1, 1, {}, map, {0, kSteps - 1}, {}, {}};
  for (int i = 0; i < kSteps; ++i) steps.values.push_back(i);
  canvas.image(bar, image_of(steps), true);
  canvas.line(corners(bar), {theme.quiet, style.fine * 0.6, Dash::solid}, true);
  if (beside) draw_text(canvas, {bar.right() + 2 * gap, bar.y + height / 2 + size.ascent / 2}, words, font, theme.ink);

  Places taken;
  const double below = bar.bottom() + gap * 1.4 + size.ascent;
  const Box within{box.x - gap * 4, box.y, box.width + 8 * gap, box.height};
  const auto put = [&](double value, const std::string& text, Anchor anchor) {
    const double x = bar.x + (value - range.low) / range.span() * bar.width;
    const std::pair<Point, Anchor> place[] = {{{x, below}, anchor}};
    if (taken.set(canvas, within, place, text, font, theme.quiet))
      draw_line(canvas, {x, bar.bottom()}, {x, bar.bottom() + 0.7 * gap}, {theme.quiet, style.fine, Dash::solid});
  };
  const int decimals = range.span() >= 20 ? 0 : range.span() >= 2 ? 1 : 3;
  put(range.low, number(range.low, decimals), Anchor::start);
  put(range.high, number(range.high, decimals), Anchor::end);
  for (const Tick& tick : linear_ticks(range, std::max(2, static_cast<int>(bar.width / (18 * style.mm)))))
    if (!tick.text.empty()) put(tick.value, tick.text, Anchor::middle);
  if (!beside)
    draw_text(canvas, {bar.x, below + size.ascent + size.descent + gap}, words, font, theme.ink, Anchor::start);
  return bar;
}

}  // namespace runband::plot
