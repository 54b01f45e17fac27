// A drawing becomes a file: PNG, SVG or PDF, of a true size in millimetres, the same bytes every time.
#pragma once

#include <filesystem>
#include <functional>
#include <optional>
#include <string>

#include "viewer/plot/canvas.h"

namespace runband::plot {

enum class PictureKind { png, svg, pdf };
/// By the ending. @throws InputError (bad_option) for any other.
PictureKind picture_kind(const std::filesystem::path& path);

struct PictureOptions {
  double width_mm = 180, height_mm = 120;
  double dpi = 300;              ///< PNG only
  std::optional<Colour> ground;  ///< empty: transparent
  std::string title;             ///< kept in the file
  std::string case_text;         ///< kept in the file, so that a picture can be opened as a case
  std::string date;              ///< ISO 8601, only if the reader wants one
};

/// Pixels of a PNG of these options. @throws InputError (out_of_range) unless 1..20000 on each side.
std::pair<int, int> pixels_of(const PictureOptions&);

/// @throws InputError (out_of_range) if the size or dpi cannot be drawn.
std::string picture_bytes(PictureKind, const PictureOptions&, const std::function<void(Canvas&)>& draw);
/// Whole or not at all. @throws InputError, FileError.
void write_picture(const std::filesystem::path&, const PictureOptions&, const std::function<void(Canvas&)>& draw);

/// Draws over an existing image of the page (the three-dimensional view) and returns PNG bytes.
std::string picture_over(Image under, const PictureOptions&, const std::function<void(Canvas&)>& draw);

}  // namespace runband::plot
