// The slip that tractions cause: tangential influence on a box of cells, differenced along the rolling direction.
//
// Lengths here are in units of the cell size dx, displacements in units of dx/G per unit traction, so that one operator
// serves all sizes of one shape.
#pragma once

#include <memory>
#include <vector>

#include "core/halfspace/rolling_convolution.h"

namespace runband::halfspace {

/// Weights of the displacement at x, x + dx and x + 2 dx in the slip of a cell (the leading edge is at +x).
/// Steady rolling: (1 + b/2, 1 + b, b/2) with b = 0 first-order upwind, b = 1 second order. At rest: (1, 0, 0).
struct SlipStencil {
  double here = 1, ahead = 1, ahead2 = 0;
};

struct OperatorShape {
  int nx = 0, ns = 0;  ///< box
  double ds_over_dx = 1;
  double poisson_ratio = 0.25;
  SlipStencil stencil;
};

/// s = A p: slip (times dx) of each cell from the tractions of all, in the units above. Immutable and shareable.
/// A(d) = here K(d) - ahead K(d + dx) + ahead2 K(d + 2 dx), K the integrals of Cerruti's solution over a cell for the
/// two like bodies together. Source: J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990), ch. 4.
class RollingOperator {
 public:
  explicit RollingOperator(const OperatorShape& shape);

  const OperatorShape& shape() const { return shape_; }
  std::size_t values() const { return 2 * static_cast<std::size_t>(shape_.nx) * static_cast<std::size_t>(shape_.ns); }
  /// ns x nx pairs, row-major; in and out may be the same.
  void apply(const double* in, double* out, PairScratch<double>& scratch) const { fine_.apply(in, out, scratch); }
  void apply(const float* in, float* out, PairScratch<float>& scratch) const { fast_.apply(in, out, scratch); }
  /// h = Kc^-1 u, Kc the circulant of K on the unpadded box.
  void solve_circulant(const float* in, float* out, PairScratch<float>& scratch) const {
    circulant_.apply(in, out, scratch);
  }

  std::size_t points() const { return fast_.points(); }  ///< of the padded transform
  double own_xx() const { return own_xx_; }              ///< A_xx(0)
  double own_ss() const { return own_ss_; }
  double influence_own() const { return influence_own_; }  ///< the mean of K_xx(0) and K_ss(0)
  /// Cost of one circulant solve in units of one float convolution.
  double circulant_cost() const {
    return static_cast<double>(circulant_.points()) / static_cast<double>(fast_.points());
  }

 private:
  struct Influence;
  void make_convolutions(const Influence& k);
  void make_circulant(const Influence& k, int px, int ps);

  OperatorShape shape_;
  PairConvolution<double> fine_;
  PairConvolution<float> fast_;
  PairConvolution<float> circulant_;
  double own_xx_ = 0, own_ss_ = 0, influence_own_ = 0;
};

}  // namespace runband::halfspace
