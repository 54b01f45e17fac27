// Symmetric positive definite band matrices: what smoothing splines solve.
#pragma once

#include <Eigen/Core>

namespace runband {

/// Lower half of a symmetric matrix of half bandwidth 5: band(d, i) = A(i + d, i).
using Band = Eigen::Matrix<double, 6, Eigen::Dynamic>;

/// A = L D L^T of a band matrix.
class BandFactor {
 public:
  /// @return false from ok() if the matrix is not positive definite to rounding.
  explicit BandFactor(const Band& matrix);
  bool ok() const { return ok_; }
  /// Solves A x = b in place; b is size x any number of columns.
  void solve(Eigen::MatrixXd& b) const;
  /// The entries of the inverse that lie within the band, in the same storage.
  /// @source Takahashi's recursion; Hutchinson & de Hoog, Numer. Math. 47 (1985) 99.
  Band inverse_band() const;

 private:
  Band factor_;  ///< row 0: D; rows 1..5: L below its unit diagonal
  bool ok_ = true;
};

}  // namespace runband
