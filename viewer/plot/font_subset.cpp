#include "viewer/plot/font_subset.h"

#include <ft2build.h>

#include <algorithm>
#include <cmath>
#include <cstdint>
#include <map>
#include FT_FREETYPE_H
#include FT_OUTLINE_H

#include "core/case/carried.h"

namespace runband::plot {

namespace {

constexpr double kUnits = 1000;

/// Big-endian bytes.
struct Bytes {
  std::string data;
  Bytes& u8(unsigned v) {
    data += static_cast<char>(v & 0xFF);
    return *this;
  }
  Bytes& u16(unsigned v) { return u8(v >> 8).u8(v); }
  Bytes& i16(int v) { return u16(static_cast<unsigned>(v) & 0xFFFF); }
  Bytes& u32(std::uint32_t v) { return u16(v >> 16).u16(v & 0xFFFF); }
  Bytes& add(const std::string& more) {
    data += more;
    return *this;
  }
};

// Writes one outline as a Type 2 charstring (Adobe Technical Note 5177): relative moves, lines and cubic curves.
class CharString {
 public:
  explicit CharString(double to_units, int width) : to_units_(to_units) { put(width); }

  void move(const FT_Vector& to) {
    relative(to);
    bytes_.u8(21);
  }
  void straight(const FT_Vector& to) {
    relative(to);
    bytes_.u8(5);
  }
  void cubic(const FT_Vector& c1, const FT_Vector& c2, const FT_Vector& to) {
    relative(c1);
    relative(c2);
    relative(to);
    bytes_.u8(8);
    last_ = to;
  }
  void conic(const FT_Vector& c, const FT_Vector& to) {
    const auto third = [](FT_Pos end, FT_Pos middle) {
      return static_cast<FT_Pos>(std::lround((static_cast<double>(end) + 2.0 * static_cast<double>(middle)) / 3.0));
    };
    const FT_Vector from = last_;
    cubic({third(from.x, c.x), third(from.y, c.y)}, {third(to.x, c.x), third(to.y, c.y)}, to);
  }
  std::string done() {
    bytes_.u8(14);
    return bytes_.data;
  }
  int low_x = 0, low_y = 0, high_x = 0, high_y = 0;

 private:
  void put(int v) { bytes_.u8(28).i16(v); }
  void relative(const FT_Vector& to) {
    const int x = static_cast<int>(std::lround(static_cast<double>(to.x) * to_units_));
    const int y = static_cast<int>(std::lround(static_cast<double>(to.y) * to_units_));
    put(x - x_);
    put(y - y_);
    x_ = x;
    y_ = y;
    last_ = to;
    low_x = std::min(low_x, x);
    low_y = std::min(low_y, y);
    high_x = std::max(high_x, x);
    high_y = std::max(high_y, y);
  }

