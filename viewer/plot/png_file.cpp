#include "viewer/plot/png_file.h"

#include <png.h>

#include <cmath>
#include <cstring>

#include "core/base/error.h"

namespace runband::plot {

namespace {

[[noreturn]] void refuse(png_structp, png_const_charp why) {
  throw FileError(ErrorCode::file_unwritable, std::string("PNG: ") + why + ".", "choose a smaller size or dpi.");
}
void ignore(png_structp, png_const_charp) {}

// Owns libpng's two structures.
struct Writer {
  png_structp png = png_create_write_struct(PNG_LIBPNG_VER_STRING, nullptr, refuse, ignore);
  png_infop info = png_create_info_struct(png);
  Writer() = default;
  Writer(const Writer&) = delete;
  Writer& operator=(const Writer&) = delete;
  ~Writer() { png_destroy_write_struct(&png, &info); }
};

}  // namespace

std::string png_bytes(const Image& image, double dpi, const std::map<std::string, std::string>& words, bool opaque) {
  std::string bytes;
  Writer writer;
  png_set_write_fn(
      writer.png, &bytes,
      [](png_structp png, png_bytep data, std::size_t size) {
        static_cast<std::string*>(png_get_io_ptr(png))->append(reinterpret_cast<const char*>(data), size);
      },
      nullptr);
  const auto width = static_cast<png_uint_32>(image.width), height = static_cast<png_uint_32>(image.height);
  png_set_IHDR(writer.png, writer.info, width, height, 8, opaque ? PNG_COLOR_TYPE_RGB : PNG_COLOR_TYPE_RGB_ALPHA,
               PNG_INTERLACE_NONE, PNG_COMPRESSION_TYPE_DEFAULT, PNG_FILTER_TYPE_DEFAULT);
  png_set_compression_level(writer.png, 6);
  const auto per_metre = static_cast<png_uint_32>(std::lround(dpi / 0.0254));
  png_set_pHYs(writer.png, writer.info, per_metre, per_metre, PNG_RESOLUTION_METER);
  png_set_sRGB(writer.png, writer.info, PNG_sRGB_INTENT_PERCEPTUAL);
  std::vector<png_text> texts;
  char no_language[] = "";
  for (const auto& [keyword, text] : words) {
    png_text entry{};
    entry.compression = PNG_ITXT_COMPRESSION_NONE;
    entry.key = const_cast<char*>(keyword.c_str());
    entry.text = const_cast<char*>(text.c_str());
    entry.itxt_length = text.size();
    entry.lang = no_language;
    entry.lang_key = no_language;
    texts.push_back(entry);
  }
  if (!texts.empty()) png_set_text(writer.png, writer.info, texts.data(), static_cast<int>(texts.size()));
  png_write_info(writer.png, writer.info);
  std::vector<std::uint8_t> row;
  for (std::size_t j = 0; j < height; ++j) {
    const std::uint8_t* from = image.rgba.data() + j * width * 4;
    if (opaque) {
      row.clear();
      for (std::size_t i = 0; i < width; ++i) row.insert(row.end(), from + 4 * i, from + 4 * i + 3);
      png_write_row(writer.png, row.data());
    } else {
      png_write_row(writer.png, from);
    }
  }
  png_write_end(writer.png, writer.info);
  return bytes;
}

std::map<std::string, std::string> png_words(const std::string& bytes) {
  std::map<std::string, std::string> words;
  constexpr char kSignature[] = "\x89PNG\r\n\x1a\n";
  if (bytes.size() < 8 || std::memcmp(bytes.data(), kSignature, 8) != 0) return words;
  for (std::size_t at = 8; at + 12 <= bytes.size();) {
    std::size_t length = 0;
    for (std::size_t k = 0; k < 4; ++k) length = length << 8 | static_cast<unsigned char>(bytes[at + k]);
    if (length > bytes.size() - at - 12) break;
    if (bytes.compare(at + 4, 4, "iTXt") == 0) {
      const std::string chunk = bytes.substr(at + 8, length);
      // keyword 0 compressed? method language 0 translated keyword 0 text
      const std::size_t key_end = chunk.find('\0');
      if (key_end != std::string::npos && key_end + 3 <= chunk.size() && chunk[key_end + 1] == 0) {
        const std::size_t language_end = chunk.find('\0', key_end + 3);
        const std::size_t translated_end =
            language_end == std::string::npos ? language_end : chunk.find('\0', language_end + 1);
        if (translated_end != std::string::npos) words[chunk.substr(0, key_end)] = chunk.substr(translated_end + 1);
      }
    }
    at += length + 12;
  }
  return words;
}

}  // namespace runband::plot
