// A small font that holds only the letters a picture uses, for embedding in a page.
#pragma once

#include <set>
#include <string>

#include "viewer/plot/fonts.h"

namespace runband::plot {

/// An OpenType font (CFF outlines, 1000 units per em) with the letters in `letters` that the file has.
/// @return the bytes of the font; the same letters give the same bytes.
/// @accuracy outlines are rounded to 1/1000 of the size.
std::string subset_font(const FontFile& file, const std::set<char32_t>& letters);

/// "data:<kind>;base64,..." (RFC 2397).
std::string data_address(const std::string& kind, const std::string& bytes);

}  // namespace runband::plot
