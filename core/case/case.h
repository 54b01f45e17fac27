// Everything asked: one plain value, one TOML file.
#pragma once

#include <filesystem>
#include <map>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "core/base/material.h"
#include "core/locate/locate.h"
#include "core/pairing/pairing.h"
#include "core/patch/patch.h"

namespace runband {

struct ProfileRequest {
  std::string profile;
  ProfileOptions options;
};

struct StateRequest {
  std::vector<double> lateral_mm{0.0};  ///< one for solve; several make a traverse
  double yaw_mrad = 0.0;
  double speed_m_s = 20.0;
  LateralReference reference = LateralReference::axle;
};

/// One contact given by its relative curvatures, without a wheelset.
struct BenchRequest {
  double curvature_rolling_per_mm = 0;
  double curvature_across_per_mm = 0;
  double normal_force_N = 0;
  std::string gap_file;  ///< optional CSV grid of gaps instead of curvatures (half-space only)
};

struct CreepageRequest {
  std::optional<double> longitudinal, lateral, spin_per_mm;
};

using ParameterValue = std::variant<double, bool, std::string>;

struct PlateRequest {
  std::string plate;  ///< section, patch, scene, traverse
  std::string file;
  std::string size = "180x120mm";
  double dpi = 300;
  std::string theme = "paper";
};

struct Case {
  std::string title;
  TrackGeometry track;
  WheelsetGeometry wheelset;
  ProfileRequest wheels[2];  ///< left, right
  ProfileRequest rails[2];
  StateRequest state;
  WheelLoads load;
  MaterialPair material;
  double friction = 0.3;
  PatchOptions patch;
  CreepageRequest creepage;
  std::optional<BenchRequest> bench;
  std::map<std::string, std::map<std::string, ParameterValue>> analyses;
  std::vector<PlateRequest> plates;
  std::filesystem::path folder;  ///< relative profile paths start here
  std::string origin;            ///< the file it came from
};

/// Reads a case file. Unknown keys are errors that name the nearest known one with the line.
/// @param settings "section.key=value" strings that override the file.
/// @throws InputError (102..107), FileError.
Case load_case(const std::filesystem::path& file, const std::vector<std::string>& settings = {});
Case parse_case(const std::string& toml_text, const std::string& origin, const std::filesystem::path& folder,
                const std::vector<std::string>& settings = {});

/// The case as TOML that parses to the same value.
std::string write_case(const Case&);

}  // namespace runband
