// The verbs of the program, as plain options and functions.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/base/progress.h"

namespace runband {

struct CaseOptions {
  std::string case_file;
  std::vector<std::string> settings;  ///< --set section.key=value
  std::vector<std::string> with;      ///< --with a,b: these analyses only
  std::vector<std::string> plugin_folders;
};

struct OutputOptions {
  bool json = false;
  bool csv = false;
  std::string out;  ///< folder (solve, traverse, profile) or file (draw)
};

struct ViewOptions {
  CaseOptions input;
  long frames = 0;  ///< ends after so many; 0: when it is closed
};
int view_command(const ViewOptions&, const Progress&);

struct SolveOptions {
  CaseOptions input;
  OutputOptions output;
};
int solve_command(const SolveOptions&, const Progress&);

struct TraverseOptions {
  CaseOptions input;
  OutputOptions output;
  std::optional<double> from_mm, to_mm, step_mm;
};
int traverse_command(const TraverseOptions&, const Progress&);

struct DrawOptions {
  CaseOptions input;
  std::string plate;
  std::string out;
  std::string size;
  double dpi = 300;
  std::string theme = "paper";
  bool transparent = false;
  std::string contact;  ///< "left", "right tread", ...; empty: all, or the one that matters most
  std::string field;    ///< of an analysis, for patch and curve
  std::string date;     ///< printed in the title block if given
};
int draw_command(const DrawOptions&, const Progress&);

struct ProfileCommandOptions {
  std::string file;
  std::string kind;  ///< wheel, rail or empty
  std::string reference;
  std::optional<double> noise_mm;
  std::string unit, y_axis, z_axis;
  std::string plot;
  OutputOptions output;
};
/// All installed analyses, or one in full.
int analyses_command(const std::string& name);

int profile_command(const ProfileCommandOptions&, const Progress&);

}  // namespace runband
