// The compiled-in table of linear creep coefficients: Chebyshev coefficients of log C11, C22, C23, C33 over log(a/b)
// and nu.
#pragma once

namespace runband::halfspace {

constexpr int kCreepTableRatios = 24;
constexpr int kCreepTableNus = 8;
constexpr double kCreepTableLogRatio = 3.0;  ///< covers exp(-3)..exp(3): a/b 0.05..20

/// [coefficient][order in log(a/b) / kCreepTableLogRatio][order in 4 nu - 1]
extern const double kCreepTable[4][kCreepTableRatios][kCreepTableNus];

}  // namespace runband::halfspace
