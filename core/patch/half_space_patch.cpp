#include "core/patch/half_space_patch.h"

#include <algorithm>
#include <chrono>
#include <cmath>
#include <string>
#include <utility>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/halfspace/elastic.h"
#include "core/halfspace/normal.h"

namespace runband {

namespace {

constexpr int kFewestCells = 8;
constexpr int kMostCells = 512;

// The contact with one empty cell around it, as far as the solved grid reaches.
void crop_to_contact(Grid& grid, std::vector<double>& p) {
  int i0 = grid.nx, i1 = -1, j0 = grid.ns, j1 = -1;
  for (int j = 0; j < grid.ns; ++j) {
    for (int i = 0; i < grid.nx; ++i) {
      if (!(p[static_cast<std::size_t>(j * grid.nx + i)] > 0)) continue;
      i0 = std::min(i0, i), i1 = std::max(i1, i);
      j0 = std::min(j0, j), j1 = std::max(j1, j);
    }
  }
  if (i1 < 0) return;
  i0 = std::max(i0 - 1, 0), i1 = std::min(i1 + 1, grid.nx - 1);
  j0 = std::max(j0 - 1, 0), j1 = std::min(j1 + 1, grid.ns - 1);
  std::vector<double> kept;
  kept.reserve(static_cast<std::size_t>((i1 - i0 + 1) * (j1 - j0 + 1)));
  for (int j = j0; j <= j1; ++j) {
    kept.insert(kept.end(), p.begin() + j * grid.nx + i0, p.begin() + j * grid.nx + i1 + 1);
  }
  grid = {i1 - i0 + 1, j1 - j0 + 1, grid.x(i0), grid.s(j0), grid.dx_mm, grid.ds_mm};
  p = std::move(kept);
}

Patch solve_patch(halfspace::NormalProblem problem, double normal_force_N, const MaterialPair& material,
                  const PatchOptions& options, const Progress& progress) {
  const auto start = std::chrono::steady_clock::now();
  if (options.cells < kFewestCells || options.cells > kMostCells) {
    throw out_of_range("patch", "cells", options.cells, "1", "between 8 and 512");
  }
  require_positive("half-space patch", "normal force", normal_force_N, "N");
  const halfspace::ElasticPair pair = halfspace::elastic_pair(material);
  problem.contact_modulus_MPa = pair.contact_modulus_MPa;
  problem.load_N = normal_force_N;
  problem.hardness_MPa = material.hardness_MPa;
  halfspace::NormalOptions how;
  how.cells = options.cells;
  halfspace::NormalSolution solution = halfspace::solve_normal(problem, how, progress);

  Patch patch;
  patch.method = PatchMethod::half_space;
  patch.area_mm2 = solution.area_mm2;
  patch.peak_pressure_MPa = solution.peak_pressure_MPa;
  patch.approach_mm = solution.approach_mm;
  patch.iterations = solution.iterations;
  patch.convolutions = static_cast<int>(std::ceil(solution.convolutions));
  if (solution.reaches_limits) {
    patch.cautions.push_back(
        {"contact_at_border", Severity::warning,
         "The contact reaches the border of the given gap and is cut off there: give a wider grid."});
  }
  if (solution.capped_area_mm2 > 0) {
    patch.cautions.push_back({"pressure_capped", Severity::note,
                              "The hardness caps the pressure on " + number_text(solution.capped_area_mm2, 3) +
                                  " mm2 of the patch; there the surfaces flatten plastically."});
  }
  if (const auto caution = halfspace::mismatch_caution(pair)) patch.cautions.push_back(*caution);
  crop_to_contact(solution.grid, solution.pressure_MPa);
  patch.grid = solution.grid;
  patch.pressure.name = "pressure";
  patch.pressure.title = "Contact pressure";
  patch.pressure.unit = "MPa";
  patch.pressure.grid = solution.grid;
  patch.pressure.values = std::move(solution.pressure_MPa);
  patch.pressure.from =
      "elastic half-space, uniform pressure on each cell (Love 1929), residual " + number_text(solution.residual, 2);
  patch.solve_ms = std::chrono::duration<double, std::milli>(std::chrono::steady_clock::now() - start).count();
  return patch;
}

}  // namespace

std::vector<std::vector<std::size_t>> zones_solved_together(const std::vector<ContactZone>& zones) {
  const auto overlaps = [](const ContactZone& zone) {
    return std::any_of(zone.cautions.begin(), zone.cautions.end(),
                       [](const Caution& c) { return c.code == "patches_overlap"; });
  };
  std::vector<std::vector<std::size_t>> groups;
  for (std::size_t k = 0; k < zones.size(); ++k) {
    if (!zones[k].carries_load) continue;
    // Zones come in order across a side, so what overlaps is neighbours.
    const bool joins = !groups.empty() && overlaps(zones[k]) && overlaps(zones[groups.back().back()]) &&
                       zones[groups.back().back()].side == zones[k].side;
    if (joins) {
      groups.back().push_back(k);
    } else {
      groups.push_back({k});
    }
  }
  for (auto& group : groups) {
    std::stable_sort(group.begin(), group.end(),
                     [&](std::size_t a, std::size_t b) { return zones[a].normal_force_N > zones[b].normal_force_N; });
  }
  return groups;
}

Patch half_space_patch(const Locator& locator, const std::vector<ContactZone>& zones,
                       const std::vector<std::size_t>& group, const WheelsetPose& pose, const MaterialPair& material,
                       const PatchOptions& options, const Progress& progress) {
  if (group.empty()) {
    throw InputError(ErrorCode::no_contact, "half-space patch: the group of zones is empty.",
                     "name the zones that carry load.");
  }
  const ContactZone& zone = zones.at(group.front());
  halfspace::NormalProblem problem;
  problem.gap = [&](const Grid& grid, double* gap) {
    const std::vector<double> field = locator.gap_field_mm(zone, pose, grid);
    std::copy(field.begin(), field.end(), gap);
  };
  // Somewhat more than the ellipses; where there is none, a box of the usual size (it grows and shrinks by itself).
  constexpr double kMargin = 1.4, kUsual = 8.0, kLeast = 0.2, kMost = 40.0;
  double force_N = 0;
  halfspace::Box& box = problem.start;
  for (const std::size_t k : group) {
    const ContactZone& part = zones.at(k);
    force_N += part.normal_force_N * zone.frame.col(2).dot(part.frame.col(2));
    double half_x = kUsual, half_s = kUsual;
    if (part.ellipse) {
      half_x = std::clamp(kMargin * part.ellipse->semi_axis_rolling_mm, kLeast, kMost);
      half_s = std::clamp(kMargin * part.ellipse->semi_axis_across_mm, kLeast, kMost);
    }
    const Vec3 away = part.track_mm - zone.track_mm;
    const double x = away.dot(zone.frame.col(0)), s = away.dot(zone.frame.col(1));
    box = {std::min(box.x_min_mm, x - half_x), std::max(box.x_max_mm, x + half_x), std::min(box.s_min_mm, s - half_s),
           std::max(box.s_max_mm, s + half_s)};
  }
  return solve_patch(std::move(problem), force_N, material, options, progress);
}

Patch half_space_patch(const Locator& locator, const ContactZone& zone, const WheelsetPose& pose, double normal_force_N,
                       const MaterialPair& material, const PatchOptions& options, const Progress& progress) {
  ContactZone alone = zone;
  alone.normal_force_N = normal_force_N;
  return half_space_patch(locator, {alone}, {0}, pose, material, options, progress);
}

Patch half_space_patch(double curvature_rolling_per_mm, double curvature_across_per_mm, double normal_force_N,
                       const MaterialPair& material, const PatchOptions& options, const Progress& progress) {
  const HertzEllipse ellipse =
      hertz_ellipse(curvature_rolling_per_mm, curvature_across_per_mm, normal_force_N, material);
  halfspace::NormalProblem problem;
  problem.gap = [=](const Grid& grid, double* gap) {
    for (int j = 0; j < grid.ns; ++j) {
      const double across = 0.5 * curvature_across_per_mm * grid.s(j) * grid.s(j);
      for (int i = 0; i < grid.nx; ++i) {
        gap[j * grid.nx + i] = 0.5 * curvature_rolling_per_mm * grid.x(i) * grid.x(i) + across;
      }
    }
  };
  constexpr double kMargin = 1.4;
  const double half_x = kMargin * ellipse.semi_axis_rolling_mm, half_s = kMargin * ellipse.semi_axis_across_mm;
  problem.start = {-half_x, half_x, -half_s, half_s};
  return solve_patch(std::move(problem), normal_force_N, material, options, progress);
}

Patch half_space_patch(const GapGrid& gap, double normal_force_N, const MaterialPair& material,
                       const PatchOptions& options, const Progress& progress) {
  const Grid& known = gap.grid;
  halfspace::NormalProblem problem;
  problem.gap = [&](const Grid& grid, double* values) {
    for (int j = 0; j < grid.ns; ++j) {
      for (int i = 0; i < grid.nx; ++i) values[j * grid.nx + i] = gap.at(grid.x(i), grid.s(j));
    }
  };
  problem.start = {known.x(0), known.x(known.nx - 1), known.s(0), known.s(known.ns - 1)};
  problem.limits = problem.start;
  return solve_patch(std::move(problem), normal_force_N, material, options, progress);
}

}  // namespace runband
