// What every computation returns: named values that carry their unit and where they came from. Viewer, tables and files
// know only these, so a new analysis needs no change anywhere else.
#pragma once

#include <string>
#include <vector>

namespace runband {

/// Rectangular grid on the contact patch in its contact frame: x along rolling, s across (towards the field side).
struct Grid {
  int nx = 0;        ///< cells along x
  int ns = 0;        ///< cells along s
  double x0_mm = 0;  ///< x of the centre of cell (0, 0)
  double s0_mm = 0;  ///< s of the centre of cell (0, 0)
  double dx_mm = 0;  ///< cell size along x
  double ds_mm = 0;  ///< cell size along s

  int cells() const { return nx * ns; }
  double x(int i) const { return x0_mm + i * dx_mm; }
  double s(int j) const { return s0_mm + j * ds_mm; }
  bool operator==(const Grid&) const = default;
};

/// Scalar, vector or label on the patch grid. values[(j * nx + i) * components + c]; labels are small integers that
/// index `labels`.
struct Field {
  enum class Kind { scalar, vector, label };
  std::string name;   ///< snake_case, unique within its analysis
  std::string title;  ///< as a reader sees it
  std::string unit;
  Kind kind = Kind::scalar;
  int components = 1;
  Grid grid;
  std::vector<double> values;
  std::vector<std::string> labels;  ///< kind == label: name of 0, 1, 2, ...
  std::string from;                 ///< method and source
};

/// A number.
struct Quantity {
  std::string name;
  std::string title;
  std::string unit;
  double value = 0;
  std::string from;
};

/// y over x.
struct Curve {
  std::string name;
  std::string title;
  std::string x_title, x_unit;
  std::string y_title, y_unit;
  std::vector<double> x, y;
  std::string from;
};

/// Points or lines on the patch, in mm in the contact frame.
struct Mark {
  std::string name;
  std::string title;
  bool is_line = false;  ///< consecutive points joined
  std::vector<double> x_mm, s_mm;
  std::string from;
};

/// Values below the patch: layer k lies at depth_mm[k]; values[((k * ns + j) * nx + i)].
struct Volume {
  std::string name;
  std::string title;
  std::string unit;
  Grid grid;
  std::vector<double> depth_mm;
  std::vector<double> values;
  std::string from;
};

enum class Severity { note, caution, warning };

/// A sentence the reader must see, with its cure.
struct Caution {
  std::string code;  ///< stable, snake_case
  Severity severity = Severity::caution;
  std::string text;
  bool operator==(const Caution&) const = default;
};

}  // namespace runband
