// The normal contact problem: where two bodies touch, how hard, and how far they approach.
//
// Given the distance h(x, s) of the undeformed surfaces, find the pressure p on a grid of rectangular cells such that
//     p >= 0,   u + h - delta >= 0,   p (u + h - delta) = 0,   u = K p,
// with either the load (the sum of p over the cells) or the approach delta given. With a hardness H also p <= H, where
// a cell at the cap has yielded: there u + h - delta <= 0 and the difference is its plastic flattening
// (elastic-perfectly plastic cap).
//
// The box is found by itself. A coarse grid over the starting box is solved first; the box grows while contact reaches
// its border, shrinks to the contact, and cells are refined until `cells` of them span the longer side. Several
// separate spots are found together. Each grid starts from the one before, so that the finest takes a handful of steps.
#pragma once

#include <functional>
#include <limits>
#include <optional>
#include <vector>

#include "core/base/progress.h"
#include "core/base/quantities.h"

namespace runband::halfspace {

/// Writes the distance of the undeformed surfaces at every cell centre of `grid` to gap_mm[j * nx + i], mm; negative
/// where they overlap, infinite where one of them ends. Must be a pure function.
using GapFunction = std::function<void(const Grid& grid, double* gap_mm)>;

/// Rectangle in the contact frame.
struct Box {
  double x_min_mm = 0, x_max_mm = 0, s_min_mm = 0, s_max_mm = 0;
};

struct NormalProblem {
  GapFunction gap;
  Box start;  ///< where to look first: should contain the contact and be no more than some ten times as wide
  std::optional<Box> limits;           ///< the gap is known only here; contact that reaches the border is reported
  double contact_modulus_MPa = 0;      ///< E*
  std::optional<double> load_N;        ///< either this, > 0,
  std::optional<double> approach_mm;   ///< or this: delta, counted from the zero of the gap
  std::optional<double> hardness_MPa;  ///< cap on the pressure
};

struct NormalOptions {
  int cells = 64;                    ///< across the longer side of the contact, 4..1024
  double tolerance = 1e-6;           ///< rms of the remaining gap over the loaded cells, over rms of u
  std::optional<double> cell_ratio;  ///< dx/ds; by default 1 up to an extent of 2 : 1, then growing with it
  int coarse_cells = 32;             ///< cells along the longer side of the first box, 16..128
};

struct NormalSolution {
  Grid grid;                         ///< at least one empty cell around the contact, unless `limits` or a body ends
  std::vector<double> pressure_MPa;  ///< cell averages, [j * nx + i]
  std::vector<double> gap_mm;        ///< u + h - delta: zero under elastic contact, < 0 where capped
  double approach_mm = 0;
  double load_N = 0;
  double area_mm2 = 0;         ///< estimated inside the cells from p^2, which falls linearly to the edge
  double cell_area_mm2 = 0;    ///< all cells under pressure
  double capped_area_mm2 = 0;  ///< cells at the hardness
  double peak_pressure_MPa =
      0;                        ///< vertex of p^2 through the highest cell and its neighbours, never above the hardness
  int spots = 0;                ///< separate places of contact (cells that share an edge or corner belong together)
  bool reaches_limits = false;  ///< contact at the border of `limits`: the answer is cut off there
  int iterations = 0;           ///< outer steps, all grids together
  double convolutions = 0;      ///< work of all grids in convolutions of the final grid
  double residual = 0;          ///< as `tolerance`
};

/// @throws InputError (out_of_range) for a non-positive modulus, load, hardness or box, or options out of range;
///         (conflicting_keys) unless exactly one of load and approach is given; (no_contact) if the gap is infinite
///         everywhere or not a number; NotConverged with iterations and residual; Cancelled.
/// A given approach at which nothing touches gives an empty solution of zero load.
/// @accuracy residual <= tolerance, load to 1e-12; discretisation error in tests/convergence/normal_order_test.cpp.
/// Deterministic: the same bits on the same machine, from any thread.
/// @source Polonsky & Keer, Wear 231 (1999) 206 (problem); Hintermueller, Ito & Kunisch, SIAM J. Optim. 13 (2002) 865
///         (primal-dual active set); Vollebregt, J. Tribol. 136 (2014) 021403 (FFT preconditioner) (memory).
NormalSolution solve_normal(const NormalProblem& problem, const NormalOptions& options = {}, const Progress& = {});

/// The same on a grid that stays as it is (no box finding, no refinement), the gap given as values [j * nx + i].
NormalSolution solve_normal_on(const Grid& grid, const std::vector<double>& gap_mm, const NormalProblem& problem,
                               double tolerance = 1e-6, const Progress& = {});

}  // namespace runband::halfspace
