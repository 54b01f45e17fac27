#include "core/profile/outline.h"

#include <CGAL/Bbox_2.h>
#include <CGAL/Exact_predicates_inexact_constructions_kernel.h>
#include <CGAL/box_intersection_d.h>
#include <CGAL/intersections.h>

#include <algorithm>

namespace runband {

namespace {
using Kernel = CGAL::Exact_predicates_inexact_constructions_kernel;
using Box = CGAL::Box_intersection_d::Box_with_info_d<double, 2, std::size_t>;
}  // namespace

std::optional<std::pair<std::size_t, std::size_t>> self_crossing(const std::vector<Vec2>& points) {
  std::vector<Kernel::Segment_2> segments;
  std::vector<Box> boxes;
  for (std::size_t i = 0; i + 1 < points.size(); ++i) {
    segments.emplace_back(Kernel::Point_2(points[i].x(), points[i].y()),
                          Kernel::Point_2(points[i + 1].x(), points[i + 1].y()));
    boxes.emplace_back(segments.back().bbox(), i);
  }
  std::optional<std::pair<std::size_t, std::size_t>> first;
  const auto report = [&](const Box& a, const Box& b) {
    const std::size_t i = std::min(a.info(), b.info()), j = std::max(a.info(), b.info());
    if (first && std::pair(i, j) >= *first) return;
    const Kernel::Segment_2 &s = segments[i], &t = segments[j];
    // Neighbours share a point; they cross only where one folds back onto the other.
    const bool crossing = j == i + 1 ? CGAL::collinear(s.source(), s.target(), t.target()) &&
                                           CGAL::angle(s.source(), s.target(), t.target()) == CGAL::ACUTE
                                     : CGAL::do_intersect(s, t);
    if (crossing) first = {i, j};
  };
  CGAL::box_self_intersection_d(boxes.begin(), boxes.end(), report);
  return first;
}

}  // namespace runband