  double to_units_;
  Bytes bytes_;
  int x_ = 0, y_ = 0;
  FT_Vector last_{0, 0};
};

struct Letter {
  char32_t letter = 0;
  int advance = 0;
  std::string outline;
};

struct Extent {
  int low_x = 0, low_y = 0, high_x = 0, high_y = 0;
};

Letter read_letter(const FontFile& file, char32_t letter, unsigned glyph, Extent& extent) {
  Letter result{letter, 0, {}};
  const double to_units = kUnits / file.units_per_em;
  if (FT_Load_Glyph(file.face, glyph, FT_LOAD_NO_SCALE) != 0) return result;
  result.advance = static_cast<int>(std::lround(static_cast<double>(file.face->glyph->advance.x) * to_units));
  CharString outline(to_units, result.advance);
  if (file.face->glyph->format == FT_GLYPH_FORMAT_OUTLINE) {
    FT_Outline_Funcs pieces{};
    pieces.move_to = [](const FT_Vector* to, void* out) {
      static_cast<CharString*>(out)->move(*to);
      return 0;
    };
    pieces.line_to = [](const FT_Vector* to, void* out) {
      static_cast<CharString*>(out)->straight(*to);
      return 0;
    };
    pieces.conic_to = [](const FT_Vector* c, const FT_Vector* to, void* out) {
      static_cast<CharString*>(out)->conic(*c, *to);
      return 0;
    };
    pieces.cubic_to = [](const FT_Vector* c1, const FT_Vector* c2, const FT_Vector* to, void* out) {
      static_cast<CharString*>(out)->cubic(*c1, *c2, *to);
      return 0;
    };
    FT_Outline_Decompose(&file.face->glyph->outline, &pieces, &outline);
  }
  result.outline = outline.done();
  extent.low_x = std::min(extent.low_x, outline.low_x);
  extent.low_y = std::min(extent.low_y, outline.low_y);
  extent.high_x = std::max(extent.high_x, outline.high_x);
  extent.high_y = std::max(extent.high_y, outline.high_y);
  return result;
}

// An INDEX of the Compact Font Format (Adobe Technical Note 5176), four-byte offsets.
std::string index_of(const std::vector<std::string>& items) {
  Bytes bytes;
  bytes.u16(static_cast<unsigned>(items.size()));
  if (items.empty()) return bytes.data;
  bytes.u8(4);
  std::uint32_t offset = 1;
  bytes.u32(offset);
  for (const std::string& item : items) bytes.u32(offset += static_cast<std::uint32_t>(item.size()));
  for (const std::string& item : items) bytes.add(item);
  return bytes.data;
}

std::string cff_table(const std::vector<Letter>& glyphs, const Extent& extent) {
  const auto five = [](Bytes& b, int v) { b.u8(29).u32(static_cast<std::uint32_t>(v)); };
  Bytes header;
  header.u8(1).u8(0).u8(4).u8(4);
  const std::string names = index_of({"RunbandSubset"});
  std::vector<std::string> outlines;
  for (const Letter& glyph : glyphs) outlines.push_back(glyph.outline);
  const std::string char_strings = index_of(outlines);
  Bytes charset, private_part;
  charset.u8(0);
  for (std::size_t k = 1; k < glyphs.size(); ++k) charset.u16(static_cast<unsigned>(k));
  private_part.u8(139).u8(20);  // defaultWidthX 0: every charstring states its own
  const auto top = [&](int charset_at, int strings_at, int private_at) {
    Bytes b;
    for (const int v : {extent.low_x, extent.low_y, extent.high_x, extent.high_y}) five(b, v);
    b.u8(5);
    five(b, charset_at);
    b.u8(15);
    five(b, strings_at);
    b.u8(17);
    five(b, static_cast<int>(private_part.data.size()));
    five(b, private_at);
    b.u8(18);
    return index_of({b.data});
  };
  const std::string empty = index_of({});
  const auto start = static_cast<int>(header.data.size() + names.size() + top(0, 0, 0).size() + 2 * empty.size());
  const int strings_at = start + static_cast<int>(charset.data.size());
  const int private_at = strings_at + static_cast<int>(char_strings.size());
  return header.data + names + top(start, strings_at, private_at) + empty + empty + charset.data + char_strings +
         private_part.data;
}

std::string cmap_table(const std::vector<Letter>& glyphs) {
  Bytes ends, starts, deltas, offsets;
  unsigned segments = 0;
  for (std::size_t k = 1; k < glyphs.size(); ++k) {
    if (glyphs[k].letter > 0xFFFE) continue;
    const auto letter = static_cast<unsigned>(glyphs[k].letter);
    ends.u16(letter);
    starts.u16(letter);
    deltas.u16(static_cast<unsigned>(k) - letter);
    offsets.u16(0);
    ++segments;
  }
  ends.u16(0xFFFF);
  starts.u16(0xFFFF);
  deltas.u16(1);
  offsets.u16(0);
  ++segments;
  unsigned power = 1, log = 0;
  while (power * 2 <= segments) {
    power *= 2;
    ++log;
  }
  Bytes b;
  b.u16(0).u16(1).u16(3).u16(1).u32(12);
  b.u16(4).u16(16 + 8 * segments).u16(0).u16(2 * segments).u16(2 * power).u16(log).u16(2 * (segments - power));
  b.add(ends.data).u16(0).add(starts.data).add(deltas.data).add(offsets.data);
  return b.data;
}

std::string name_table(const std::string& family) {
  const std::string subset = "Runband " + family;
  const std::pair<unsigned, std::string> names[] = {{1, subset}, {2, "Regular"}, {4, subset}, {6, "RunbandSubset"}};
  Bytes b, strings;
  b.u16(0).u16(4).u16(6 + 12 * 4);
  for (const auto& [id, text] : names) {
    b.u16(3)
        .u16(1)
        .u16(0x409)
        .u16(id)
        .u16(static_cast<unsigned>(2 * text.size()))
        .u16(static_cast<unsigned>(strings.data.size()));
    for (const char c : text) strings.u16(static_cast<unsigned char>(c));
  }
  return b.data + strings.data;
}

std::uint32_t checksum(const std::string& table) {
  std::uint32_t sum = 0;
  for (std::size_t i = 0; i < table.size(); i += 4) {
    std::uint32_t word = 0;
    for (std::size_t k = 0; k < 4; ++k)
      word = word << 8 | (i + k < table.size() ? static_cast<unsigned char>(table[i + k]) : 0u);
    sum += word;
  }
  return sum;
}

std::string assemble(const std::map<std::string, std::string>& tables) {
  const auto count = static_cast<unsigned>(tables.size());
  Bytes b;
  b.add("OTTO").u16(count).u16(128).u16(3).u16(16 * count - 128);  // 8..15 tables
  std::uint32_t offset = 12 + 16 * count;
  std::string body;
  std::size_t head_at = 0;
  for (const auto& [tag, table] : tables) {
    if (tag == "head") head_at = offset;
    b.add(tag).u32(checksum(table)).u32(offset).u32(static_cast<std::uint32_t>(table.size()));
    body += table;
    while (body.size() % 4 != 0) body += '\0';
    offset = 12 + 16 * count + static_cast<std::uint32_t>(body.size());
  }
  std::string file = b.data + body;
  Bytes adjust;
  adjust.u32(0xB1B0AFBAu - checksum(file));
  file.replace(head_at + 8, 4, adjust.data);
  return file;
}

}  // namespace

std::string subset_font(const FontFile& file, const std::set<char32_t>& letters) {
  Extent extent;
  std::vector<Letter> glyphs{read_letter(file, 0, 0, extent)};
  for (const char32_t letter : letters)
    if (const unsigned glyph = FT_Get_Char_Index(file.face, letter); glyph != 0)
      glyphs.push_back(read_letter(file, letter, glyph, extent));

  const auto count = static_cast<unsigned>(glyphs.size());
  int widest = 0;
  Bytes hmtx;
  for (const Letter& glyph : glyphs) {
    widest = std::max(widest, glyph.advance);
    hmtx.u16(static_cast<unsigned>(glyph.advance)).i16(0);
  }
  const int rise = static_cast<int>(std::lround(file.face->ascender * kUnits / file.units_per_em));
  const int fall = static_cast<int>(std::lround(file.face->descender * kUnits / file.units_per_em));
  Bytes head, hhea, maxp, os2, post;
  head.u32(0x10000).u32(0x10000).u32(0).u32(0x5F0F3CF5).u16(3).u16(1000).u32(0).u32(0).u32(0).u32(0);
  head.i16(extent.low_x).i16(extent.low_y).i16(extent.high_x).i16(extent.high_y).u16(0).u16(6).i16(2).i16(0).i16(0);
  hhea.u32(0x10000).i16(rise).i16(fall).i16(0).u16(static_cast<unsigned>(widest)).i16(0).i16(0).i16(extent.high_x);
  hhea.i16(1).i16(0).i16(0).u32(0).u32(0).i16(0).u16(count);
  maxp.u32(0x5000).u16(count);
  const auto first = static_cast<unsigned>(letters.empty() ? 0 : std::min<char32_t>(*letters.begin(), 0xFFFF));
  const auto last = static_cast<unsigned>(letters.empty() ? 0 : std::min<char32_t>(*letters.rbegin(), 0xFFFF));
  os2.u16(3).i16(widest / 2).u16(file.strong ? 600 : 400).u16(5).u16(0);
  for (const int v : {650, 600, 0, 75, 650, 600, 0, 350, 50, 300, 0}) os2.i16(v);
  for (int k = 0; k < 10; ++k) os2.u8(0);
  os2.u32(1).u32(0).u32(0).u32(0).add("RNBD").u16(0x40).u16(first).u16(last).i16(rise).i16(fall).i16(0);
  os2.u16(static_cast<unsigned>(rise)).u16(static_cast<unsigned>(-fall)).u32(1).u32(0).i16(546).i16(727);
  os2.u16(0).u16(32).u16(1);
  post.u32(0x30000).u32(0).i16(-100).i16(50).u32(0).u32(0).u32(0).u32(0).u32(0);
  return assemble({{"CFF ", cff_table(glyphs, extent)},
                   {"OS/2", os2.data},
                   {"cmap", cmap_table(glyphs)},
                   {"head", head.data},
                   {"hhea", hhea.data},
                   {"hmtx", hmtx.data},
                   {"maxp", maxp.data},
                   {"name", name_table(file.family)},
                   {"post", post.data}});
}

std::string data_address(const std::string& kind, const std::string& bytes) {
  std::string text = base64_encode(bytes);
  text.append((4 - text.size() % 4) % 4, '=');
  return "data:" + kind + ";base64," + text;
}

}  // namespace runband::plot
