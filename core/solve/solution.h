// Everything answered: a plain value made by solve(case).
#pragma once

#include <map>
#include <memory>
#include <string>
#include <vector>

#include "core/analysis/registry.h"
#include "core/case/case.h"
#include "core/locate/locate.h"
#include "core/patch/patch.h"

namespace runband {

struct Contact {
  bool on_bench = false;  ///< side has no meaning then
  ContactZone zone;
  std::optional<Patch> patch;  ///< where it carries load
  std::map<std::string, AnalysisResult> analyses;
};

struct Solution {
  Case asked;
  std::shared_ptr<const Locator> locator;  ///< null for a bench case
  WheelsetPose pose;
  std::vector<Contact> contacts;
  std::map<std::string, AnalysisResult> analyses;  ///< of the wheelset as a whole
  std::vector<Caution> cautions;
  double solve_ms = 0;
};

/// Which analyses run, and from where.
struct AnalysisChoice {
  const AnalysisRegistry* registry = &installed_analyses();
  std::vector<std::string> with;  ///< ids, and with them what they need; empty: all
};

/// @throws Error of any kind. Never half-made.
Solution solve(const Case&, const Progress& = {}, const AnalysisChoice& = {});

/// Profiles, pairing and tables of a case: what stays the same while the wheelset moves. Null for a bench case.
std::shared_ptr<const Locator> prepare(const Case&);
/// The same with the tables of an earlier prepare() of a case that differs at most in state, load, material, friction
/// and patch.
Solution solve(const Case&, std::shared_ptr<const Locator>, const Progress& = {}, const AnalysisChoice& = {});

struct SideTraverse {
  std::vector<double> contact_angle_deg, rolling_radius_mm, wheel_y_mm, rail_y_mm;
};
struct Traverse {
  Case asked;
  std::shared_ptr<const Locator> locator;
  std::vector<double> lateral_mm, rolling_radius_difference_mm, roll_mrad, height_mm;
  SideTraverse left, right;
  std::vector<ContactJump> jumps;
  std::map<std::string, AnalysisResult> analyses;
  std::vector<Caution> cautions;
};
Traverse traverse(const Case&, double from_mm, double to_mm, double step_mm, const Progress& = {},
                  const AnalysisChoice& = {});
Traverse traverse(const Case&, const std::vector<double>& positions_mm, const Progress& = {},
                  const AnalysisChoice& = {});
/// The same with the tables of an earlier prepare(), as in solve().
Traverse traverse(const Case&, std::shared_ptr<const Locator>, const std::vector<double>& positions_mm,
                  const Progress& = {}, const AnalysisChoice& = {});

/// JSON and CSV as documented in README; writers of the VTK XML files of --out.
std::string solution_json(const Solution&);
std::string solution_csv(const Solution&);
std::string traverse_json(const Traverse&);
std::string traverse_csv(const Traverse&);
/// solution.json, contacts.csv, patch_<side>_<zone>.vti for each patch (pressure and every Field), surfaces as .vtp.
void write_solution(const Solution&, const std::filesystem::path& folder);

}  // namespace runband
