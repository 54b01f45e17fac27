#include "viewer/scene/live_scene.h"

#include <vtkActor.h>
#include <vtkCamera.h>
#include <vtkCellPicker.h>
#include <vtkGenericOpenGLRenderWindow.h>
#include <vtkMapper.h>
#include <vtkMatrix4x4.h>
#include <vtkNew.h>
#include <vtkOpenGLFramebufferObject.h>
#include <vtkOpenGLState.h>
#include <vtkPlane.h>
#include <vtkPolyData.h>
#include <vtkProperty.h>
#include <vtkRenderer.h>
#include <vtkTextureObject.h>
#include <vtkUnsignedCharArray.h>

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <utility>

#include "viewer/scene/bodies.h"
#include "viewer/scene/fields.h"
#include "viewer/scene/scene_meshes.h"

namespace runband {

namespace {

constexpr double kViewAngle_deg = 24;
constexpr int kSettledSamples = 4;
constexpr double kOrbit_rad_per_px = 0.006;
constexpr double kSteepest = 0.9995;  // sine of the largest elevation

void place(vtkActor* actor, const Eigen::Affine3d& at) {
  vtkNew<vtkMatrix4x4> matrix;
  for (int i = 0; i < 4; ++i)
    for (int j = 0; j < 4; ++j) matrix->SetElement(i, j, at.matrix()(i, j));
  actor->SetUserMatrix(matrix);
}

}  // namespace

struct LiveScene::Parts {
  vtkNew<vtkGenericOpenGLRenderWindow> window;
  vtkNew<vtkRenderer> bodies, over;  // the looked-at patch is drawn over the glass
  std::array<Body, 2> wheel, rail;
  Body axle;
  std::array<vtkSmartPointer<vtkActor>, 2> cut;
  std::vector<vtkSmartPointer<vtkActor>> patches;
  std::shared_ptr<const Solution> solution;
  std::shared_ptr<const Locator> meshed;
  SceneLook look;
  bool made = false, dirty = true, settled = false, looked = false;
  int width = 0, height = 0;
  CameraPlace home;

  vtkCamera* camera() { return bodies->GetActiveCamera(); }

  void drop_bodies() {
    bodies->RemoveAllViewProps();
    over->RemoveAllViewProps();
    patches.clear();
    made = false;
  }

  void make_bodies() {
    drop_bodies();
    const plot::Theme& theme = plot::theme(look.theme);
    const MeshOptions fine{.chord_error_mm = 0.05, .max_edge_mm = 80}, round{.chord_error_mm = 0.10};
    vtkNew<vtkPlane> ahead;
    ahead->SetOrigin(0, 0, 0);
    ahead->SetNormal(-1, 0, 0);
    for (const Side side : {Side::left, Side::right}) {
      const auto k = static_cast<std::size_t>(side == Side::left ? 0 : 1);
      rail[k] = make_body(placed_rail(*solution, side, fine, look.section_cut ? 0.0 : kSceneRailTo_mm),
                          rail_colour(theme), theme.ink, 1, look.line_px);
      wheel[k] = make_body(own_wheel(*solution, side, round), wheel_colour(theme), theme.ink, 1, look.line_px);
      bodies->AddActor(rail[k].surface);
      bodies->AddActor(rail[k].edges);
      bodies->AddActor(wheel[k].surface);
      bodies->AddActor(wheel[k].edges);
      cut[k] = nullptr;
      if (look.section_cut) {
        wheel[k].surface->GetMapper()->AddClippingPlane(ahead);
        wheel[k].edges->GetMapper()->AddClippingPlane(ahead);
        cut[k] = make_flat(wheel_cut(*solution, side, 0.1), nullptr, plot::mix(wheel_colour(theme), theme.steel, 0.30));
        bodies->AddActor(cut[k]);
      }
    }
    axle = make_body(own_axle(*solution, round), wheel_colour(theme), theme.ink, 1, look.line_px);
    if (look.section_cut) {
      axle.surface->GetMapper()->AddClippingPlane(ahead);
      axle.edges->GetMapper()->AddClippingPlane(ahead);
    }
    bodies->AddActor(axle.surface);
    bodies->AddActor(axle.edges);
    meshed = solution->locator;
    made = true;
  }

