// Samples of a profile curve for searching: even steps of arc, every break among them. What is found between two
// samples is then polished on the exact curve.
#pragma once

#include <vector>

#include "core/profile/curve.h"

namespace runband {

/// Points of the curve from t_begin to t_end, at most about `step_mm` of arc apart, breaks included. Unit: mm, > 0.
std::vector<CurvePoint> even_samples(const ProfileCurve& curve, double step_mm);

}  // namespace runband
