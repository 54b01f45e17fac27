// The wheelset on its rails in three dimensions, with the patch enlarged as a drawing's detail view.
#include "core/base/error.h"
#include "viewer/plates/sheet.h"

namespace runband {

void draw_scene_plate(const Solution& solution, const Plate&, const std::filesystem::path&) {
  if (solution.asked.bench)
    throw InputError(ErrorCode::conflicting_keys, "draw: a bench case has no wheelset to show.", "use --plate patch.");
}

}  // namespace runband
