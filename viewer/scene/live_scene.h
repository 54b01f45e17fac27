// The wheelset on its track, kept up to date and drawn on the OpenGL context that is current.
#pragma once

#include <memory>
#include <optional>
#include <string>

#include "core/solve/solution.h"
#include "viewer/plot/canvas.h"
#include "viewer/plot/colour_map.h"
#include "viewer/plot/numbers.h"
#include "viewer/plot/theme.h"
#include "viewer/scene/named_view.h"

namespace runband {

struct CameraPlace {
  Vec3 eye_mm = Vec3::Zero(), focus_mm = Vec3::Zero(), up = Vec3::UnitZ();
  bool operator==(const CameraPlace& other) const {
    return eye_mm == other.eye_mm && focus_mm == other.focus_mm && up == other.up;
  }
};

struct SceneLook {
  plot::ThemeName theme = plot::ThemeName::light;
  double wheel_opacity = 0.34;     ///< of the wheel over the looked-at contact, 0.05 ... 1
  bool section_cut = false;        ///< what lies ahead of the axle's plane is cut away
  std::string field = "pressure";  ///< or "analysis.field": which Field colours the patches
  plot::ColourMap map = plot::ColourMap::ember;
  int steps = 0;
  plot::Range range{0, 1};
  std::size_t contact = 0;  ///< looked-at contact
  double line_px = 1;
  bool operator==(const SceneLook&) const = default;
};

/// What lies under a place of the picture.
struct Picked {
  enum class What { nothing, patch, rail, wheel, axle } what = What::nothing;
  Side side = Side::left;
  std::size_t contact = 0;  ///< of a patch
  Vec3 track_mm = Vec3::Zero();
  double x_mm = 0, s_mm = 0;  ///< contact frame, of a patch
};

/// One thread. The context that is current when it is made must be current at every call and outlive it.
class LiveScene {
 public:
  LiveScene();
  ~LiveScene();
  LiveScene(const LiveScene&) = delete;
  LiveScene& operator=(const LiveScene&) = delete;

  /// Cheap while only the pose moves: bodies are meshed once for each pairing, patches anew for each solution. Null, or
  /// a bench case, shows the ground alone.
  void show(std::shared_ptr<const Solution> solution, const SceneLook& look);

  void look_from(NamedView view);
  CameraPlace camera() const;
  void set_camera(const CameraPlace& place);
  /// Pixels of the picture, y down. The upright stays upright.
  void orbit(double dx_px, double dy_px);
  void pan(double dx_px, double dy_px);
  /// Nearer by `factor`; what is under (x, y) stays there.
  void zoom_to(double x_px, double y_px, double factor);

  bool dirty() const;
  /// Draws if something changed, or finer if `settled` asks for it and it is not yet. @return the OpenGL texture, its
  /// first row lowest; 0 if there is nothing to draw on
  unsigned int draw(int width_px, int height_px, bool settled);

  /// Place in the picture of a point in the track frame; empty behind the eye or before the first draw().
  std::optional<plot::Point> project(const Vec3& track_mm) const;
  /// Pixels of a millimetre across the line of sight there.
  double px_per_mm(const Vec3& track_mm) const;
  Picked pick(double x_px, double y_px) const;
  /// The same for patches alone: cheap enough for every move of a pointer.
  Picked pick_patch(double x_px, double y_px) const;
  /// What draw() made last, rows from the top.
  plot::Image image() const;
  std::size_t triangles() const;

 private:
  struct Parts;
  std::unique_ptr<Parts> parts_;
};

}  // namespace runband
