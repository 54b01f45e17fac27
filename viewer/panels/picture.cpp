// What is shown, as a picture of paper size: the same scene, detail view, pins and colours, drawn anew with a title block.
#include "viewer/plot/picture.h"

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "viewer/panels/frame.h"
#include "viewer/panels/overlay.h"
#include "viewer/plates/sheet.h"

namespace runband {

void Frame::draw_picture(const std::filesystem::path& file) {
  const Desk::Place& place = desk_.now();
  if (!place.solution)
    throw InputError(ErrorCode::conflicting_keys, "there is nothing solved to draw.",
                     "wait for the solution, or mend the case.");
  const Solution& solution = *place.solution;
  Plate plate;
  plate.theme = desk_.layout().theme;
  plate.dpi = 254;
  plate.width_mm = 200;
  plate.height_mm = 130;
  switch (desk_.view().sheet) {
    case Sheet::profiles:
      plate.kind = "section";
      return draw_plate(plate, solution, file);
    case Sheet::curves:
      if (place.traverse) {
        plate.kind = "traverse";
        return draw_plate(plate, *place.traverse, file);
      }
      break;
    case Sheet::compare:
    case Sheet::analyses:
    case Sheet::scene:
      break;
  }
  if (plot::picture_kind(file) != plot::PictureKind::png || solution.locator == nullptr || !scene_) {
    plate.kind = "patch";
    return draw_plate(plate, solution, file);
  }
  const plot::PictureOptions options = picture_options(plate, solution.asked);
  const std::pair<int, int> pixels = plot::pixels_of(options);
  const int width = pixels.first, height = pixels.second;
  const double px_per_mm = plate.dpi / 25.4;
  const plot::Theme& theme = plot::theme(plate.theme);
  // The scene takes the page above the title block.
  const double foot_mm = 18.5;
  const int scene_height = height - static_cast<int>(std::lround(foot_mm * px_per_mm));
  LiveScene scene;
  scene.show(place.solution, scene_look(desk_, solution, 0.25 * px_per_mm));
  scene.set_camera(scene_->camera());
  scene.draw(width, scene_height, true);
  plot::Image image = scene.image();
  const auto row = static_cast<std::size_t>(width) * 4;
  image.rgba.resize(row * static_cast<std::size_t>(height));
  image.height = height;
  for (std::size_t k = row * static_cast<std::size_t>(scene_height); k + 3 < image.rgba.size(); k += 4) {
    image.rgba[k] = plot::byte_of(theme.paper.r);
    image.rgba[k + 1] = plot::byte_of(theme.paper.g);
    image.rgba[k + 2] = plot::byte_of(theme.paper.b);
    image.rgba[k + 3] = 255;
  }
  const std::string bytes = plot::picture_over(std::move(image), options, [&](plot::Canvas& canvas) {
    plot::Style style;
    const plot::Box page = canvas.page();
    draw_title_block(title_block(solution.asked, plate, state_text(solution)), canvas, theme, style);
    // The overlay is laid out in pixels of the scene and drawn in millimetres.
    plot::Style overlay_style = style;
    overlay_style.mm = 1.0;
    SceneOverlay overlay =
        layout_overlay(desk_, solution, &scene, {0, 0, static_cast<double>(width), static_cast<double>(scene_height)},
                       px_per_mm / 3.6);
    const auto to_mm = [&](plot::Point p) { return plot::Point{p.x / px_per_mm, p.y / px_per_mm}; };
    overlay.box = {page.x, page.y, page.width, page.height - foot_mm};
    if (overlay.detail) {
      overlay.detail->centre = to_mm(overlay.detail->centre);
      overlay.detail->radius /= px_per_mm;
      overlay.detail->scale /= px_per_mm;
    }
    if (overlay.mark) overlay.mark = to_mm(*overlay.mark);
    overlay.mark_radius /= px_per_mm;
    draw_overlay(desk_, solution, overlay, relief_turn_deg_, relief_tilt_deg_, canvas, theme, overlay_style);
  });
  write_file(file, bytes);
}

}  // namespace runband
