#include "core/profile/points_file.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <string_view>

#include "core/base/error.h"
#include "core/base/text.h"

namespace runband {

namespace {

std::string place(const std::string& origin, long row) { return origin + ":" + std::to_string(row); }

std::string_view trimmed(std::string_view text) {
  const char* blank = " \t\r\"";
  const std::size_t first = text.find_first_not_of(blank);
  if (first == std::string_view::npos) return {};
  return text.substr(first, text.find_last_not_of(blank) - first + 1);
}

std::string lower(std::string_view text) {
  std::string out(text);
  for (char& c : out)
    if (c >= 'A' && c <= 'Z') c = static_cast<char>(c - 'A' + 'a');
  return out;
}

// What a message may quote of a line: short, printable.
std::string quote(std::string_view text) {
  std::string out = "'";
  for (const char c : text.substr(0, 40)) out += (c >= ' ' && c != 127) ? c : '?';
  return out + (text.size() > 40 ? "...'" : "'");
}

struct Line {
  long row = 0;
  std::string_view text;
};

// Lines that end with \n, \r\n or \r.
std::vector<Line> split_lines(std::string_view bytes) {
  std::vector<Line> lines;
  long row = 1;
  for (std::size_t i = 0; i < bytes.size(); ++row) {
    const std::size_t end = std::min(bytes.find_first_of("\r\n", i), bytes.size());
    lines.push_back({row, bytes.substr(i, end - i)});
    i = end + (end + 1 < bytes.size() && bytes[end] == '\r' && bytes[end + 1] == '\n' ? 2 : 1);
  }
  return lines;
}

char separator_of(std::string_view line) {
  for (const char c : {';', '\t', ','})
    if (line.find(c) != std::string_view::npos) return c;
  return ' ';
}

std::vector<std::string_view> split_fields(std::string_view line, char separator) {
  std::vector<std::string_view> fields;
  if (separator == ' ') {
    while (!(line = trimmed(line)).empty()) {
      const std::size_t end = std::min(line.find_first_of(" \t"), line.size());
      fields.push_back(line.substr(0, end));
      line.remove_prefix(end);
    }
    return fields;
  }
  line = trimmed(line);
  for (;;) {
    const std::size_t end = line.find(separator);
    fields.push_back(trimmed(line.substr(0, end)));
    if (end == std::string_view::npos) break;
    line.remove_prefix(end + 1);
  }
  // Spreadsheets like to end a row with a separator.
  while (fields.size() > 2 && fields.back().empty()) fields.pop_back();
  return fields;
}

std::optional<double> number_in(std::string_view field, char separator) {
  std::string text(field);
  if (separator == ';' || separator == '\t') std::replace(text.begin(), text.end(), ',', '.');
  return parse_number(text);
}

// "y_mm", "y [mm]", "Y (mm)", "y" -> name y, unit mm or nothing.
struct ColumnName {
  std::string name, unit;
};

ColumnName column_name(std::string_view field) {
  const std::string text = lower(trimmed(field));
  const std::size_t cut = text.find_first_of(" _[(");
  ColumnName column{text.substr(0, cut), {}};
  if (cut != std::string::npos) {
    for (const char c : text.substr(cut))
      if ((c >= 'a' && c <= 'z') || (c & 0x80)) column.unit += c;
  }
  return column;
}

std::string known_unit(const std::string& unit) {
  static const std::vector<std::pair<std::string, std::string>> names{
      {"mm", "mm"}, {"millimetre", "mm"}, {"m", "m"},        {"metre", "m"},    {"in", "in"},        {"inch", "in"},
      {"um", "um"}, {"\xb5m", "um"},      {"\u00b5m", "um"}, {"\u03bcm", "um"}, {"micrometre", "um"}};
  for (const auto& [name, canonical] : names)
    if (unit == name) return canonical;
  return {};
}

class PointsParser {
 public:
  explicit PointsParser(const std::string& origin) : origin_(origin) {}

  PointsFile parse(std::string_view bytes) {
    for (const Line& line : split_lines(bytes)) {
      const std::string_view text = trimmed(line.text);
      if (text.empty()) continue;
      if (text.front() == '#')
        comment(line.row, text.substr(1));
      else
        row(line.row, line.text);
    }
    return std::move(file_);
  }

 private:
  void comment(long row, std::string_view text) {
    const std::size_t cut = text.find_first_of(":=");
    if (cut == std::string_view::npos) return;
    const std::string key = lower(trimmed(text.substr(0, cut)));
    const std::string value(trimmed(text.substr(cut + 1)));
    if (key == "title") file_.title = value;
    if (key == "source") file_.source = value;
    if (key == "unit") set_unit(row, lower(value));
    if (key == "y_axis") file_.y_axis = choice(row, key, lower(value), {"field", "gauge"});
    if (key == "z_axis") file_.z_axis = choice(row, key, lower(value), {"up", "down"});
    if (key == "noise_mm") {
      const auto noise = parse_number(value);
      if (!noise || !std::isfinite(*noise) || *noise < 0.0)
        throw InputError(ErrorCode::bad_option,
                         place(origin_, row) + ": noise_mm is " + quote(value) + ", not a number of mm.",
                         "write the standard deviation of the measurement, such as 0.02; 0 for exact points.");
      file_.noise_mm = noise;
    }
  }

