#include "viewer/app/table.h"

#include <algorithm>
#include <cmath>
#include <cstdio>

namespace runband {

std::size_t text_width(const std::string& utf8) {
  return static_cast<std::size_t>(
      std::count_if(utf8.begin(), utf8.end(), [](char c) { return (static_cast<unsigned char>(c) & 0xC0U) != 0x80U; }));
}

std::string fixed_text(double value, int decimals) {
  if (!std::isfinite(value)) return "–";
  char buffer[64];
  std::snprintf(buffer, sizeof buffer, "%.*f", decimals, std::abs(value));
  const std::string digits = buffer;
  const bool zero = digits.find_first_not_of("0.") == std::string::npos;
  return value < 0 && !zero ? "−" + digits : digits;
}

void TextTable::row(const std::string& name, const std::string& unit, std::vector<std::string> cells) {
  rows_.push_back({name, unit, std::move(cells)});
}

std::string TextTable::text() const {
  std::size_t name_width = 0;
  std::size_t unit_width = 0;
  std::vector<std::size_t> widths;
  for (const std::string& head : columns_) widths.push_back(text_width(head));
  for (const Row& row : rows_) {
    name_width = std::max(name_width, text_width(row.name));
    unit_width = std::max(unit_width, text_width(row.unit));
    for (std::size_t i = 0; i < row.cells.size() && i < widths.size(); ++i)
      widths[i] = std::max(widths[i], text_width(row.cells[i]));
  }
  const auto left = [](const std::string& text, std::size_t width) {
    return text + std::string(width - text_width(text), ' ');
  };
  const auto right = [](const std::string& text, std::size_t width) {
    return std::string(width - text_width(text), ' ') + text;
  };
  std::string out = std::string(name_width, ' ');
  for (std::size_t i = 0; i < columns_.size(); ++i) out += "   " + right(columns_[i], widths[i]);
  out += "\n";
  for (const Row& row : rows_) {
    if (row.name.empty() && row.cells.empty()) {
      out += "\n";
      continue;
    }
    out += left(row.name, name_width);
    for (std::size_t i = 0; i < widths.size(); ++i)
      out += "   " + right(i < row.cells.size() ? row.cells[i] : "", widths[i]);
    if (!row.unit.empty()) out += "  " + row.unit;
    out += "\n";
  }
  return out;
}

}  // namespace runband
