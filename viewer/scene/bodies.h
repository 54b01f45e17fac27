// Meshes as VTK actors, in the colours and lines of a drawing: shared by the live scene and by pictures.
#pragma once

#include <vtkSmartPointer.h>

#include <vector>

#include "core/surface/mesh.h"
#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"
#include "viewer/plot/theme.h"

class vtkActor;
class vtkPolyData;
class vtkRenderer;

namespace runband {

/// Colour of a triangle from the scalar of its first corner.
struct PatchInks {
  plot::ColourMap map = plot::ColourMap::ember;
  plot::Range range{0, 1};
  int steps = 0;                   ///< 0: flowing
  std::vector<plot::Colour> inks;  ///< for labels: value k has inks[k]
};

vtkSmartPointer<vtkPolyData> poly_data(const TriangleMesh& mesh, const PatchInks* inks = nullptr);

/// A shaded surface and its sharp edges as ink lines.
struct Body {
  vtkSmartPointer<vtkActor> surface, edges;
  void show(bool on);
  void set_opacity(double opacity);
};
Body make_body(const TriangleMesh& mesh, const plot::Colour& fill, const plot::Colour& ink, double opacity,
               double line_px);
/// The same with colours of its own, unlit: a patch, a cut face.
vtkSmartPointer<vtkActor> make_flat(const TriangleMesh& mesh, const PatchInks* inks, const plot::Colour& fill);

plot::Colour wheel_colour(const plot::Theme& theme);
plot::Colour rail_colour(const plot::Theme& theme);
/// Two lights that move with the camera.
void add_lights(vtkRenderer* renderer);

}  // namespace runband
