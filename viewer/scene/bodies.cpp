#include "viewer/scene/bodies.h"

#include <vtkActor.h>
#include <vtkCellArray.h>
#include <vtkCellData.h>
#include <vtkFeatureEdges.h>
#include <vtkFloatArray.h>
#include <vtkLight.h>
#include <vtkNew.h>
#include <vtkPoints.h>
#include <vtkPolyData.h>
#include <vtkPolyDataMapper.h>
#include <vtkPolyDataNormals.h>
#include <vtkProperty.h>
#include <vtkRenderer.h>
#include <vtkUnsignedCharArray.h>

#include <algorithm>
#include <cmath>

namespace runband {

namespace {

plot::Colour ink_of(const PatchInks& inks, double value) {
  if (!inks.inks.empty()) return inks.inks[static_cast<std::size_t>(std::max(0.0, value)) % inks.inks.size()];
  double t = inks.range.span() > 0 ? std::clamp((value - inks.range.low) / inks.range.span(), 0.0, 1.0) : 0.0;
  if (inks.steps > 1) t = (std::min(inks.steps - 1.0, std::floor(t * inks.steps)) + 0.5) / inks.steps;
  return plot::colour_at(inks.map, t);
}

}  // namespace

vtkSmartPointer<vtkPolyData> poly_data(const TriangleMesh& mesh, const PatchInks* inks) {
  auto data = vtkSmartPointer<vtkPolyData>::New();
  vtkNew<vtkPoints> points;
  points->SetDataTypeToDouble();
  points->SetNumberOfPoints(static_cast<vtkIdType>(mesh.vertices.size()));
  for (std::size_t k = 0; k < mesh.vertices.size(); ++k)
    points->SetPoint(static_cast<vtkIdType>(k), mesh.vertices[k].x(), mesh.vertices[k].y(), mesh.vertices[k].z());
  vtkNew<vtkCellArray> triangles;
  triangles->AllocateEstimate(static_cast<vtkIdType>(mesh.triangles.size()), 3);
  for (const auto& t : mesh.triangles) {
    const vtkIdType ids[3] = {t[0], t[1], t[2]};
    triangles->InsertNextCell(3, ids);
  }
  data->SetPoints(points);
  data->SetPolys(triangles);
  if (inks != nullptr && !mesh.scalar.empty()) {
    vtkNew<vtkUnsignedCharArray> colours;
    colours->SetNumberOfComponents(3);
    colours->SetName("colour");
    for (const auto& t : mesh.triangles) {
      const plot::Colour c = ink_of(*inks, mesh.scalar[static_cast<std::size_t>(t[0])]);
      colours->InsertNextTuple3(plot::byte_of(c.r), plot::byte_of(c.g), plot::byte_of(c.b));
    }
    data->GetCellData()->SetScalars(colours);
  }
  return data;
}

void Body::show(bool on) {
  surface->SetVisibility(on ? 1 : 0);
  edges->SetVisibility(on ? 1 : 0);
}

void Body::set_opacity(double opacity) {
  surface->GetProperty()->SetOpacity(opacity);
  surface->GetProperty()->SetBackfaceCulling(opacity < 1 ? 1 : 0);
  edges->GetProperty()->SetOpacity(opacity < 1 ? 0.45 : 1.0);
}

Body make_body(const TriangleMesh& mesh, const plot::Colour& fill, const plot::Colour& ink, double opacity,
               double line_px) {
  const auto data = poly_data(mesh);
  vtkNew<vtkPolyDataNormals> normals;
  normals->SetInputData(data);
  normals->SetFeatureAngle(30);
  normals->SplittingOn();
  normals->ConsistencyOff();
  normals->Update();
  vtkNew<vtkPolyDataMapper> mapper;
  mapper->SetInputData(normals->GetOutput());
  mapper->ScalarVisibilityOff();
  Body body;
  body.surface = vtkSmartPointer<vtkActor>::New();
  body.surface->SetMapper(mapper);
  vtkProperty* look = body.surface->GetProperty();
  look->SetColor(fill.r, fill.g, fill.b);
  look->SetAmbient(0.50);
  look->SetDiffuse(0.50);
  look->SetSpecular(0.0);

  vtkNew<vtkFeatureEdges> edges;
  edges->SetInputData(data);
  edges->BoundaryEdgesOff();
  edges->NonManifoldEdgesOff();
  edges->ManifoldEdgesOff();
  edges->FeatureEdgesOn();
  edges->SetFeatureAngle(35);
  edges->ColoringOff();
  edges->Update();
  vtkNew<vtkPolyDataMapper> edge_mapper;
  edge_mapper->SetInputData(edges->GetOutput());
  edge_mapper->ScalarVisibilityOff();
  body.edges = vtkSmartPointer<vtkActor>::New();
  body.edges->SetMapper(edge_mapper);
  body.edges->GetProperty()->SetColor(ink.r, ink.g, ink.b);
  body.edges->GetProperty()->LightingOff();
  body.edges->GetProperty()->SetLineWidth(static_cast<float>(line_px));
  body.edges->PickableOff();
  body.set_opacity(opacity);
  return body;
}

vtkSmartPointer<vtkActor> make_flat(const TriangleMesh& mesh, const PatchInks* inks, const plot::Colour& fill) {
  vtkNew<vtkPolyDataMapper> mapper;
  mapper->SetInputData(poly_data(mesh, inks));
  mapper->SetScalarVisibility(inks != nullptr ? 1 : 0);
  auto actor = vtkSmartPointer<vtkActor>::New();
  actor->SetMapper(mapper);
  actor->GetProperty()->SetColor(fill.r, fill.g, fill.b);
  actor->GetProperty()->LightingOff();
  return actor;
}

// On a dark ground the bodies need more light than their drawn fills have.
plot::Colour wheel_colour(const plot::Theme& theme) {
  return theme.name == plot::ThemeName::dark ? plot::mix(theme.wheel_fill, theme.steel, 0.55) : theme.wheel_fill;
}
plot::Colour rail_colour(const plot::Theme& theme) {
  return theme.name == plot::ThemeName::dark ? plot::mix(theme.rail_fill, theme.steel, 0.55) : theme.rail_fill;
}

void add_lights(vtkRenderer* renderer) {
  renderer->AutomaticLightCreationOff();
  vtkNew<vtkLight> light;
  light->SetLightTypeToCameraLight();
  light->SetPosition(-0.5, 0.9, 1.0);
  renderer->AddLight(light);
  vtkNew<vtkLight> fill;
  fill->SetLightTypeToCameraLight();
  fill->SetPosition(1.0, 0.1, 0.6);
  fill->SetIntensity(0.4);
  renderer->AddLight(fill);
}

}  // namespace runband
