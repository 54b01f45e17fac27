// Files of profile points: text with two columns, as measuring devices and spreadsheets write them.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/profile/profile.h"

namespace runband {

/// The rows of a file as they stand, with what its header and comments say.
struct PointsFile {
  std::vector<Vec2> values;  ///< (y, z) in the file's unit and axes
  std::vector<long> rows;    ///< 1-based line of each
  std::optional<double> noise_mm;
  std::string unit, y_axis, z_axis, title, source;  ///< empty where the file does not say
};

/// Reads rows of numbers separated by ";", tab, "," or spaces ("," may be the decimal mark with ";" and tab). Lines
/// that begin with # are comments; "# unit: mm", "# y_axis: field|gauge", "# z_axis: up|down", "# noise_mm: 0.02",
/// "# title: ...", "# source: ..." among them are heeded. A header row names columns y and z, with a unit as in
/// "y_mm;z_mm" or "y [mm], z [mm]"; columns of other names are passed over. Without a header there must be two columns.
/// @throws InputError (profile_bad_row, profile_not_a_number, bad_option), FileError (file_wrong_kind).
PointsFile parse_points(const std::string& bytes, const std::string& origin);

}  // namespace runband
