// The canvas on paper: PNG and PDF through cairo.
#pragma once

#include <memory>

#include "viewer/plot/canvas.h"

typedef struct _cairo cairo_t;

namespace runband::plot {

/// Draws on a cairo context that someone else owns. Canvas units are millimetres; `units_per_mm` is what one of them
/// is on the surface (dpi / 25.4 for an image, 72 / 25.4 for PDF).
/// @param text_as_outlines  true for images: letters then sit where they belong to a fraction of a pixel; false keeps
///   them as text, embedded and searchable.
std::unique_ptr<Canvas> make_cairo_canvas(cairo_t* cairo, double width_mm, double height_mm, double units_per_mm,
                                          bool text_as_outlines);

}  // namespace runband::plot
