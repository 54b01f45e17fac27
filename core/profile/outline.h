// Does an outline cross itself?
#pragma once

#include <optional>
#include <utility>
#include <vector>

#include "core/profile/curve.h"

namespace runband {

/// The first place where a polyline crosses or touches itself: the indices of the two segments, in order; segment i
/// joins points i and i + 1. Exact predicates (CGAL), so that near misses are told from crossings.
std::optional<std::pair<std::size_t, std::size_t>> self_crossing(const std::vector<Vec2>& points);

}  // namespace runband