  void set_unit(long row, const std::string& unit) {
    const std::string known = known_unit(unit);
    if (known.empty())
      throw InputError(ErrorCode::profile_wrong_unit, place(origin_, row) + ": the unit is " + quote(unit) + ".",
                       "units known here are mm, m, in and um.");
    if (!file_.unit.empty() && file_.unit != known)
      throw InputError(ErrorCode::profile_wrong_unit,
                       place(origin_, row) + ": two units are stated, " + file_.unit + " and " + known + ".",
                       "state the unit once.");
    file_.unit = known;
  }

  std::string choice(long row, const std::string& key, const std::string& value, std::vector<std::string> choices) {
    if (std::find(choices.begin(), choices.end(), value) != choices.end()) return value;
    throw InputError(ErrorCode::bad_option, place(origin_, row) + ": " + key + " is " + quote(value) + ".",
                     "it takes " + join_names(choices) + ".");
  }

  // A first row without any number in it names the columns.
  bool header(long row, const std::vector<std::string_view>& fields) {
    for (const std::string_view field : fields)
      if (number_in(field, separator_)) return false;
    std::size_t y = fields.size(), z = fields.size();
    for (std::size_t i = 0; i < fields.size(); ++i) {
      const ColumnName column = column_name(fields[i]);
      if (column.name != "y" && column.name != "z") continue;
      std::size_t& place_of = column.name == "y" ? y : z;
      if (place_of < fields.size())
        throw InputError(ErrorCode::profile_bad_row,
                         place(origin_, row) + ": two columns are named '" + column.name + "'.",
                         "keep one column y and one column z.");
      place_of = i;
      if (!column.unit.empty()) set_unit(row, column.unit);
    }
    if (y == fields.size() || z == fields.size())
      throw InputError(ErrorCode::profile_bad_row,
                       place(origin_, row) + ": no number in this row, and as a header it does not name y and z.",
                       "head the columns as y_mm and z_mm, or begin the line with # to make it a comment.");
    columns_ = {y, z};
    named_ = fields.size();
    return true;
  }

  void row(long row, std::string_view line) {
    const bool first = separator_ == 0;
    if (first) separator_ = separator_of(line);
    const std::vector<std::string_view> fields = split_fields(line, separator_);
    if (first && header(row, fields)) {
      separator_ = 0;  // rows may be spaced otherwise than the header, as "y z" over "1, 2"
      return;
    }
    const std::size_t expected = named_ > 0 ? named_ : 2;
    if (fields.size() != expected)
      throw InputError(ErrorCode::profile_bad_row,
                       place(origin_, row) + ": " + quote(trimmed(line)) + " has " + std::to_string(fields.size()) +
                           (fields.size() == 1 ? " column, " : " columns, ") + std::to_string(expected) +
                           " are expected.",
                       "give y and z in every row, separated by ; or , or tab; with decimal commas use ;.");
    Vec2 value;
    for (std::size_t k = 0; k < 2; ++k) {
      const std::string_view field = fields[columns_[k]];
      const auto number = number_in(field, separator_);
      if (!number)
        throw InputError(ErrorCode::profile_bad_row, place(origin_, row) + ": " + quote(field) + " is not a number.",
                         "correct the row, or begin it with # to make it a comment.");
      if (!std::isfinite(*number))
        throw InputError(ErrorCode::profile_not_a_number,
                         place(origin_, row) + ": " + (k == 0 ? "y" : "z") + " is " + quote(field) + ".",
                         "remove the row; a measurement that failed is not a point.");
      if (std::abs(*number) > 1e9)
        throw InputError(ErrorCode::profile_bad_row,
                         place(origin_, row) + ": " + quote(field) + " is far outside any profile.",
                         "correct the row.");
      value(static_cast<Eigen::Index>(k)) = *number;
    }
    file_.values.push_back(value);
    file_.rows.push_back(row);
  }

  std::string origin_;
  PointsFile file_;
  char separator_ = 0;
  std::size_t named_ = 0;
  std::array<std::size_t, 2> columns_{0, 1};
};

}  // namespace

PointsFile parse_points(const std::string& bytes, const std::string& origin) {
  std::string_view text = bytes;
  if (text.starts_with("\xEF\xBB\xBF")) text.remove_prefix(3);
  if (text.starts_with("\xFF\xFE") || text.starts_with("\xFE\xFF") || text.find('\0') != std::string_view::npos)
    throw FileError(ErrorCode::file_wrong_kind, origin + ": this is not a text file (it holds zero bytes or UTF-16).",
                    "export the points as plain text (UTF-8) with two columns.");
  return PointsParser(origin).parse(text);
}

}  // namespace runband
