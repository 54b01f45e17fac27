#include "viewer/scene/scene_picture.h"

#include <vtkActor.h>
#include <vtkCamera.h>
#include <vtkGenericOpenGLRenderWindow.h>
#include <vtkNew.h>
#include <vtkRenderer.h>
#include <vtkUnsignedCharArray.h>

#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "viewer/plot/colour_map.h"
#include "viewer/scene/bodies.h"
#include "viewer/scene/headless_gl.h"
#include "viewer/scene/scene_meshes.h"

namespace runband {

namespace {

constexpr int kFiner = 2;  // drawn at twice the size and averaged down: smooth edges, same bits every time

void add_body(vtkRenderer* renderer, const Body& body) {
  renderer->AddActor(body.surface);
  renderer->AddActor(body.edges);
}

void add_patch(vtkRenderer* renderer, const Contact& contact, double highest) {
  const PatchInks inks{plot::ColourMap::ember, {0, highest}, 0, {}};
  renderer->AddActor(make_flat(patch_sheet(contact, 0.4), &inks, {}));
}

void aim(vtkRenderer* renderer, const Contact& contact) {
  const Vec3 target = contact.zone.track_mm;
  const double sign = side_sign(contact.zone.side);
  // From ahead, above, and a little from the middle of the track: rail head, tread and end section are all seen.
  const Vec3 centre = target + Vec3(60.0, sign * 5.0, 8.0);
  const Vec3 eye = centre + Vec3(690.0, -sign * 400.0, 420.0);
  vtkCamera* camera = renderer->GetActiveCamera();
  camera->SetFocalPoint(centre.x(), centre.y(), centre.z());
  camera->SetPosition(eye.x(), eye.y(), eye.z());
  camera->SetViewUp(0, 0, 1);
  camera->SetWindowCenter(-0.3, -0.08);  // room at the left for the detail view, below for the title block
  camera->SetViewAngle(24);
}

plot::Image averaged(const unsigned char* rgba, int width, int height) {
  plot::Image image{width, height, std::vector<std::uint8_t>(static_cast<std::size_t>(width * height) * 4)};
  const int wide = width * kFiner;
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      for (int c = 0; c < 4; ++c) {
        int sum = 0;
        for (int k = 0; k < kFiner * kFiner; ++k) {
          const int from_x = x * kFiner + k % kFiner, from_y = (height - 1 - y) * kFiner + k / kFiner;
          sum += rgba[(static_cast<std::size_t>(from_y) * static_cast<std::size_t>(wide) +
                       static_cast<std::size_t>(from_x)) *
                          4 +
                      static_cast<std::size_t>(c)];
        }
        image.rgba[(static_cast<std::size_t>(y) * static_cast<std::size_t>(width) + static_cast<std::size_t>(x)) * 4 +
                   static_cast<std::size_t>(c)] =
            static_cast<std::uint8_t>((sum + kFiner * kFiner / 2) / (kFiner * kFiner));
      }
    }
  }
  return image;
}

plot::Image rendered(vtkGenericOpenGLRenderWindow* window, vtkRenderer* renderer, const plot::Colour& ground, int width,
                     int height) {
  renderer->SetBackground(ground.r, ground.g, ground.b);
  window->Render();
  vtkNew<vtkUnsignedCharArray> pixels;
  window->GetRGBACharPixelData(0, 0, width * kFiner - 1, height * kFiner - 1, 0, pixels);
  plot::Image image = averaged(pixels->GetPointer(0), width, height);
  for (std::size_t k = 3; k < image.rgba.size(); k += 4) image.rgba[k] = 255;
  return image;
}

/// The alpha and colour that give both pictures on black and on white.
plot::Image solved_alpha(const plot::Image& black, const plot::Image& white) {
  plot::Image image = black;
  for (std::size_t k = 0; k < image.rgba.size(); k += 4) {
    int alpha = 0;
    for (std::size_t c = 0; c < 3; ++c) alpha = std::max(alpha, 255 - (white.rgba[k + c] - black.rgba[k + c]));
    alpha = std::clamp(alpha, 0, 255);
    for (std::size_t c = 0; c < 3; ++c)
      image.rgba[k + c] = alpha == 0 ? 0 : static_cast<std::uint8_t>(std::min(255, black.rgba[k + c] * 255 / alpha));
    image.rgba[k + 3] = static_cast<std::uint8_t>(alpha);
  }
  return image;
}

void require_wheelset(const Solution& solution) {
  if (solution.locator == nullptr)
    throw InputError(ErrorCode::conflicting_keys, "draw: a bench case has no wheelset to show.", "use --plate patch.");
}

}  // namespace

