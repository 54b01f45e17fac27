#include "viewer/panels/volume_cut.h"

#include <algorithm>
#include <cmath>

namespace runband {

VolumeCut cut_through_worst(const Volume& volume, int rows) {
  VolumeCut cut;
  const Grid& g = volume.grid;
  const auto layer_size = static_cast<std::size_t>(g.cells());
  if (volume.depth_mm.empty() || layer_size == 0 || volume.values.size() < layer_size * volume.depth_mm.size())
    return cut;
  const auto worst = std::max_element(volume.values.begin(), volume.values.end()) - volume.values.begin();
  const int j = static_cast<int>(static_cast<std::size_t>(worst) % layer_size) / g.nx;
  cut.nx = g.nx;
  cut.rows = rows;
  cut.dx_mm = g.dx_mm;
  cut.x0_mm = g.x0_mm - g.dx_mm / 2;
  cut.s_mm = g.s(j);
  cut.depth_mm = volume.depth_mm.back();
  const auto value = [&](std::size_t k, int i) {
    return volume.values[k * layer_size + static_cast<std::size_t>(j * g.nx + i)];
  };
  for (int row = 0; row < rows; ++row) {
    const double depth = cut.depth_mm * row / (rows - 1);
    const auto above = std::upper_bound(volume.depth_mm.begin(), volume.depth_mm.end(), depth);
    const auto high = std::min(static_cast<std::size_t>(above - volume.depth_mm.begin()), volume.depth_mm.size() - 1);
    const std::size_t low = high > 0 ? high - 1 : 0;
    const double span = volume.depth_mm[high] - volume.depth_mm[low];
    const double t = span > 0 ? std::clamp((depth - volume.depth_mm[low]) / span, 0.0, 1.0) : 0.0;
    for (int i = 0; i < g.nx; ++i) {
      cut.values.push_back(std::lerp(value(low, i), value(high, i), t));
      cut.highest = std::max(cut.highest, cut.values.back());
    }
  }
  return cut;
}

std::vector<std::pair<plot::Point, plot::Point>> line_of_equal_value(const VolumeCut& cut, double value) {
  std::vector<std::pair<plot::Point, plot::Point>> pieces;
  const auto at = [&](int i, int row) { return cut.values[static_cast<std::size_t>(row * cut.nx + i)]; };
  const auto x_of = [&](double i) { return cut.x0_mm + (i + 0.5) * cut.dx_mm; };
  const auto depth_of = [&](double row) { return cut.depth_mm * row / (cut.rows - 1); };
  for (int row = 0; row + 1 < cut.rows; ++row) {
    for (int i = 0; i + 1 < cut.nx; ++i) {
      const double v[4] = {at(i, row), at(i + 1, row), at(i + 1, row + 1), at(i, row + 1)};
      const double cx[4] = {0, 1, 1, 0}, cy[4] = {0, 0, 1, 1};
      plot::Point crossing[4];
      int count = 0;
      for (int e = 0; e < 4; ++e) {
        const int f = (e + 1) % 4;
        if ((v[e] < value) == (v[f] < value)) continue;
        const double t = (value - v[e]) / (v[f] - v[e]);
        crossing[count++] = {x_of(i + std::lerp(cx[e], cx[f], t)), depth_of(row + std::lerp(cy[e], cy[f], t))};
      }
      if (count >= 2) pieces.emplace_back(crossing[0], crossing[1]);
      if (count == 4) pieces.emplace_back(crossing[2], crossing[3]);
    }
  }
  return pieces;
}

void draw_volume_cut(const Volume& volume, const DetailSubject& subject, plot::Point centre, double radius,
                     double scale, plot::Canvas& canvas, const plot::Theme& theme, const plot::Style& style) {
  const std::vector<plot::Point> ring = plot::circle(centre, radius);
  canvas.polygon(ring, theme.sheet);
  const VolumeCut cut = cut_through_worst(volume);
  canvas.push_clip(ring);
  if (cut.nx > 1) {
    const double surface = centre.y - radius * 0.42;
    plot::HeatMap map;
    map.nx = cut.nx;
    map.ny = cut.rows;
    map.map = subject.map;
    map.range = subject.range;
    // A heat map's first row is its lowest.
    for (int row = cut.rows - 1; row >= 0; --row)
      for (int i = 0; i < cut.nx; ++i) map.values.push_back(cut.values[static_cast<std::size_t>(row * cut.nx + i)]);
    const plot::Box box{centre.x + cut.x0_mm * scale, surface, cut.nx * cut.dx_mm * scale, cut.depth_mm * scale};
    canvas.image(box, plot::image_of(map), true);
    constexpr int kLevels = 8;
    for (int k = 1; k < kLevels; ++k) {
      const double value = subject.range.low + subject.range.span() * k / kLevels;
      for (const auto& [a, b] : line_of_equal_value(cut, value))
        plot::draw_line(canvas, {centre.x + a.x * scale, surface + a.y * scale},
                        {centre.x + b.x * scale, surface + b.y * scale},
                        {plot::with_opacity(theme.ink, 0.45), style.fine, plot::Dash::solid});
    }
    plot::draw_line(canvas, {centre.x - radius, surface}, {centre.x + radius, surface},
                    {theme.ink, style.bold, plot::Dash::solid});
    const double bar = std::pow(10.0, std::floor(std::log10(std::max(0.11, cut.depth_mm))));
    plot::draw_line(canvas, {box.right() + 1.5 * style.mm, surface},
                    {box.right() + 1.5 * style.mm, surface + bar * scale},
                    {theme.quiet, style.fine, plot::Dash::solid});
    canvas.text({box.right() + 2.3 * style.mm, surface + bar * scale / 2},
                plot::number(bar, bar < 1 ? 1 : 0) + "\u2009mm deep", style.small(), theme.quiet, plot::Anchor::start,
                0);
    canvas.text({centre.x, surface - 1.5 * style.mm},
                "cut along rolling at s " + plot::number(cut.s_mm, 1) + "\u2009mm", style.small(), theme.quiet,
                plot::Anchor::middle, 0);
  }
  canvas.pop_clip();
  canvas.line(ring, {theme.ink, style.bold, plot::Dash::solid}, true);
}

}  // namespace runband
