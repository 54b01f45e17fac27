#include "viewer/plot/cairo_canvas.h"

#include <cairo.h>

#include <numbers>
#include <string>

#include "viewer/plot/fonts.h"

namespace runband::plot {

namespace {

class CairoCanvas : public Canvas {
 public:
  CairoCanvas(cairo_t* cairo, double width_mm, double height_mm, double units_per_mm, bool text_as_outlines)
      : cairo_(cairo), page_{0, 0, width_mm, height_mm}, outlines_(text_as_outlines) {
    cairo_scale(cairo_, units_per_mm, units_per_mm);
    cairo_set_line_join(cairo_, CAIRO_LINE_JOIN_ROUND);
    cairo_set_fill_rule(cairo_, CAIRO_FILL_RULE_EVEN_ODD);
    cairo_set_tolerance(cairo_, 0.05);
  }

  Box page() const override { return page_; }

  void line(std::span<const Point> points, const Stroke& stroke, bool closed) override {
    if (points.size() < 2 || stroke.width <= 0) return;
    trace(points, closed);
    set_colour(stroke.colour);
    set_dash(stroke);
    cairo_set_line_width(cairo_, stroke.width);
    cairo_stroke(cairo_);
  }

  void polygon(std::span<const Point> points, const Colour& fill) override {
    if (points.size() < 3) return;
    trace(points, true);
    set_colour(fill);
    cairo_fill(cairo_);
  }

  void text(Point at, std::string_view words, const Font& font, const Colour& colour, Anchor anchor,
            double turn_deg) override {
    const Shaped shaped = Fonts::shared().shape(words, font);
    const double width = shaped.width * font.size;
    cairo_save(cairo_);
    cairo_translate(cairo_, at.x, at.y);
    cairo_rotate(cairo_, -turn_deg * std::numbers::pi / 180.0);
    cairo_translate(cairo_, anchor == Anchor::start ? 0 : anchor == Anchor::middle ? -width / 2 : -width, 0);
    cairo_font_options_t* options = cairo_font_options_create();
    cairo_font_options_set_hint_style(options, CAIRO_HINT_STYLE_NONE);
    cairo_font_options_set_hint_metrics(options, CAIRO_HINT_METRICS_OFF);
    cairo_font_options_set_antialias(options, CAIRO_ANTIALIAS_GRAY);
    cairo_set_font_options(cairo_, options);
    cairo_font_options_destroy(options);
    cairo_set_font_size(cairo_, font.size);
    set_colour(colour);
    for (std::size_t first = 0; first < shaped.glyphs.size();) first = show_run(shaped, first, words, font.size);
    cairo_restore(cairo_);
  }

  TextSize measure(std::string_view words, const Font& font) const override {
    return Fonts::shared().measure(words, font);
  }

  void image(const Box& box, const Image& picture, bool smooth) override {
    if (picture.width <= 0 || picture.height <= 0) return;
    cairo_surface_t* surface = cairo_image_surface_create(CAIRO_FORMAT_ARGB32, picture.width, picture.height);
    const int stride = cairo_image_surface_get_stride(surface);
    unsigned char* bytes = cairo_image_surface_get_data(surface);
    for (int j = 0; j < picture.height; ++j) {
      auto* row = reinterpret_cast<std::uint32_t*>(bytes + static_cast<std::ptrdiff_t>(j) * stride);
      for (int i = 0; i < picture.width; ++i) {
        const std::uint8_t* p =
            &picture.rgba[4 * (static_cast<std::size_t>(j) * static_cast<std::size_t>(picture.width) +
                               static_cast<std::size_t>(i))];
        const std::uint32_t a = p[3];
        const auto times = [a](std::uint32_t part) { return (part * a + 127) / 255; };
        row[i] = a << 24 | times(p[0]) << 16 | times(p[1]) << 8 | times(p[2]);
      }
    }
    cairo_surface_mark_dirty(surface);
    cairo_save(cairo_);
    cairo_rectangle(cairo_, box.x, box.y, box.width, box.height);
    cairo_clip(cairo_);
    cairo_translate(cairo_, box.x, box.y);
    cairo_scale(cairo_, box.width / picture.width, box.height / picture.height);
    cairo_set_source_surface(cairo_, surface, 0, 0);
    cairo_pattern_set_filter(cairo_get_source(cairo_), smooth ? CAIRO_FILTER_GOOD : CAIRO_FILTER_NEAREST);
    cairo_pattern_set_extend(cairo_get_source(cairo_), CAIRO_EXTEND_PAD);
    cairo_paint(cairo_);
    cairo_restore(cairo_);
    cairo_surface_destroy(surface);
  }