  void place_bodies() {
    for (const Side side : {Side::left, Side::right}) {
      const auto k = static_cast<std::size_t>(side == Side::left ? 0 : 1);
      const Eigen::Affine3d at = wheel_place(*solution, side);
      place(wheel[k].surface, at);
      place(wheel[k].edges, at);
      if (cut[k]) place(cut[k], at);
      const bool over_it =
          look.contact < solution->contacts.size() && solution->contacts[look.contact].zone.side == side;
      wheel[k].set_opacity(over_it ? std::clamp(look.wheel_opacity, 0.05, 1.0) : 1.0);
    }
    const Eigen::Affine3d at = axle_place(*solution);
    place(axle.surface, at);
    place(axle.edges, at);
  }

  void make_patches() {
    for (const auto& patch : patches) {
      bodies->RemoveActor(patch);
      over->RemoveActor(patch);
    }
    patches.clear();
    for (std::size_t k = 0; k < solution->contacts.size(); ++k) {
      const Contact& contact = solution->contacts[k];
      if (!contact.patch) continue;
      PatchInks inks{look.map, look.range, look.steps, {}};
      const Field* field = field_named(contact, look.field);
      std::vector<double> values;
      if (field != nullptr) values = scalars_of(*field);
      if (field != nullptr) inks.inks = label_inks(*field);
      auto actor = make_flat(patch_sheet(contact, 0.4, field != nullptr ? &values : nullptr), &inks, {});
      actor->PickableOff();
      (k == look.contact ? over : bodies)->AddActor(actor);
      patches.push_back(actor);
    }
  }

  void aim_at(const Vec3& focus, const Vec3& eye, const Vec3& up) {
    camera()->SetFocalPoint(focus.x(), focus.y(), focus.z());
    camera()->SetPosition(eye.x(), eye.y(), eye.z());
    camera()->SetViewUp(up.x(), up.y(), up.z());
    camera()->SetViewAngle(kViewAngle_deg);
    dirty = true;
  }

  const Contact* contact_on(std::optional<Side> side) const {
    const Contact* best = nullptr;
    if (!side && look.contact < solution->contacts.size()) return &solution->contacts[look.contact];
    for (const Contact& contact : solution->contacts)
      if (contact.patch && (!side || contact.zone.side == *side) &&
          (best == nullptr || contact.patch->peak_pressure_MPa > best->patch->peak_pressure_MPa))
        best = &contact;
    return best;
  }

