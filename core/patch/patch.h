// One contact patch: its grid, its pressure and how they were found.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "core/base/material.h"
#include "core/base/progress.h"
#include "core/base/quantities.h"
#include "core/hertz/hertz.h"

namespace runband {

enum class PatchMethod { hertz, half_space };

struct PatchOptions {
  PatchMethod method = PatchMethod::hertz;
  int cells = 64;  ///< across the longer side of the patch, 8..512
  bool operator==(const PatchOptions&) const = default;
};

struct Patch {
  PatchMethod method = PatchMethod::hertz;
  Grid grid;
  Field pressure;  ///< name "pressure", unit MPa, cell averages
  double area_mm2 = 0;
  double peak_pressure_MPa = 0;
  double approach_mm = 0;
  int iterations = 0;  ///< 0 for the closed form
  int convolutions = 0;
  double solve_ms = 0;
  std::vector<Caution> cautions;
};

/// The ellipse's pressure on a grid with one empty cell around it.
Patch hertz_patch(const HertzEllipse& ellipse, const PatchOptions& options);

}  // namespace runband
