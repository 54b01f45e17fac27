#include <iostream>

#include "core/base/error.h"
#include "core/solve/solution.h"
#include "viewer/app/commands.h"
#include "viewer/plates/plate.h"

namespace runband {

int draw_command(const DrawOptions& options, const Progress& progress) {
  Plate plate;
  plate.kind = options.plate;
  plate.contact = options.contact;
  plate.field = options.field;
  if (plate.kind == "curve" && plate.field.empty())
    throw InputError(ErrorCode::bad_option, "draw: --plate curve needs --field ANALYSIS.CURVE.",
                     "write for example --field steering.equivalent_conicity.");
  if (!plate.field.empty() && plate.kind != "curve" && plate.kind != "patch")
    throw InputError(ErrorCode::bad_option, "draw: --field belongs to --plate patch and --plate curve.",
                     "leave it out, or choose one of these.");
  plate.dpi = options.dpi;
  plate.transparent = options.transparent;
  plate.date = options.date;
  plate.theme = *plot::theme_named(options.theme);
  if (!options.size.empty()) std::tie(plate.width_mm, plate.height_mm) = parse_size(options.size);
  if (!(plate.dpi >= 10 && plate.dpi <= 2400))
    throw out_of_range("draw", "--dpi", plate.dpi, "", "between 10 and 2400");
  const Case c = load_case(options.input.case_file, options.input.settings);
  if (plate.kind == "traverse") {
    const bool listed = c.state.lateral_mm.size() > 1;
    draw_plate(plate, listed ? traverse(c, c.state.lateral_mm, progress) : traverse(c, -6.0, 6.0, 0.05, progress),
               options.out);
  } else {
    draw_plate(plate, solve(c, progress), options.out);
  }
  std::cout << "Drawn: " << options.out << "\n";
  return 0;
}

}  // namespace runband
