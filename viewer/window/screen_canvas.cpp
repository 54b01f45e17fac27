#include "viewer/window/screen_canvas.h"

#define IMGUI_DEFINE_MATH_OPERATORS
#include <imgui.h>
#include <imgui_internal.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "viewer/plot/fonts.h"

namespace runband {

namespace {

ImU32 packed(const plot::Colour& c) {
  return IM_COL32(plot::byte_of(c.r), plot::byte_of(c.g), plot::byte_of(c.b), plot::byte_of(c.a));
}

ImVec2 at(plot::Point p) { return {static_cast<float>(p.x), static_cast<float>(p.y)}; }

bool is_rectangle(std::span<const plot::Point> o) {
  if (o.size() != 4) return false;
  for (std::size_t i = 0; i < 4; ++i) {
    const plot::Point a = o[i], b = o[(i + 1) % 4];
    if (std::abs(a.x - b.x) > 1e-9 && std::abs(a.y - b.y) > 1e-9) return false;
  }
  return true;
}

double signed_area(std::span<const plot::Point> o) {
  double area = 0;
  for (std::size_t i = 0; i < o.size(); ++i) {
    const plot::Point a = o[i], b = o[(i + 1) % o.size()];
    area += a.x * b.y - b.x * a.y;
  }
  return area / 2;
}

/// The part of a convex shape on the inner side of a clip's edge (Sutherland and Hodgman 1974).
std::vector<plot::Point> half(const std::vector<plot::Point>& shape, plot::Point a, plot::Point b, double turn) {
  std::vector<plot::Point> out;
  const auto side = [&](plot::Point p) { return turn * ((b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x)); };
  for (std::size_t i = 0; i < shape.size(); ++i) {
    const plot::Point p = shape[i], q = shape[(i + 1) % shape.size()];
    const double sp = side(p), sq = side(q);
    if (sp >= 0) out.push_back(p);
    if ((sp >= 0) != (sq >= 0)) {
      const double t = sp / (sp - sq);
      out.push_back({std::lerp(p.x, q.x, t), std::lerp(p.y, q.y, t)});
    }
  }
  return out;
}

bool inside(plot::Point p, const std::vector<plot::Point>& outline, double turn) {
  for (std::size_t i = 0; i < outline.size(); ++i) {
    const plot::Point a = outline[i], b = outline[(i + 1) % outline.size()];
    if (turn * ((b.x - a.x) * (p.y - a.y) - (b.y - a.y) * (p.x - a.x)) < 0) return false;
  }
  return true;
}

/// The range of t in which the segment lies inside the convex outline (Cyrus and Beck 1978).
std::pair<double, double> inside_range(plot::Point p, plot::Point q, const std::vector<plot::Point>& outline,
                                       double turn) {
  double from = 0, to = 1;
  for (std::size_t i = 0; i < outline.size(); ++i) {
    const plot::Point a = outline[i], b = outline[(i + 1) % outline.size()];
    const auto side = [&](plot::Point r) { return turn * ((b.x - a.x) * (r.y - a.y) - (b.y - a.y) * (r.x - a.x)); };
    const double sp = side(p), sq = side(q);
    if (sp < 0 && sq < 0) return {1, 0};
    if (sp < 0) from = std::max(from, sp / (sp - sq));
    if (sq < 0) to = std::min(to, sp / (sp - sq));
  }
  return {from, to};
}

void set_dashes(ImDrawList* list, const std::vector<ImVec2>& points, ImU32 colour, float width, plot::Dash dash) {
  const double unit = std::max(1.0, static_cast<double>(width));
  std::vector<double> pattern;
  if (dash == plot::Dash::dashed) pattern = {5 * unit, 3.5 * unit};
  if (dash == plot::Dash::dotted) pattern = {1.2 * unit, 2.6 * unit};
  if (dash == plot::Dash::chain) pattern = {9 * unit, 3 * unit, 1.5 * unit, 3 * unit};
  std::size_t k = 0;
  double left = pattern[0];
  bool on = true;
  for (std::size_t i = 0; i + 1 < points.size(); ++i) {
    const double dx = points[i + 1].x - points[i].x, dy = points[i + 1].y - points[i].y;
    const double length = std::hypot(dx, dy);
    double done = 0;
    if (length <= 0) continue;
    while (done < length) {
      const double step = std::min(left, length - done);
      const auto place = [&](double d) {
        return ImVec2(static_cast<float>(points[i].x + dx * d / length),
                      static_cast<float>(points[i].y + dy * d / length));
      };
      if (on) list->AddLine(place(done), place(done + step), colour, width);
      done += step;
      left -= step;
      if (left <= 1e-9) {
        k = (k + 1) % pattern.size();
        left = pattern[k];
        on = !on;
      }
    }
  }
}

}  // namespace

ScreenCanvas::ScreenCanvas(Screen& screen, ImDrawList* list, const plot::Box& page)
    : screen_(screen), list_(list), page_(page) {}

ScreenCanvas::~ScreenCanvas() {
  while (!clips_.empty()) pop_clip();
}

std::vector<plot::Point> ScreenCanvas::clipped(std::vector<plot::Point> convex) const {
  for (const Clip& clip : clips_) {
    const double turn = signed_area(clip.outline) < 0 ? -1 : 1;
    for (std::size_t i = 0; i < clip.outline.size() && !convex.empty(); ++i)
      convex = half(convex, clip.outline[i], clip.outline[(i + 1) % clip.outline.size()], turn);
  }
  return convex;
}

void ScreenCanvas::line(std::span<const plot::Point> points, const plot::Stroke& stroke, bool closed) {
  if (points.size() < 2) return;
  const ImU32 colour = packed(stroke.colour);
  const auto width = static_cast<float>(std::max(1.0, stroke.width));
  const auto emit = [&](std::vector<ImVec2>& run, bool whole) {
    if (run.size() < 2) return;
    if (stroke.dash != plot::Dash::solid) {
      if (whole) run.push_back(run.front());
      set_dashes(list_, run, colour, width, stroke.dash);
    } else {
      list_->AddPolyline(run.data(), static_cast<int>(run.size()), colour, whole ? ImDrawFlags_Closed : 0, width);
    }
  };
  std::vector<std::pair<const Clip*, double>> clips;
  for (const Clip& clip : clips_)
    if (!clip.outline.empty()) clips.emplace_back(&clip, signed_area(clip.outline) < 0 ? -1.0 : 1.0);
  std::vector<ImVec2> run;
  if (clips.empty()) {
    for (const plot::Point& p : points) run.push_back(at(p));
    emit(run, closed);
    return;
  }
  const std::size_t pieces = closed ? points.size() : points.size() - 1;
  for (std::size_t i = 0; i < pieces; ++i) {
    const plot::Point p = points[i], q = points[(i + 1) % points.size()];
    double from = 0, to = 1;
    for (const auto& [clip, turn] : clips) {
      const auto [f, t] = inside_range(p, q, clip->outline, turn);
      from = std::max(from, f);
      to = std::min(to, t);
    }
    if (from >= to) {
      emit(run, false);
      run.clear();
      continue;
    }
    const auto place = [&](double t) { return plot::Point{std::lerp(p.x, q.x, t), std::lerp(p.y, q.y, t)}; };
    if (run.empty() || from > 0) {
      emit(run, false);
      run.clear();
      run.push_back(at(place(from)));
    }
    run.push_back(at(place(to)));
  }
  emit(run, false);
}

void ScreenCanvas::polygon(std::span<const plot::Point> points, const plot::Colour& fill) {
  if (points.size() < 3 || fill.a <= 0) return;
  const ImU32 colour = packed(fill);
  const bool free = std::all_of(clips_.begin(), clips_.end(), [](const Clip& c) { return c.outline.empty(); });
  if (points.size() <= 4 && free) {
    std::vector<ImVec2> shape;
    for (const plot::Point& p : points) shape.push_back(at(p));
    // Anti-aliased filling wants one direction of turning.
    if (signed_area(points) < 0) std::reverse(shape.begin(), shape.end());
    list_->AddConvexPolyFilled(shape.data(), static_cast<int>(shape.size()), colour);
    return;
  }
  const std::vector<int>& triangles = screen_.filled(points);
  for (std::size_t k = 0; k + 2 < triangles.size(); k += 3) {
    const auto corner = [&](std::size_t i) { return points[static_cast<std::size_t>(triangles[k + i])]; };
    std::vector<plot::Point> shape{corner(0), corner(1), corner(2)};
    if (!free) shape = clipped(std::move(shape));
    if (shape.size() < 3) continue;
    // Plain triangles: the soft edge of neighbours would show as a seam.
    const int extra = static_cast<int>(shape.size());
    list_->PrimReserve((extra - 2) * 3, extra);
    const ImVec2 uv = ImGui::GetFontTexUvWhitePixel();
    const auto first = static_cast<ImDrawIdx>(list_->_VtxCurrentIdx);
    for (int i = 2; i < extra; ++i) {
      list_->PrimWriteIdx(first);
      list_->PrimWriteIdx(static_cast<ImDrawIdx>(first + i - 1));
      list_->PrimWriteIdx(static_cast<ImDrawIdx>(first + i));
    }
    for (const plot::Point& p : shape) list_->PrimWriteVtx(at(p), uv, colour);
  }
}

double ScreenCanvas::draw_letters(plot::Point where, std::string_view words, const plot::Font& font,
                                  std::uint32_t colour, bool equal) {
  ImFont* face = screen_.font(font.size, font.strong);
  const auto ratio = static_cast<float>(font.size / screen_.em_of(face));
  // Where the size is one of those baked, letters stand on whole pixels and stay sharp.
  const float size = std::abs(ratio - 1.0F) < 0.08F ? face->FontSize : face->FontSize * ratio;
  const float scale = size / face->FontSize;
  const double spacing = font.spacing * font.size;
  double widest = 0;
  if (equal)
    for (char digit = '0'; digit <= '9'; ++digit)
      widest = std::max(widest, static_cast<double>(face->GetCharAdvance(static_cast<ImWchar>(digit)) * scale));
  double x = where.x;
  const auto top = static_cast<float>(std::round(where.y - static_cast<double>(face->Ascent * scale)));
  for (const auto& [letter, byte] : plot::letters_of(words)) {
    const auto code = static_cast<ImWchar>(letter);
    const double advance = static_cast<double>(face->GetCharAdvance(code) * scale);
    const bool digit = equal && letter >= U'0' && letter <= U'9';
    const double shift = digit ? (widest - advance) / 2 : 0;
    if (colour != 0)
      face->RenderChar(list_, size, {static_cast<float>(std::round((x + shift) * 4) / 4), top}, colour, code);
    x += (digit ? widest : advance) + spacing;
  }
  return x - where.x - (words.empty() ? 0 : spacing);
}

void ScreenCanvas::text(plot::Point where, std::string_view words, const plot::Font& font, const plot::Colour& colour,
                        plot::Anchor anchor, double turn_deg) {
  const double width = draw_letters({0, 0}, words, font, 0, false);
  plot::Point start = where;
  if (anchor == plot::Anchor::middle) start.x -= width / 2;
  if (anchor == plot::Anchor::end) start.x -= width;
  for (const Clip& clip : clips_) {
    if (clip.outline.empty()) continue;
    const double turn = signed_area(clip.outline) < 0 ? -1 : 1;
    if (!inside({start.x, start.y}, clip.outline, turn) || !inside({start.x + width, start.y}, clip.outline, turn))
      return;
  }
  if (turn_deg == 0) start.x = std::round(start.x);
  const int first = list_->VtxBuffer.Size;
  draw_letters(start, words, font, packed(colour), false);
  if (turn_deg == 0) return;
  const double angle = -turn_deg * std::numbers::pi / 180;
  const auto c = static_cast<float>(std::cos(angle)), s = static_cast<float>(std::sin(angle));
  for (int i = first; i < list_->VtxBuffer.Size; ++i) {
    ImVec2& p = list_->VtxBuffer[i].pos;
    const float dx = p.x - static_cast<float>(where.x), dy = p.y - static_cast<float>(where.y);
    p = {static_cast<float>(where.x) + c * dx - s * dy, static_cast<float>(where.y) + s * dx + c * dy};
  }
}

void ScreenCanvas::number(plot::Point where, std::string_view words, const plot::Font& font, const plot::Colour& colour,
                          plot::Anchor anchor) {
  const double width = number_width(words, font);
  if (anchor == plot::Anchor::middle) where.x -= width / 2;
  if (anchor == plot::Anchor::end) where.x -= width;
  where.x = std::round(where.x);
  draw_letters(where, words, font, packed(colour), true);
}

double ScreenCanvas::number_width(std::string_view words, const plot::Font& font) const {
  return const_cast<ScreenCanvas*>(this)->draw_letters({0, 0}, words, font, 0, true);
}

plot::TextSize ScreenCanvas::measure(std::string_view words, const plot::Font& font) const {
  const plot::FontFile& file = plot::Fonts::shared().main_file(font.strong);
  return {const_cast<ScreenCanvas*>(this)->draw_letters({0, 0}, words, font, 0, false), file.capital_height * font.size,
          file.descent * font.size};
}

void ScreenCanvas::texture(const plot::Box& box, unsigned int name, bool upside_down) {
  const auto id = reinterpret_cast<ImTextureID>(static_cast<std::uintptr_t>(name));
  const std::vector<plot::Point> shape = clipped(plot::corners(box));
  if (shape.size() < 3) return;
  const int count = static_cast<int>(shape.size());
  list_->PushTextureID(id);
  list_->PrimReserve((count - 2) * 3, count);
  const auto first = static_cast<ImDrawIdx>(list_->_VtxCurrentIdx);
  for (int i = 2; i < count; ++i) {
    list_->PrimWriteIdx(first);
    list_->PrimWriteIdx(static_cast<ImDrawIdx>(first + i - 1));
    list_->PrimWriteIdx(static_cast<ImDrawIdx>(first + i));
  }
  for (const plot::Point& p : shape) {
    const double u = (p.x - box.x) / box.width, v = (p.y - box.y) / box.height;
    list_->PrimWriteVtx(at(p), {static_cast<float>(u), static_cast<float>(upside_down ? 1 - v : v)}, IM_COL32_WHITE);
  }
  list_->PopTextureID();
}

void ScreenCanvas::image(const plot::Box& box, const plot::Image& image, bool smooth) {
  if (image.rgba.empty()) return;
  texture(box, screen_.texture(image, smooth), false);
}

void ScreenCanvas::push_clip(std::span<const plot::Point> outline) {
  Clip clip;
  double x0 = 1e9, y0 = 1e9, x1 = -1e9, y1 = -1e9;
  for (const plot::Point& p : outline) {
    x0 = std::min(x0, p.x);
    y0 = std::min(y0, p.y);
    x1 = std::max(x1, p.x);
    y1 = std::max(y1, p.y);
  }
  if (!is_rectangle(outline)) clip.outline.assign(outline.begin(), outline.end());
  list_->PushClipRect({static_cast<float>(x0), static_cast<float>(y0)},
                      {static_cast<float>(x1), static_cast<float>(y1)}, true);
  clips_.push_back(std::move(clip));
}

void ScreenCanvas::pop_clip() {
  list_->PopClipRect();
  clips_.pop_back();
}

plot::Style screen_style(double scale) {
  plot::Style style;
  style.mm = 3.6 * scale;
  style.fine = std::max(1.0, scale);
  style.bold = 1.6 * scale;
  style.small_text = kNoteSize * scale;
  style.text = kBodySize * scale;
  return style;
}

}  // namespace runband
