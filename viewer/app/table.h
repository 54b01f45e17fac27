// A table for the terminal: names left, numbers right, units beside.
#pragma once

#include <string>
#include <vector>

namespace runband {

class TextTable {
 public:
  /// @param columns heads of the number columns.
  explicit TextTable(std::vector<std::string> columns) : columns_(std::move(columns)) {}
  void row(const std::string& name, const std::string& unit, std::vector<std::string> cells);
  void rule() { rows_.push_back({}); }
  std::string text() const;

 private:
  struct Row {
    std::string name, unit;
    std::vector<std::string> cells;
  };
  std::vector<std::string> columns_;
  std::vector<Row> rows_;
};

/// `value` to `decimals` places with a true minus sign; an en dash if it is not finite.
std::string fixed_text(double value, int decimals);
/// Columns that a UTF-8 text takes, one per code point.
std::size_t text_width(const std::string& utf8);

}  // namespace runband
