#include "core/patch/gap_grid.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <limits>
#include <optional>
#include <string_view>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"

namespace runband {

namespace {

constexpr int kFewestPoints = 4;
constexpr double kNoSurface = std::numeric_limits<double>::infinity();

InputError bad_line(const std::string& origin, long line, const std::string& what, const std::string& cure) {
  return {ErrorCode::bad_syntax, origin + ":" + std::to_string(line) + ": " + what, cure};
}

std::string_view trimmed(std::string_view text) {
  const auto from = text.find_first_not_of(" \t\r");
  return from == text.npos ? std::string_view{} : text.substr(from, text.find_last_not_of(" \t\r") - from + 1);
}

std::vector<std::string_view> split(std::string_view line) {
  const char mark = line.find(';') != line.npos ? ';' : ',';
  std::vector<std::string_view> cells;
  for (;;) {
    const auto end = line.find(mark);
    cells.push_back(trimmed(line.substr(0, end)));
    if (end == line.npos) return cells;
    line.remove_prefix(end + 1);
  }
}

// First place and step of places in equal steps.
struct Places {
  double first = 0, step = 0;
  int count = 0;
};
Places equal_steps(const std::vector<double>& places, const std::string& name, const std::string& origin, long line) {
  constexpr double kStepTolerance = 1e-4;
  if (static_cast<int>(places.size()) < kFewestPoints) {
    throw bad_line(origin, line, "only " + std::to_string(places.size()) + " places along " + name + ".",
                   "give at least 4 of them.");
  }
  const double step = (places.back() - places.front()) / static_cast<double>(places.size() - 1);
  for (std::size_t k = 0; k < places.size(); ++k) {
    const double wanted = places.front() + static_cast<double>(k) * step;
    if (!(step > 0) || std::abs(places[k] - wanted) > kStepTolerance * step) {
      throw bad_line(origin, line,
                     "the places along " + name + " do not ascend in equal steps: number " + std::to_string(k + 1) +
                         " is " + number_text(places[k]) + ".",
                     "resample the gap onto equal steps.");
    }
  }
  return {places.front(), step, static_cast<int>(places.size())};
}

double place(std::string_view text, const std::string& name, const std::string& origin, long line) {
  const auto value = parse_number(text);
  if (!value || !std::isfinite(*value)) {
    throw bad_line(origin, line, "\"" + std::string(text) + "\" is not a place along " + name + ".",
                   "write a number in mm, with a point as decimal mark.");
  }
  return *value;
}

// Catmull-Rom weights of the four points around t in [0, 1] between the middle two.
std::array<double, 4> weights(double t) {
  return {0.5 * t * (-1.0 + t * (2.0 - t)), 1.0 + 0.5 * t * t * (-5.0 + 3.0 * t), 0.5 * t * (1.0 + t * (4.0 - 3.0 * t)),
          0.5 * t * t * (t - 1.0)};
}

}  // namespace

double GapGrid::at(double x_mm, double s_mm) const {
  const double fi = (x_mm - grid.x0_mm) / grid.dx_mm, fj = (s_mm - grid.s0_mm) / grid.ds_mm;
  constexpr double kSlack = 1e-9;
  if (!(fi >= -kSlack && fi <= grid.nx - 1 + kSlack && fj >= -kSlack && fj <= grid.ns - 1 + kSlack)) return kNoSurface;
  const int i0 = std::clamp(static_cast<int>(std::floor(fi)), 0, grid.nx - 2);
  const int j0 = std::clamp(static_cast<int>(std::floor(fj)), 0, grid.ns - 2);
  const double a = fi - i0, b = fj - j0;
  const auto value = [&](int i, int j) { return gap_mm[static_cast<std::size_t>(j * grid.nx + i)]; };
  const double h00 = value(i0, j0), h10 = value(i0 + 1, j0), h01 = value(i0, j0 + 1), h11 = value(i0 + 1, j0 + 1);
  const double plain = (1 - b) * ((1 - a) * h00 + a * h10) + b * ((1 - a) * h01 + a * h11);
  if (!std::isfinite(plain)) return kNoSurface;
  // One point beyond the border is continued by the parabola through the last three.
  const auto line = [&](int j) {
    std::array<double, 4> h{};
    for (int k = 0; k < 4; ++k) {
      const int i = i0 - 1 + k;
      if (i < 0) {
        h[static_cast<std::size_t>(k)] = 3 * value(0, j) - 3 * value(1, j) + value(2, j);
      } else if (i >= grid.nx) {
        h[static_cast<std::size_t>(k)] = 3 * value(grid.nx - 1, j) - 3 * value(grid.nx - 2, j) + value(grid.nx - 3, j);
      } else {
        h[static_cast<std::size_t>(k)] = value(i, j);
      }
    }
    const auto w = weights(a);
    return w[0] * h[0] + w[1] * h[1] + w[2] * h[2] + w[3] * h[3];
  };
  std::array<double, 4> rows{};
  for (int k = 0; k < 4; ++k) {
    const int j = j0 - 1 + k;
    if (j < 0) {
      rows[static_cast<std::size_t>(k)] = 3 * line(0) - 3 * line(1) + line(2);
    } else if (j >= grid.ns) {
      rows[static_cast<std::size_t>(k)] = 3 * line(grid.ns - 1) - 3 * line(grid.ns - 2) + line(grid.ns - 3);
    } else {
      rows[static_cast<std::size_t>(k)] = line(j);
    }
  }
  const auto w = weights(b);
  const double smooth = w[0] * rows[0] + w[1] * rows[1] + w[2] * rows[2] + w[3] * rows[3];
  return std::isfinite(smooth) ? smooth : plain;
}

GapGrid parse_gap_grid(const std::string& bytes, const std::string& origin) {
  std::string_view rest = bytes;
  if (rest.starts_with("\xEF\xBB\xBF")) rest.remove_prefix(3);
  std::vector<double> x, s;
  GapGrid result;
  result.origin = origin;
  long line_number = 0, header_line = 0, last_line = 0;
  while (!rest.empty()) {
    const auto end = rest.find('\n');
    const std::string_view line = trimmed(rest.substr(0, end));
    rest.remove_prefix(end == rest.npos ? rest.size() : end + 1);
    ++line_number;
    if (line.empty() || line.front() == '#') continue;
    const auto cells = split(line);
    if (header_line == 0) {
      if (cells[0] != "gap_mm") {
        throw bad_line(origin, line_number, "the grid begins with \"" + std::string(cells[0].substr(0, 40)) + "\".",
                       "the first cell must be gap_mm, followed by the places along x in mm.");
      }
      for (std::size_t k = 1; k < cells.size(); ++k) x.push_back(place(cells[k], "x", origin, line_number));
      equal_steps(x, "x", origin, line_number);
      header_line = line_number;
      continue;
    }
    if (cells.size() != x.size() + 1) {
      throw bad_line(origin, line_number,
                     std::to_string(cells.size()) + " cells, but the header has " + std::to_string(x.size() + 1) + ".",
                     "every row holds a place along s and one gap for each place along x.");
    }
    s.push_back(place(cells[0], "s", origin, line_number));
    last_line = line_number;
    for (std::size_t k = 1; k < cells.size(); ++k) {
      const auto gap = cells[k].empty() ? std::optional<double>(kNoSurface) : parse_number(cells[k]);
      if (!gap || *gap == -kNoSurface) {
        throw bad_line(origin, line_number, "\"" + std::string(cells[k].substr(0, 40)) + "\" is not a gap.",
                       "write a number in mm, or leave the cell empty where there is no surface.");
      }
      result.gap_mm.push_back(std::isnan(*gap) ? kNoSurface : *gap);
    }
  }
  if (header_line == 0)
    throw bad_line(origin, 1, "there is no grid in the file.",
                   "see the first line of an example: gap_mm, then places along x.");
  const Places along = equal_steps(x, "x", origin, header_line), across = equal_steps(s, "s", origin, last_line);
  result.grid = {along.count, across.count, along.first, across.first, along.step, across.step};
  if (std::none_of(result.gap_mm.begin(), result.gap_mm.end(), [](double h) { return std::isfinite(h); })) {
    throw InputError(ErrorCode::no_contact, origin + ": no cell of the grid holds a gap.", "fill in the gaps in mm.");
  }
  return result;
}

GapGrid read_gap_grid(const std::filesystem::path& file) { return parse_gap_grid(read_file(file), file.string()); }

}  // namespace runband
