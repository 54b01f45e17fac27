// The rolling radius difference over lateral displacement as a function that is cheap to evaluate and integrate.
#pragma once

#include <vector>

#include "core/locate/locate.h"

namespace runband {

/// Cubic between the positions of a sweep, from values and slopes there; a contact jump is a piece 3e-7 mm wide.
class Difference {
 public:
  explicit Difference(const RigidSweep& sweep);

  double begin() const { return y_.front(); }
  double end() const { return y_.back(); }
  const std::vector<double>& places() const { return y_; }
  const std::vector<double>& values() const { return r_; }

  double at(double y) const { return value(piece(y), y); }
  /// Integral from begin().
  double sum(double y) const { return sum(piece(y), y); }
  std::size_t piece(double y) const;
  double value(std::size_t piece, double y) const;
  double sum(std::size_t piece, double y) const;

 private:
  std::vector<double> y_, r_, slope_[2];  ///< slope_[0][k], slope_[1][k]: at the beginning and the end of piece k
  std::vector<double> sum_;
};

/// Ends of the kinematic motion of total width 2 A: equal integrals at both. False if it does not fit.
bool ends_of_motion(const Difference& d, double amplitude, double& low, double& high);

/// Wavelength of y'' + r(y) / (e r0) = 0 between low and high, mm. Source: EN 15302, J. Klingel 1883 for the cone.
double kinematic_wavelength_mm(const Difference& d, double low, double high, double running_distance, double radius);

/// Half the slope of the straight line through the difference over [-A, A]. Source: EN 15302, linear regression.
double conicity_by_regression(const Difference& d, double amplitude);

}  // namespace runband
