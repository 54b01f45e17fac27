// What lies over the scene: detail view, leader, colour bar, pins. One layout for the screen and for a kept picture.
#pragma once

#include <optional>

#include "viewer/desk/desk.h"
#include "viewer/panels/detail.h"
#include "viewer/scene/live_scene.h"

namespace runband {

/// The field that is shown, with its map and range as the view asks for them.
struct ShownField {
  const Field* field = nullptr;
  const Volume* volume = nullptr;  ///< instead of a field: shown as a cut below the patch
  std::string title, unit;
  plot::ColourMap map = plot::ColourMap::ember;
  plot::Range range{0, 1};
};
/// Range over all contacts of the solution, so that left and right can be compared.
ShownField shown_field(const Desk& desk, const Solution& solution);
SceneLook scene_look(const Desk& desk, const Solution& solution, double line_px);
DetailSubject detail_subject(const Desk& desk, const Contact& contact, const ShownField& shown);

/// B minus A on one grid over both patches; where only one has contact the other counts as zero.
plot::HeatMap difference_map(const Contact& a, const Field& field_a, const Contact& b, const Field& field_b);

struct SceneOverlay {
  plot::Box box;
  std::size_t contact = 0;
  std::optional<DetailPlace> detail;
  std::optional<plot::Point> mark;  ///< where the contact is in the scene
  double mark_radius = 0;
};
/// @param unit canvas units of one layout unit
SceneOverlay layout_overlay(const Desk&, const Solution&, const LiveScene*, const plot::Box& box, double unit);
void draw_overlay(const Desk&, const Solution&, const SceneOverlay&, double relief_turn_deg, double relief_tilt_deg,
                  plot::Canvas&, const plot::Theme&, const plot::Style&);

}  // namespace runband
