// The detail view of a patch: what a drawing calls a detail, a circle with a letter and a scale, on any canvas.
#pragma once

#include <optional>
#include <string>

#include "core/solve/solution.h"
#include "viewer/desk/view.h"
#include "viewer/plot/plot.h"
#include "viewer/scene/fields.h"

namespace runband {

struct DetailSubject {
  const Contact* contact = nullptr;
  std::string field = "pressure";
  plot::ColourMap map = plot::ColourMap::ember;
  int steps = 0;
  plot::Range range{0, 1};
  bool states = true, arrows = true, pure_rolling = true, scale_disc = true;
};

/// Where the detail was put: canvas to contact frame and back. x runs to the right, s upward.
struct DetailPlace {
  plot::Point centre;
  double radius = 0;
  double scale = 1;  ///< canvas units per mm
  plot::Point at(double x_mm, double s_mm) const { return {centre.x + x_mm * scale, centre.y - s_mm * scale}; }
  plot::Point value(plot::Point p) const { return {(p.x - centre.x) / scale, (centre.y - p.y) / scale}; }
  bool contains(plot::Point p) const;
};

/// The field as a heat map of its inks.
plot::HeatMap field_map(const Contact&, const Field&, const DetailSubject&);

/// Draws the detail's content inside the ring, the ring, and its letter. @param scale canvas units per mm, a drawing
/// scale chosen by the caller.
DetailPlace draw_detail_view(const DetailSubject&, plot::Point centre, double radius, double scale, plot::Canvas&,
                             const plot::Theme&, const plot::Style&);
/// Pressure as relief, turned in three dimensions: one piece of surface for each cell, far ones first.
void draw_relief(const DetailSubject&, plot::Point centre, double radius, double turn_deg, double tilt_deg,
                 plot::Canvas&, const plot::Theme&, const plot::Style&);

}  // namespace runband
