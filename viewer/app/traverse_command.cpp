#include <algorithm>
#include <cmath>
#include <iostream>

#include "core/base/file.h"
#include "core/base/text.h"
#include "core/solve/solution.h"
#include "viewer/app/commands.h"
#include "viewer/app/table.h"

namespace runband {

namespace {

void print_traverse(const Traverse& t, std::ostream& out) {
  if (!t.asked.title.empty()) out << t.asked.title << "\n\n";
  TextTable table({"lateral", "radius difference", "roll", "angle left", "angle right", "wheel y left", "wheel y right",
                   "rail y left", "rail y right"});
  table.row("", "", {"mm", "mm", "mrad", "°", "°", "mm", "mm", "mm", "mm"});
  // A screen holds some 40 rows; --csv and --json give all.
  const std::size_t stride = std::max<std::size_t>(1, (t.lateral_mm.size() + 39) / 40);
  for (std::size_t i = 0; i < t.lateral_mm.size(); i += stride) {
    table.row("", "",
              {fixed_text(t.lateral_mm[i], 3), fixed_text(t.rolling_radius_difference_mm[i], 4),
               fixed_text(t.roll_mrad[i], 4), fixed_text(t.left.contact_angle_deg[i], 2),
               fixed_text(t.right.contact_angle_deg[i], 2), fixed_text(t.left.wheel_y_mm[i], 2),
               fixed_text(t.right.wheel_y_mm[i], 2), fixed_text(t.left.rail_y_mm[i], 2),
               fixed_text(t.right.rail_y_mm[i], 2)});
  }
  out << table.text();
  if (stride > 1)
    out << "\nEvery " << stride << "th of " << t.lateral_mm.size()
        << " positions is shown; --csv or --json gives all.\n";
  for (const ContactJump& jump : t.jumps) {
    out << "Contact jumps on the " << side_name(jump.side) << " wheel at " << fixed_text(jump.lateral_mm, 4)
        << " mm: from " << fixed_text(jump.wheel_y_from_mm, 2) << " to " << fixed_text(jump.wheel_y_to_mm, 2)
        << " mm.\n";
  }
  for (const auto& [id, result] : t.analyses) {
    for (const Quantity& q : result.quantities) {
      out << q.title << ": " << number_text(q.value, 4) << (q.unit == "1" ? "" : " " + q.unit) << "\n";
    }
    for (const Caution& k : result.cautions) out << "Caution, " << id << ": " << k.text << "\n";
  }
  for (const Caution& k : t.cautions) out << (k.severity == Severity::note ? "Note: " : "Warning: ") << k.text << "\n";
}

}  // namespace

int traverse_command(const TraverseOptions& options, const Progress& progress) {
  const Case c = load_case(options.input.case_file, options.input.settings);
  const AnalysisChoice choice{&installed_analyses(), options.input.with};
  const bool listed = c.state.lateral_mm.size() > 1 && !options.from_mm && !options.to_mm && !options.step_mm;
  const Traverse t = listed ? traverse(c, c.state.lateral_mm, progress, choice)
                            : traverse(c, options.from_mm.value_or(-6.0), options.to_mm.value_or(6.0),
                                       options.step_mm.value_or(0.1), progress, choice);
  if (!options.output.out.empty()) {
    const std::filesystem::path folder = options.output.out;
    write_file(folder / "traverse.json", traverse_json(t));
    write_file(folder / "traverse.csv", traverse_csv(t));
  }
  if (options.output.json)
    std::cout << traverse_json(t);
  else if (options.output.csv)
    std::cout << traverse_csv(t);
  else
    print_traverse(t, std::cout);
  return 0;
}

}  // namespace runband
