// PNG bytes with their true size and what they were made from.
#pragma once

#include <map>
#include <string>

#include "viewer/plot/canvas.h"

namespace runband::plot {

/// @param dpi   dots per inch, written as pHYs.
/// @param words keyword to UTF-8 text, written as uncompressed iTXt in order of keyword.
/// @param opaque leaves the alpha channel out.
std::string png_bytes(const Image& image, double dpi, const std::map<std::string, std::string>& words, bool opaque);

/// The iTXt texts of a PNG; empty if the bytes are no PNG.
std::map<std::string, std::string> png_words(const std::string& bytes);

}  // namespace runband::plot
