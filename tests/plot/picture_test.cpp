#include "viewer/plot/picture.h"

#include <ft2build.h>
#include <gtest/gtest.h>
#include <png.h>

#include <cmath>
#include FT_FREETYPE_H

#include "core/base/error.h"
#include "core/case/carried.h"
#include "viewer/plot/font_subset.h"
#include "viewer/plot/png_file.h"

namespace runband::plot {
namespace {

constexpr const char* kCase = "title = \"Skerry Line \u03b3 <&> \\\"\"\n[state]\nlateral_mm = 3.25\n";

void sketch(Canvas& canvas) {
  canvas.polygon(corners({10, 10, 20, 10}), colour_from_hex("#C4502F"));
  draw_line(canvas, {5, 5}, {55, 35}, {{0, 0, 0, 1}, 0.5, Dash::dashed});
  draw_text(canvas, {8, 30}, "\u03b3 = 0.21, T\u03b3 \u2212 \u03bc \u2192 \u221e mm\u00b2", {3.175, false, 0},
            {0, 0, 0, 1});
  draw_text(canvas, {8, 36}, "Rolling radius", {2.47, true, 0.05}, {0, 0, 0, 1});
}

PictureOptions options() { return {60, 40, 254, Colour{1, 1, 1, 1}, "Sketch \u03b3", kCase, ""}; }

struct Pixels {
  png_image header{};
  std::vector<png_byte> bytes;
  Colour at(double x_mm, double y_mm, double dpi) const {
    const auto i = static_cast<std::size_t>(x_mm / 25.4 * dpi), j = static_cast<std::size_t>(y_mm / 25.4 * dpi);
    const png_byte* p = &bytes[4 * (j * header.width + i)];
    return {p[0] / 255.0, p[1] / 255.0, p[2] / 255.0, p[3] / 255.0};
  }
};

Pixels read_pixels(const std::string& bytes) {
  Pixels pixels;
  pixels.header.version = PNG_IMAGE_VERSION;
  EXPECT_NE(png_image_begin_read_from_memory(&pixels.header, bytes.data(), bytes.size()), 0);
  pixels.header.format = PNG_FORMAT_RGBA;
  pixels.bytes.resize(PNG_IMAGE_SIZE(pixels.header));
  EXPECT_NE(png_image_finish_read(&pixels.header, nullptr, pixels.bytes.data(), 0, nullptr), 0);
  return pixels;
}

TEST(Png, HasThePixelsAndTheDpiAskedFor) {
  const std::string bytes = picture_bytes(PictureKind::png, options(), sketch);
  const Pixels pixels = read_pixels(bytes);
  EXPECT_EQ(pixels.header.width, 600u);
  EXPECT_EQ(pixels.header.height, 400u);
  // pHYs: 254 dots an inch are 10 000 a metre; unit 1 is the metre (ISO/IEC 15948, 11.3.5.3).
  const std::string expected("pHYs\x00\x00\x27\x10\x00\x00\x27\x10\x01", 13);
  EXPECT_NE(bytes.find(expected), std::string::npos);
  EXPECT_EQ(colour_to_hex(pixels.at(20, 12, 254)), "#c4502f");
  EXPECT_EQ(colour_to_hex(pixels.at(50, 5, 254)), "#ffffff");
}

TEST(Png, CarriesTheCaseAndTheTitle) {
  const std::string bytes = picture_bytes(PictureKind::png, options(), sketch);
  EXPECT_EQ(carried_case(bytes, "a.png"), kCase);
  EXPECT_EQ(png_words(bytes).at("Title"), "Sketch \u03b3");
}

TEST(Png, WithoutGroundIsTransparentWhereNothingIsDrawn) {
  PictureOptions clear = options();
  clear.ground.reset();
  const Pixels pixels = read_pixels(picture_bytes(PictureKind::png, clear, sketch));
  EXPECT_EQ(pixels.at(50, 5, 254).a, 0);
  EXPECT_EQ(pixels.at(20, 12, 254).a, 1);
}

TEST(Picture, IsTheSameBytesTwice) {
  for (const PictureKind kind : {PictureKind::png, PictureKind::svg, PictureKind::pdf})
    EXPECT_EQ(picture_bytes(kind, options(), sketch), picture_bytes(kind, options(), sketch));
}

TEST(Picture, CarriesItsCaseInEveryKind) {
  EXPECT_EQ(carried_case(picture_bytes(PictureKind::svg, options(), sketch), "a.svg"), kCase);
  EXPECT_EQ(carried_case(picture_bytes(PictureKind::pdf, options(), sketch), "a.pdf"), kCase);
}

TEST(Picture, RefusesWhatCannotBeDrawn) {
  PictureOptions wrong = options();
  wrong.width_mm = 0;
  for (const PictureKind kind : {PictureKind::png, PictureKind::svg, PictureKind::pdf})
    EXPECT_THROW(picture_bytes(kind, wrong, sketch), InputError);
  wrong = options();
  wrong.dpi = 1e6;
  EXPECT_THROW(picture_bytes(PictureKind::png, wrong, sketch), InputError);
  EXPECT_THROW(picture_kind("patch.jpeg"), InputError);
  EXPECT_THROW(picture_kind("patch"), InputError);
}

TEST(Svg, KeepsWordsAsWordsWithTheirFont) {
  const std::string bytes = picture_bytes(PictureKind::svg, options(), sketch);
  EXPECT_NE(bytes.find(">\u03b3 = 0.21, T\u03b3 \u2212 \u03bc \u2192 \u221e mm\u00b2</text>"), std::string::npos);
  EXPECT_NE(bytes.find("@font-face{font-family:'Runband Inter'"), std::string::npos);
  EXPECT_NE(bytes.find("width=\"60mm\" height=\"40mm\""), std::string::npos);
  EXPECT_LT(bytes.size(), 40'000u);
}

TEST(Pdf, EmbedsItsFonts) {
  const std::string bytes = picture_bytes(PictureKind::pdf, options(), sketch);
  EXPECT_NE(bytes.find("/FontFile"), std::string::npos);
  EXPECT_EQ(bytes.find("/Type3"), std::string::npos);
  EXPECT_NE(bytes.find("/ToUnicode"), std::string::npos);
}

// Read back by FreeType, which knows nothing of how the subset was made.
TEST(FontSubset, DrawsTheLettersOfTheWholeFont) {
  const FontFile& whole = Fonts::shared().main_file(false);
  const std::set<char32_t> letters{U'a', U'R', U'8', U'\u03b3', U'\u2212', U'\u00b2'};
  const std::string bytes = subset_font(whole, letters);
  FT_Library library = nullptr;
  ASSERT_EQ(FT_Init_FreeType(&library), 0);
  FT_Face face = nullptr;
  ASSERT_EQ(FT_New_Memory_Face(library, reinterpret_cast<const FT_Byte*>(bytes.data()),
                               static_cast<FT_Long>(bytes.size()), 0, &face),
            0);
  EXPECT_EQ(face->num_glyphs, static_cast<FT_Long>(letters.size()) + 1);
  EXPECT_EQ(face->units_per_EM, 1000);
  for (const char32_t letter : letters) {
    ASSERT_EQ(FT_Load_Char(whole.face, letter, FT_LOAD_NO_SCALE), 0);
    const FT_Glyph_Metrics expected = whole.face->glyph->metrics;
    ASSERT_NE(FT_Get_Char_Index(face, letter), 0u);
    ASSERT_EQ(FT_Load_Char(face, letter, FT_LOAD_NO_SCALE), 0);
    const FT_Glyph_Metrics got = face->glyph->metrics;
    const double scale = 1000.0 / whole.units_per_em;
    // Two roundings to 1/1000 of the size.
    EXPECT_NEAR(static_cast<double>(got.horiAdvance), static_cast<double>(expected.horiAdvance) * scale, 1.0);
    EXPECT_NEAR(static_cast<double>(got.width), static_cast<double>(expected.width) * scale, 2.0);
    EXPECT_NEAR(static_cast<double>(got.height), static_cast<double>(expected.height) * scale, 2.0);
    EXPECT_NEAR(static_cast<double>(got.horiBearingY), static_cast<double>(expected.horiBearingY) * scale, 2.0);
  }
  EXPECT_EQ(FT_Get_Char_Index(face, U'Z'), 0u);
  FT_Done_Face(face);
  FT_Done_FreeType(library);
}

TEST(Fonts, FallBackForLettersTheMainFontLacks) {
  // A letter of DejaVu Sans that Inter has not: a musical sharp (U+266F).
  const Shaped shaped = Fonts::shared().shape("a\u266f", {1, false, 0});
  ASSERT_EQ(shaped.glyphs.size(), 2u);
  EXPECT_NE(shaped.glyphs[1].glyph, 0u);
}

TEST(Fonts, ReadBrokenUtf8WithoutHarm) {
  const auto letters = letters_of("a\xC3");
  ASSERT_EQ(letters.size(), 2u);
  EXPECT_EQ(letters[1].first, U'\uFFFD');
}

}  // namespace
}  // namespace runband::plot
