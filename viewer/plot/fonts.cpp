#include "viewer/plot/fonts.h"

#include <cairo-ft.h>
#include <fontconfig/fontconfig.h>
#include <ft2build.h>
#include FT_FREETYPE_H
#include FT_TRUETYPE_TABLES_H

#include "core/base/error.h"

namespace runband::plot {

namespace {

struct Found {
  std::string path, family;
  int index = 0;
};

// The file fontconfig holds nearest; `family` tells whether it is the one asked for.
Found find_font(const char* family, bool strong) {
  Found found;
  FcPattern* wanted = FcPatternCreate();
  FcPatternAddString(wanted, FC_FAMILY, reinterpret_cast<const FcChar8*>(family));
  FcPatternAddInteger(wanted, FC_WEIGHT, strong ? FC_WEIGHT_DEMIBOLD : FC_WEIGHT_REGULAR);
  FcPatternAddInteger(wanted, FC_SLANT, FC_SLANT_ROMAN);
  FcPatternAddInteger(wanted, FC_WIDTH, FC_WIDTH_NORMAL);
  FcPatternAddBool(wanted, FC_VARIABLE, FcFalse);
  FcConfigSubstitute(nullptr, wanted, FcMatchPattern);
  FcDefaultSubstitute(wanted);
  FcResult result = FcResultNoMatch;
  if (FcPattern* match = FcFontMatch(nullptr, wanted, &result)) {
    FcChar8* text = nullptr;
    if (FcPatternGetString(match, FC_FILE, 0, &text) == FcResultMatch) found.path = reinterpret_cast<const char*>(text);
    if (FcPatternGetString(match, FC_FAMILY, 0, &text) == FcResultMatch)
      found.family = reinterpret_cast<const char*>(text);
    FcPatternGetInteger(match, FC_INDEX, 0, &found.index);
    FcPatternDestroy(match);
  }
  FcPatternDestroy(wanted);
  return found;
}

double glyph_extent(FT_Face face, char32_t letter, bool top, double fallback) {
  const FT_UInt glyph = FT_Get_Char_Index(face, letter);
  if (glyph == 0 || FT_Load_Glyph(face, glyph, FT_LOAD_NO_SCALE) != 0) return fallback;
  const FT_Glyph_Metrics& box = face->glyph->metrics;
  const double units = face->units_per_EM;
  return (top ? static_cast<double>(box.horiBearingY) : static_cast<double>(box.height - box.horiBearingY)) / units;
}

}  // namespace

Fonts& Fonts::shared() {
  static Fonts fonts;
  return fonts;
}

Fonts::Fonts() {
  if (FT_Init_FreeType(&library_) != 0)
    throw FileError(ErrorCode::file_unreadable, "fonts: FreeType does not start.", "check the FreeType installation.");
  for (const bool strong : {false, true}) {
    for (const char* family : {"Inter", "DejaVu Sans"}) {
      const Found found = find_font(family, strong);
      auto file = std::make_unique<FontFile>();
      if (found.path.empty() || FT_New_Face(library_, found.path.c_str(), found.index, &file->face) != 0) continue;
      file->family = found.family;
      file->path = found.path;
      file->strong = strong;
      file->units_per_em = file->face->units_per_EM;
      file->capital_height = glyph_extent(file->face, U'H', true, file->capital_height);
      file->descent = glyph_extent(file->face, U'g', false, file->descent);
      file->cairo_face = cairo_ft_font_face_create_for_ft_face(file->face, FT_LOAD_NO_HINTING);
      chains_[strong ? 1 : 0].push_back(file.get());
      files_.push_back(std::move(file));
    }
    if (chains_[strong ? 1 : 0].empty())
      throw FileError(ErrorCode::file_unreadable, "fonts: no font was found for the words of a picture.",
                      "install the packages fonts-inter and fonts-dejavu-core.");
  }
}

Fonts::~Fonts() {
  for (const auto& file : files_) cairo_font_face_destroy(file->cairo_face);
  // cairo keeps scaled fonts of these faces in its own cache until the process ends: the faces stay open with it.
}

std::vector<std::pair<char32_t, std::size_t>> letters_of(std::string_view words) {
  std::vector<std::pair<char32_t, std::size_t>> letters;
  for (std::size_t i = 0; i < words.size();) {
    const std::size_t start = i;
    const auto lead = static_cast<unsigned char>(words[i++]);
    const int more = lead < 0x80 ? 0 : lead >= 0xF0 ? 3 : lead >= 0xE0 ? 2 : lead >= 0xC0 ? 1 : -1;
    char32_t letter = more == 0 ? lead : more < 0 ? 0xFFFD : lead & (0x3Fu >> more);
    for (int k = 0; k < more; ++k) {
      if (i >= words.size() || (static_cast<unsigned char>(words[i]) & 0xC0) != 0x80) {
        letter = 0xFFFD;
        break;
      }
      letter = (letter << 6) | (static_cast<unsigned char>(words[i++]) & 0x3F);
    }
    letters.emplace_back(letter, start);
  }
  return letters;
}

Shaped Fonts::shape(std::string_view words, const Font& font) const {
  Shaped shaped;
  const auto& chain = chains_[font.strong ? 1 : 0];
  const auto letters = letters_of(words);
  for (std::size_t k = 0; k < letters.size(); ++k) {
    PlacedGlyph placed;
    placed.letter = letters[k].first;
    placed.byte = letters[k].second;
    placed.bytes = (k + 1 < letters.size() ? letters[k + 1].second : words.size()) - placed.byte;
    placed.font = chain.front();
    for (const FontFile* file : chain) {
      const FT_UInt glyph = FT_Get_Char_Index(file->face, placed.letter);
      if (glyph == 0) continue;
      placed.font = file;
      placed.glyph = glyph;
      break;
    }
    placed.x = shaped.width;
    if (FT_Load_Glyph(placed.font->face, static_cast<FT_UInt>(placed.glyph), FT_LOAD_NO_SCALE) == 0)
      shaped.width += static_cast<double>(placed.font->face->glyph->advance.x) / placed.font->units_per_em;
    shaped.width += font.spacing;
    shaped.glyphs.push_back(placed);
  }
  if (!shaped.glyphs.empty()) shaped.width -= font.spacing;
  return shaped;
}

TextSize Fonts::measure(std::string_view words, const Font& font) const {
  const FontFile& file = main_file(font.strong);
  return {shape(words, font).width * font.size, file.capital_height * font.size, file.descent * font.size};
}

}  // namespace runband::plot