ScenePicture draw_scene(const Solution& solution, const SceneOptions& options) {
  require_wheelset(solution);
  const plot::Theme& theme = plot::theme(options.theme);
  const Contact& looked_at = solution.contacts.at(options.contact);
  double highest = 0;
  for (const Contact& c : solution.contacts)
    if (c.patch) highest = std::max(highest, c.patch->peak_pressure_MPa);

  // Mesa's software drawing ends at 16384 dots a side (memory), and the scene is drawn at twice its size.
  constexpr int kMost = 8192;
  if (options.width_px > kMost || options.height_px > kMost) {
    throw InputError(ErrorCode::out_of_range,
                     "draw: a scene of " + std::to_string(options.width_px) + " by " +
                         std::to_string(options.height_px) + " dots is too large; at most " + std::to_string(kMost) +
                         " a side.",
                     "choose a smaller --dpi or --size.");
  }

  const HeadlessGl gl;
  vtkNew<vtkGenericOpenGLRenderWindow> window;
  window->SetOwnContext(0);
  window->SetReadyForRendering(true);
  window->SetSupportsOpenGL(1);
  window->SetIsCurrent(true);
  window->SetMapped(1);
  window->SetMultiSamples(0);
  window->SetFrameBlitModeToNoBlit();
  window->SetSize(options.width_px * kFiner, options.height_px * kFiner);
  window->InitializeFromCurrentContext();
  vtkNew<vtkRenderer> renderer;
  renderer->SetGradientBackground(false);
  window->AddRenderer(renderer);

  const plot::Colour wheel_fill = wheel_colour(theme), rail_fill = rail_colour(theme);
  const double line_px = std::max(1.0, 0.25 * options.pixels_per_mm * kFiner);
  const MeshOptions fine{.chord_error_mm = 0.03, .max_edge_mm = 60};
  const MeshOptions round{.chord_error_mm = 0.06};
  for (const Side side : {Side::left, Side::right}) {
    add_body(renderer, make_body(placed_rail(solution, side, fine), rail_fill, theme.ink, 1.0, line_px));
    // The wheel over the looked-at patch is glass, so that the patch is seen.
    const bool over = side == looked_at.zone.side;
    add_body(renderer,
             make_body(placed_wheel(solution, side, round), wheel_fill, theme.ink, over ? 0.34 : 1.0, line_px));
  }
  add_body(renderer, make_body(placed_axle(solution, round), wheel_fill, theme.ink, 1.0, line_px));
  for (std::size_t k = 0; k < solution.contacts.size(); ++k)
    if (solution.contacts[k].patch && k != options.contact) add_patch(renderer, solution.contacts[k], highest);
  // The looked-at patch is drawn over the glass of the wheel, so that its colours are those of the colour bar.
  vtkNew<vtkRenderer> over_glass;
  over_glass->SetLayer(1);
  over_glass->InteractiveOff();
  over_glass->SetActiveCamera(renderer->GetActiveCamera());
  window->SetNumberOfLayers(2);
  window->AddRenderer(over_glass);
  add_patch(over_glass, looked_at, highest);

  add_lights(renderer);
  aim(renderer, looked_at);
  renderer->ResetCameraClippingRange();

  ScenePicture picture;
  const plot::Colour black{0, 0, 0, 1}, white{1, 1, 1, 1};
  if (options.transparent) {
    const plot::Image on_black = rendered(window, renderer, black, options.width_px, options.height_px);
    picture.image = solved_alpha(on_black, rendered(window, renderer, white, options.width_px, options.height_px));
  } else {
    picture.image = rendered(window, renderer, theme.scene, options.width_px, options.height_px);
  }
  const auto project = [&](const Vec3& p) {
    renderer->SetWorldPoint(p.x(), p.y(), p.z(), 1);
    renderer->WorldToDisplay();
    const double* display = renderer->GetDisplayPoint();
    return plot::Point{display[0] / kFiner, options.height_px - display[1] / kFiner};
  };
  picture.contact_px = project(looked_at.zone.track_mm);
  // A millimetre across the line of sight.
  const vtkCamera* camera = renderer->GetActiveCamera();
  const double distance = (Vec3(const_cast<vtkCamera*>(camera)->GetPosition()) - looked_at.zone.track_mm).norm();
  picture.px_per_mm =
      options.height_px /
      (2 * distance * std::tan(const_cast<vtkCamera*>(camera)->GetViewAngle() * std::numbers::pi / 360));
  window->Finalize();
  return picture;
}

void write_scene_glb(const Solution& solution, const std::filesystem::path& path) {
  require_wheelset(solution);
  TriangleMesh all;
  all.scalar_name = "pressure";
  const auto add = [&](const TriangleMesh& mesh) {
    const int first = static_cast<int>(all.vertices.size());
    all.vertices.insert(all.vertices.end(), mesh.vertices.begin(), mesh.vertices.end());
    for (const auto& t : mesh.triangles) all.triangles.push_back({t[0] + first, t[1] + first, t[2] + first});
    if (mesh.scalar.empty())
      all.scalar.insert(all.scalar.end(), mesh.vertices.size(), 0.0);
    else
      all.scalar.insert(all.scalar.end(), mesh.scalar.begin(), mesh.scalar.end());
  };
  const MeshOptions options{.chord_error_mm = 0.05};
  for (const Side side : {Side::left, Side::right}) {
    add(placed_rail(solution, side, options));
    add(placed_wheel(solution, side, options));
  }
  add(placed_axle(solution, options));
  for (const Contact& contact : solution.contacts)
    if (contact.patch) add(patch_sheet(contact, 0.05));
  write_mesh(path, all);
}

}  // namespace runband
