#include "viewer/plot/svg_canvas.h"

#include <array>
#include <charconv>
#include <cmath>

#include "core/case/carried.h"
#include "viewer/plot/font_subset.h"
#include "viewer/plot/png_file.h"

namespace runband::plot {

namespace {

// A coordinate with three decimals (a thousandth of a millimetre) and no trailing zeros.
std::string coordinate(double v) {
  char buffer[64];
  const double rounded = std::round(v * 1000) / 1000;
  const auto end =
      std::to_chars(buffer, buffer + sizeof buffer, rounded == 0 ? 0.0 : rounded, std::chars_format::fixed, 3);
  std::string text(buffer, end.ptr);
  while (text.back() == '0') text.pop_back();
  if (text.back() == '.') text.pop_back();
  return text;
}

constexpr std::array<std::pair<char, const char*>, 5> kEscapes{
    {{'&', "&amp;"}, {'<', "&lt;"}, {'>', "&gt;"}, {'"', "&quot;"}, {'\r', "&#13;"}}};

std::string escaped(std::string_view words) {
  std::string text;
  for (const char c : words) {
    const char* other = nullptr;
    for (const auto& [plain, escape] : kEscapes)
      if (c == plain) other = escape;
    if (other != nullptr)
      text += other;
    else
      text += c;
  }
  return text;
}

std::string path_of(std::span<const Point> points, bool closed) {
  std::string d;
  for (std::size_t i = 0; i < points.size(); ++i)
    d += (i == 0 ? "M" : "L") + coordinate(points[i].x) + " " + coordinate(points[i].y);
  return closed ? d + "Z" : d;
}

std::string paint(const char* what, const Colour& colour) {
  std::string text = std::string(what) + "=\"" + colour_to_hex(colour) + "\"";
  if (colour.a < 1) text += " " + std::string(what) + "-opacity=\"" + coordinate(colour.a) + "\"";
  return text;
}

std::string family_name(const FontFile& file) { return "Runband " + file.family; }

}  // namespace

void SvgCanvas::line(std::span<const Point> points, const Stroke& stroke, bool closed) {
  if (points.size() < 2 || stroke.width <= 0) return;
  body_ += "<path d=\"" + path_of(points, closed) + "\" fill=\"none\" " + paint("stroke", stroke.colour) +
           " stroke-width=\"" + coordinate(stroke.width) + "\" stroke-linejoin=\"round\"";
  const auto dash = [&](std::initializer_list<double> parts) {
    body_ += " stroke-dasharray=\"";
    for (const double part : parts) body_ += coordinate(part * stroke.width) + " ";
    body_.back() = '"';
  };
  if (stroke.dash == Dash::dashed) dash({6, 4});
  if (stroke.dash == Dash::dotted) {
    dash({0.01, 3});
    body_ += " stroke-linecap=\"round\"";
  }
  if (stroke.dash == Dash::chain) dash({12, 3, 2, 3});
  body_ += "/>\n";
}

void SvgCanvas::polygon(std::span<const Point> points, const Colour& fill) {
  if (points.size() < 3) return;
  body_ += "<path d=\"" + path_of(points, true) + "\" fill-rule=\"evenodd\" " + paint("fill", fill) + "/>\n";
}

void SvgCanvas::text(Point at, std::string_view words, const Font& font, const Colour& colour, Anchor anchor,
                     double turn_deg) {
  const Shaped shaped = Fonts::shared().shape(words, font);
  for (const PlacedGlyph& glyph : shaped.glyphs) used_[glyph.font].insert(glyph.letter);
  body_ += "<text ";
  if (turn_deg != 0) {
    body_ += "transform=\"translate(" + coordinate(at.x) + " " + coordinate(at.y) + ") rotate(" +
             coordinate(-turn_deg) + ")\"";
  } else {
    body_ += "x=\"" + coordinate(at.x) + "\" y=\"" + coordinate(at.y) + "\"";
  }
  body_ += " font-size=\"" + coordinate(font.size) + "\" " + paint("fill", colour);
  if (font.strong) body_ += " font-weight=\"600\"";
  if (font.spacing != 0) body_ += " letter-spacing=\"" + coordinate(font.spacing * font.size) + "\"";
  if (anchor != Anchor::start) body_ += anchor == Anchor::middle ? " text-anchor=\"middle\"" : " text-anchor=\"end\"";
  body_ += ">" + escaped(words) + "</text>\n";
}

TextSize SvgCanvas::measure(std::string_view words, const Font& font) const {
  return Fonts::shared().measure(words, font);
}

void SvgCanvas::image(const Box& box, const Image& picture, bool smooth) {
  if (picture.width <= 0 || picture.height <= 0) return;
  body_ += "<image x=\"" + coordinate(box.x) + "\" y=\"" + coordinate(box.y) + "\" width=\"" + coordinate(box.width) +
           "\" height=\"" + coordinate(box.height) + "\" preserveAspectRatio=\"none\"" +
           (smooth ? "" : " style=\"image-rendering:crisp-edges;image-rendering:pixelated\"") + " href=\"" +
           data_address("image/png", png_bytes(picture, 96, {}, false)) + "\"/>\n";
}

void SvgCanvas::push_clip(std::span<const Point> outline) {
  const std::string id = "clip" + std::to_string(++clips_);
  body_ += "<clipPath id=\"" + id + "\"><path d=\"" + path_of(outline, true) + "\"/></clipPath>\n<g clip-path=\"url(#" +
           id + ")\">\n";
}

std::string SvgCanvas::bytes(const std::string& title, const std::string& case_text) const {
  std::string text = "<?xml version=\"1.0\" encoding=\"UTF-8\"?>\n<svg xmlns=\"http://www.w3.org/2000/svg\" width=\"" +
                     coordinate(page_.width) + "mm\" height=\"" + coordinate(page_.height) + "mm\" viewBox=\"0 0 " +
                     coordinate(page_.width) + " " + coordinate(page_.height) + "\">\n<title>" + escaped(title) +
                     "</title>\n";
  if (!case_text.empty())
    text += std::string("<metadata id=\"") + kCarriedCaseKey + "\">" + kCarriedCaseKey + ":" +
            base64_encode(case_text) + "</metadata>\n";
  // Embedded under names of their own; the whole family, where a program knows it, comes next, so that an editor of
  // drawings without web fonts still finds it.
  std::string families, faces;
  for (const bool strong : {false, true}) {
    // Order of the fallback chain, not of addresses, so that the same picture gives the same bytes.
    std::map<std::string, const FontFile*> by_path;
    for (const auto& [file, letters] : used_)
      if (file->strong == strong) by_path[(file == &Fonts::shared().main_file(strong) ? "0" : "1") + file->path] = file;
    for (const auto& [key, file] : by_path) {
      faces += "@font-face{font-family:'" + family_name(*file) + "';font-weight:" + (strong ? "600" : "400") +
               ";src:url(" + data_address("font/otf", subset_font(*file, used_.at(file))) + ") format('opentype')}\n";
      const std::string both = "'" + family_name(*file) + "','" + file->family + "',";
      if (families.find(both) == std::string::npos) families += both;
    }
  }
  if (!faces.empty())
    text += "<style>\n" + faces + "text{font-family:" + families +
            "sans-serif;font-kerning:none;font-variant-ligatures:none;font-feature-settings:'calt' 0;white-space:pre}\n"
            "</style>\n";
  return text + body_ + "</svg>\n";
}

}  // namespace runband::plot