  /// A ray through a pixel: from the eye, in the direction.
  std::pair<Vec3, Vec3> ray(double x_px, double y_px) const {
    auto* self = const_cast<Parts*>(this);
    double near_point[4], far_point[4];
    const double y = height - y_px;
    self->bodies->SetDisplayPoint(x_px, y, 0);
    self->bodies->DisplayToWorld();
    self->bodies->GetWorldPoint(near_point);
    self->bodies->SetDisplayPoint(x_px, y, 1);
    self->bodies->DisplayToWorld();
    self->bodies->GetWorldPoint(far_point);
    const Vec3 a = Vec3(near_point[0], near_point[1], near_point[2]) / near_point[3];
    const Vec3 b = Vec3(far_point[0], far_point[1], far_point[2]) / far_point[3];
    const Vec3 eye(self->camera()->GetPosition());
    return {eye, (b - a).normalized()};
  }
};

LiveScene::LiveScene() : parts_(std::make_unique<Parts>()) {
  vtkGenericOpenGLRenderWindow* window = parts_->window;
  window->SetOwnContext(0);
  window->SetReadyForRendering(true);
  window->SetSupportsOpenGL(1);
  window->SetIsCurrent(true);
  window->SetMapped(1);
  window->SetMultiSamples(0);
  window->SetFrameBlitModeToNoBlit();
  window->SetSize(64, 64);
  window->InitializeFromCurrentContext();
  window->SetNumberOfLayers(2);
  parts_->bodies->SetGradientBackground(false);
  parts_->bodies->SetBackgroundAlpha(1);
  parts_->over->SetLayer(1);
  parts_->over->InteractiveOff();
  parts_->over->SetActiveCamera(parts_->camera());
  window->AddRenderer(parts_->bodies);
  window->AddRenderer(parts_->over);
  add_lights(parts_->bodies);
}

LiveScene::~LiveScene() {
  parts_->drop_bodies();
  parts_->window->Finalize();
}

void LiveScene::show(std::shared_ptr<const Solution> solution, const SceneLook& look) {
  Parts& p = *parts_;
  const bool same_solution = solution == p.solution, same_look = look == p.look;
  if (same_solution && same_look) return;
  const SceneLook before = std::exchange(p.look, look);
  const plot::Colour ground = plot::theme(look.theme).scene;
  p.bodies->SetBackground(ground.r, ground.g, ground.b);
  p.solution = std::move(solution);
  p.dirty = true;
  p.settled = false;
  if (!p.solution || p.solution->locator == nullptr) {
    p.drop_bodies();
    p.meshed.reset();
    return;
  }
  if (!p.made || p.meshed != p.solution->locator || before.theme != look.theme ||
      before.section_cut != look.section_cut || before.line_px != look.line_px)
    p.make_bodies();
  p.place_bodies();
  p.make_patches();
  if (!p.looked) {
    look_from(NamedView::home);
    p.looked = true;
  }
}

void LiveScene::look_from(NamedView view) {
  Parts& p = *parts_;
  if (!p.solution || p.solution->locator == nullptr) return;
  std::optional<Side> side;
  if (view == NamedView::left_contact) side = Side::left;
  if (view == NamedView::right_contact) side = Side::right;
  const Contact* contact = p.contact_on(side);
  if (contact == nullptr) return;
  const Vec3 at = contact->zone.track_mm;
  const double sign = side_sign(contact->zone.side);
  const Vec3 up = Vec3::UnitZ();
  switch (view) {
    case NamedView::home: {
      // From ahead, above, and a little from the middle of the track; the contact a little right of the middle, so that
      // there is room for the detail view.
      const Vec3 focus = at + Vec3(48, sign * 52, 34);
      p.aim_at(focus, focus + Vec3(410, -sign * 235, 235), up);
      break;
    }
    case NamedView::front:
      p.aim_at({0, 0, 380}, {4700, 0, 420}, up);
      break;
    case NamedView::side:
      p.aim_at({0, at.y(), 300}, {0, sign * 4000, 330}, up);
      break;
    case NamedView::top:
      p.aim_at({-120, 0, 0}, {-120, 0, 5200}, Vec3::UnitX());
      break;
    case NamedView::along_rail:
      p.aim_at(at + Vec3(0, 0, 6), at + Vec3(620, 0, 26), up);
      break;
    case NamedView::left_contact:
    case NamedView::right_contact:
      p.aim_at(at, at + Vec3(150, -sign * 70, 95), up);
      break;
  }
}

CameraPlace LiveScene::camera() const {
  vtkCamera* c = parts_->camera();
  return {Vec3(c->GetPosition()), Vec3(c->GetFocalPoint()), Vec3(c->GetViewUp())};
}

void LiveScene::set_camera(const CameraPlace& place) {
  if (place == camera()) return;
  parts_->aim_at(place.focus_mm, place.eye_mm, place.up);
  parts_->looked = true;
}

void LiveScene::orbit(double dx_px, double dy_px) {
  const CameraPlace now = camera();
  const Vec3 arm = now.eye_mm - now.focus_mm;
  const double length = arm.norm();
  if (!(length > 0)) return;
  double azimuth = std::atan2(arm.y(), arm.x());
  // Straight above, the azimuth is that of the picture's upper edge.
  if (std::hypot(arm.x(), arm.y()) < 1e-6 * length) azimuth = std::atan2(-now.up.y(), -now.up.x());
  double elevation = std::asin(std::clamp(arm.z() / length, -1.0, 1.0));
  azimuth -= dx_px * kOrbit_rad_per_px;
  const double most = std::asin(kSteepest);
  elevation = std::clamp(elevation + dy_px * kOrbit_rad_per_px, -most, most);
  const Vec3 eye = now.focus_mm + length * Vec3(std::cos(elevation) * std::cos(azimuth),
                                                std::cos(elevation) * std::sin(azimuth), std::sin(elevation));
  parts_->aim_at(now.focus_mm, eye, Vec3::UnitZ());
}

void LiveScene::pan(double dx_px, double dy_px) {
  const CameraPlace now = camera();
  const Vec3 sight = (now.focus_mm - now.eye_mm).normalized();
  const Vec3 right = sight.cross(now.up).normalized(), up = right.cross(sight);
  const double mm = 1 / std::max(1e-9, px_per_mm(now.focus_mm));
  const Vec3 move = (-dx_px * right + dy_px * up) * mm;
  parts_->aim_at(now.focus_mm + move, now.eye_mm + move, now.up);
}

void LiveScene::zoom_to(double x_px, double y_px, double factor) {
  if (!(factor > 0) || !std::isfinite(factor)) return;
  const CameraPlace now = camera();
  const double distance = (now.eye_mm - now.focus_mm).norm();
  const double wanted = std::clamp(distance / factor, 8.0, 40000.0);
  const double f = distance / wanted;
  Vec3 about = now.focus_mm;
  if (parts_->height > 0) {
    const auto [eye, direction] = parts_->ray(x_px, y_px);
    const Vec3 sight = (now.focus_mm - now.eye_mm).normalized();
    const double along = direction.dot(sight);
    if (along > 1e-3) about = eye + direction * (distance / along);
  }
  parts_->aim_at(about + (now.focus_mm - about) / f, about + (now.eye_mm - about) / f, now.up);
}

bool LiveScene::dirty() const { return parts_->dirty; }

unsigned int LiveScene::draw(int width_px, int height_px, bool settled) {
  Parts& p = *parts_;
  if (width_px <= 0 || height_px <= 0) return 0;
  const bool resized = width_px != p.width || height_px != p.height;
  if (resized) {
    p.width = width_px;
    p.height = height_px;
    p.window->SetSize(width_px, height_px);
  }
  const bool finer = settled && !p.settled;
  if (p.dirty || resized || finer) {
    p.window->SetMultiSamples(settled ? kSettledSamples : 0);
    p.bodies->ResetCameraClippingRange();
    p.window->GetState()->Reset();
    p.window->Render();
    p.dirty = false;
    p.settled = settled;
  }
  vtkOpenGLFramebufferObject* drawn = p.window->GetDisplayFramebuffer();
  if (drawn == nullptr || drawn->GetNumberOfColorAttachments() == 0) return 0;
  return drawn->GetColorAttachmentAsTextureObject(0)->GetHandle();
}

std::optional<plot::Point> LiveScene::project(const Vec3& track_mm) const {
  Parts& p = *parts_;
  if (p.height == 0) return std::nullopt;
  const CameraPlace c = camera();
  if ((track_mm - c.eye_mm).dot(c.focus_mm - c.eye_mm) <= 0) return std::nullopt;
  p.bodies->SetWorldPoint(track_mm.x(), track_mm.y(), track_mm.z(), 1);
  p.bodies->WorldToDisplay();
  const double* display = p.bodies->GetDisplayPoint();
  return plot::Point{display[0], p.height - display[1]};
}

double LiveScene::px_per_mm(const Vec3& track_mm) const {
  const CameraPlace c = camera();
  const double distance = (track_mm - c.eye_mm).dot((c.focus_mm - c.eye_mm).normalized());
  return std::max(1, parts_->height) /
         (2 * std::max(1e-6, distance) * std::tan(kViewAngle_deg * std::numbers::pi / 360));
}

Picked LiveScene::pick_patch(double x_px, double y_px) const {
  Parts& p = *parts_;
  Picked picked;
  if (!p.solution || p.solution->locator == nullptr || p.height == 0) return picked;
  const auto [eye, direction] = p.ray(x_px, y_px);
  double nearest = 1e300;
  for (std::size_t k = 0; k < p.solution->contacts.size(); ++k) {
    const Contact& contact = p.solution->contacts[k];
    if (!contact.patch) continue;
    // The patch is flat enough to be met by the plane it lies in.
    const Vec3 normal = contact.zone.frame.col(2);
    const double along = direction.dot(normal);
    if (std::abs(along) < 1e-6) continue;
    const double t = (contact.zone.track_mm - eye).dot(normal) / along;
    if (t <= 0 || t >= nearest) continue;
    const Vec3 local = contact.zone.frame.transpose() * (eye + t * direction - contact.zone.track_mm);
    const Grid& g = contact.patch->grid;
    const int i = static_cast<int>(std::lround((local.x() - g.x0_mm) / g.dx_mm));
    const int j = static_cast<int>(std::lround((local.y() - g.s0_mm) / g.ds_mm));
    if (i < 0 || j < 0 || i >= g.nx || j >= g.ns) continue;
    if (contact.patch->pressure.values[static_cast<std::size_t>(j * g.nx + i)] <= 0) continue;
    nearest = t;
    picked = {Picked::What::patch, contact.zone.side, k, eye + t * direction, local.x(), local.y()};
  }
  return picked;
}

Picked LiveScene::pick(double x_px, double y_px) const {
  Parts& p = *parts_;
  Picked picked = pick_patch(x_px, y_px);
  if (picked.what == Picked::What::patch || !p.solution || p.solution->locator == nullptr || p.height == 0)
    return picked;
  vtkNew<vtkCellPicker> picker;
  picker->SetTolerance(0);
  if (picker->Pick(x_px, p.height - y_px, 0, p.bodies) == 0) return picked;
  picked.track_mm = Vec3(picker->GetPickPosition());
  picked.side = picked.track_mm.y() >= 0 ? Side::left : Side::right;
  for (std::size_t k = 0; k < 2; ++k) {
    if (picker->GetActor() == p.wheel[k].surface) picked.what = Picked::What::wheel;
    if (picker->GetActor() == p.rail[k].surface) picked.what = Picked::What::rail;
  }
  if (picker->GetActor() == p.axle.surface) picked.what = Picked::What::axle;
  return picked;
}

plot::Image LiveScene::image() const {
  Parts& p = *parts_;
  plot::Image image{p.width, p.height, {}};
  if (p.width == 0 || p.height == 0) return image;
  vtkNew<vtkUnsignedCharArray> pixels;
  p.window->GetRGBACharPixelData(0, 0, p.width - 1, p.height - 1, 0, pixels);
  const auto row = static_cast<std::size_t>(p.width) * 4;
  image.rgba.resize(row * static_cast<std::size_t>(p.height));
  for (int y = 0; y < p.height; ++y)
    std::copy_n(pixels->GetPointer(0) + static_cast<std::size_t>(p.height - 1 - y) * row, row,
                image.rgba.begin() + static_cast<std::ptrdiff_t>(static_cast<std::size_t>(y) * row));
  for (std::size_t k = 3; k < image.rgba.size(); k += 4) image.rgba[k] = 255;
  return image;
}

std::size_t LiveScene::triangles() const {
  const Parts& p = *parts_;
  if (!p.made) return 0;
  std::size_t count = 0;
  const auto add = [&](vtkActor* actor) {
    if (auto* data = vtkPolyData::SafeDownCast(actor->GetMapper()->GetInput()))
      count += static_cast<std::size_t>(data->GetNumberOfPolys());
  };
  for (std::size_t k = 0; k < 2; ++k) {
    add(p.wheel[k].surface);
    add(p.rail[k].surface);
  }
  add(p.axle.surface);
  return count;
}

}  // namespace runband
