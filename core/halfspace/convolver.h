// Convolution on a grid with a fixed kernel: prepared once, applied many times.
#pragma once

#include <memory>
#include <span>

#include "core/halfspace/fft.h"

namespace runband::halfspace {

/// Smallest box side >= n (a multiple of 8 without prime factors above 7) on which boxes and their doubled, padded
/// boxes transform fast and vectorise well.
int friendly_size(int n);

/// How a kernel continues to negative offsets.
enum class Parity { even, odd };

/// u(i, j) = sum over (k, l) of K(i - k, j - l) p(k, l) on an nx by ns grid, linear (not periodic), by zero-padded FFT.
///
/// Every influence coefficient of the half-space is even or odd in both offsets together, so its transform is real and
/// the product costs one multiplication an entry. Immutable; apply() is safe from several threads, each with its own
/// Workspace.
template <typename Real>
class Convolver {
 public:
  struct Workspace {
    FftBuffer<Real> padded, spectrum;
  };

  /// @param table   kernel at offsets (i, j), i = 0..nx-1, j = 0..ns-1, at [j * nx + i], as from love_table.
  /// @param parity  of the kernel in each offset: even for Love, xx and ss, odd for xs (both offsets alike).
  /// @param scale   factor on the result.
  Convolver(int nx, int ns, std::span<const double> table, Parity parity = Parity::even, double scale = 1.0);

  int nx() const { return nx_; }
  int ns() const { return ns_; }
  const Transform<Real>& transform() const { return *plan_; }
  /// Real symbol with the normalisation of the inverse transform and `scale` in it, laid out like the spectrum.
  const Real* symbol() const { return symbol_.get(); }

  Workspace workspace() const;
  /// @param p  nx*ns values, row-major [ns][nx]; @param u  the same, overwritten (may be p itself).
  /// @accuracy about 1e-15 (double), 4e-7 (float) of the largest |u|.
  void apply(const Real* p, Real* u, Workspace& work) const;

 private:
  int nx_, ns_;
  std::shared_ptr<const Transform<Real>> plan_;
  FftBuffer<Real> symbol_;
};

/// Approximate inverse of an even, positive kernel: the inverse of its periodic (circulant) version on the unpadded
/// box. Costs about a third of a convolution and is what makes conjugate gradients converge in a few steps.
template <typename Real>
class CirculantInverse {
 public:
  using Workspace = typename Convolver<Real>::Workspace;
  CirculantInverse(int nx, int ns, std::span<const double> table);
  Workspace workspace() const;
  void apply(const Real* p, Real* u, Workspace& work) const;

 private:
  int nx_, ns_;
  std::shared_ptr<const Transform<Real>> plan_;
  FftBuffer<Real> symbol_;
};

}  // namespace runband::halfspace
