// Words to glyphs: Inter, and DejaVu Sans for letters that Inter lacks.
#pragma once

#include <map>
#include <memory>
#include <string>
#include <string_view>
#include <vector>

#include "viewer/plot/canvas.h"

typedef struct FT_LibraryRec_* FT_Library;
typedef struct FT_FaceRec_* FT_Face;
typedef struct _cairo_font_face cairo_font_face_t;

namespace runband::plot {

/// One font file, opened.
struct FontFile {
  std::string family;  ///< as the file names itself
  std::string path;
  bool strong = false;
  FT_Face face = nullptr;
  cairo_font_face_t* cairo_face = nullptr;
  double units_per_em = 1000;
  double capital_height = 0.73;  ///< in units of the size
  double descent = 0.2;          ///< depth of letters such as g, in units of the size
};

/// A letter placed on the baseline, in units of the size.
struct PlacedGlyph {
  const FontFile* font = nullptr;
  unsigned long glyph = 0;
  double x = 0;
  std::size_t byte = 0, bytes = 0;  ///< the piece of the words it stands for
  char32_t letter = 0;
};

struct Shaped {
  std::vector<PlacedGlyph> glyphs;
  double width = 0;  ///< in units of the size
};

/// The fonts of a process; opened once, shared by every canvas. Not for two threads at once.
class Fonts {
 public:
  static Fonts& shared();
  ~Fonts();
  Fonts(const Fonts&) = delete;
  Fonts& operator=(const Fonts&) = delete;

  /// Unhinted advances, no kerning, so that every backend and reader sets the same width.
  Shaped shape(std::string_view words, const Font& font) const;
  TextSize measure(std::string_view words, const Font& font) const;
  const FontFile& main_file(bool strong) const { return *chains_[strong ? 1 : 0].front(); }
  /// In the order in which they are asked for a letter.
  const std::vector<const FontFile*>& chain(bool strong) const { return chains_[strong ? 1 : 0]; }

 private:
  Fonts();
  FT_Library library_ = nullptr;
  std::vector<std::unique_ptr<FontFile>> files_;
  std::vector<const FontFile*> chains_[2];  // regular, strong: first that has the letter wins
};

/// Letters of UTF-8 words with their byte positions; a bad byte reads as U+FFFD.
std::vector<std::pair<char32_t, std::size_t>> letters_of(std::string_view words);

}  // namespace runband::plot
