// The linear system of one Newton step: its rows, its preconditioner, and the Krylov iteration that solves it.
#pragma once

#include <vector>

#include "core/halfspace/rolling_level.h"

namespace runband::halfspace {

/// Rows: omega (A dp + (own + sigma) dp) / D; in slip cells along t only, where dp = tau t. Vectors hold pairs on the
/// box; in slip cells they lie along t, outside contact they are zero.
struct LinearSystem {
  const RollingLevel* level = nullptr;
  std::vector<float> mask;     ///< per value: 1 in stick cells, 0 in others
  std::vector<float> tangent;  ///< per cell a pair: t in slip cells, (0, 0) in others
  std::vector<float> own;      ///< per value: lambda = |s| / g in slip cells, plus the compliance of a cut cell
  std::vector<float>
      weight;  ///< per value: omega = 1 / sqrt(1 + own / kappa), 0 outside; the same for both in slip cells
  std::vector<float> gain;   ///< per value: D / weight, 0 outside
  std::vector<float> pivot;  ///< per value: 1 / (here + (own + sigma) / kappa), 0 outside
  double sigma = 0;

  /// out = rows applied to in. in != out.
  void apply(const float* in, float* out, PairScratch<float>& scratch) const;
  /// out = M in: integrates the upwind stencil along each strip from the leading edge, inverts the circulant of K, and
  /// restricts to the free directions.
  void precondition(const float* in, float* out, PairScratch<float>& scratch) const;

 private:
  template <int Strips>
  void integrate_strips(const float* in, float* out, int first) const;
};

/// Vectors of one Krylov iteration, made as they are needed and kept for the next.
struct KrylovScratch {
  std::vector<std::vector<float>> basis, directions;
};

struct KrylovResult {
  int iterations = 0;
  double relative_residual = 1;
};

/// Right-preconditioned flexible GMRES from zero. `solution` receives M-combined directions. Source: Y. Saad, SIAM J.
/// Sci. Comput. 14 (1993) 461.
KrylovResult solve_fgmres(const LinearSystem& system, const std::vector<float>& rhs, double tolerance,
                          int max_iterations, KrylovScratch& vectors, PairScratch<float>& scratch,
                          std::vector<float>& solution);

}  // namespace runband::halfspace