  void push_clip(std::span<const Point> outline) override {
    cairo_save(cairo_);
    trace(outline, true);
    cairo_clip(cairo_);
  }
  void pop_clip() override { cairo_restore(cairo_); }

 private:
  void set_colour(const Colour& c) { cairo_set_source_rgba(cairo_, c.r, c.g, c.b, c.a); }

  void set_dash(const Stroke& stroke) {
    const double w = stroke.width;
    cairo_set_line_cap(cairo_, stroke.dash == Dash::dotted ? CAIRO_LINE_CAP_ROUND : CAIRO_LINE_CAP_BUTT);
    const double dashed[] = {6 * w, 4 * w}, dotted[] = {0, 3 * w}, chain[] = {12 * w, 3 * w, 2 * w, 3 * w};
    switch (stroke.dash) {
      case Dash::solid:
        return cairo_set_dash(cairo_, nullptr, 0, 0);
      case Dash::dashed:
        return cairo_set_dash(cairo_, dashed, 2, 0);
      case Dash::dotted:
        return cairo_set_dash(cairo_, dotted, 2, 0);
      case Dash::chain:
        return cairo_set_dash(cairo_, chain, 4, 0);
    }
  }

  void trace(std::span<const Point> points, bool closed) {
    cairo_new_path(cairo_);
    for (const Point& p : points) cairo_line_to(cairo_, p.x, p.y);
    if (closed) cairo_close_path(cairo_);
  }

  // Shows the letters from `first` that share one font; returns the first of the next run.
  std::size_t show_run(const Shaped& shaped, std::size_t first, std::string_view words, double size) {
    const FontFile* file = shaped.glyphs[first].font;
    std::vector<cairo_glyph_t> glyphs;
    std::vector<cairo_text_cluster_t> clusters;
    std::string run;
    std::size_t k = first;
    for (; k < shaped.glyphs.size() && shaped.glyphs[k].font == file; ++k) {
      const PlacedGlyph& g = shaped.glyphs[k];
      glyphs.push_back({g.glyph, g.x * size, 0});
      clusters.push_back({static_cast<int>(g.bytes), 1});
      run.append(words.substr(g.byte, g.bytes));
    }
    cairo_set_font_face(cairo_, file->cairo_face);
    cairo_set_font_size(cairo_, size);
    if (outlines_) {
      cairo_new_path(cairo_);
      cairo_glyph_path(cairo_, glyphs.data(), static_cast<int>(glyphs.size()));
      cairo_set_fill_rule(cairo_, CAIRO_FILL_RULE_WINDING);
      cairo_fill(cairo_);
      cairo_set_fill_rule(cairo_, CAIRO_FILL_RULE_EVEN_ODD);
    } else {
      cairo_show_text_glyphs(cairo_, run.data(), static_cast<int>(run.size()), glyphs.data(),
                             static_cast<int>(glyphs.size()), clusters.data(), static_cast<int>(clusters.size()),
                             static_cast<cairo_text_cluster_flags_t>(0));
    }
    return k;
  }

  cairo_t* cairo_;
  Box page_;
  bool outlines_;
};

}  // namespace

std::unique_ptr<Canvas> make_cairo_canvas(cairo_t* cairo, double width_mm, double height_mm, double units_per_mm,
                                          bool text_as_outlines) {
  return std::make_unique<CairoCanvas>(cairo, width_mm, height_mm, units_per_mm, text_as_outlines);
}

}  // namespace runband::plot
