// A curve that an analysis gives, of every contact that has it, or of the wheelset.
#include <algorithm>

#include "core/base/error.h"
#include "core/base/text.h"
#include "viewer/plates/sheet.h"

namespace runband {

void draw_curve_plate(const Solution& solution, const Plate& plate, plot::Canvas& canvas) {
  const plot::Theme& theme = plot::theme(plate.theme);
  const plot::Style style;
  plot::Plot p;
  std::vector<std::string> known;
  const auto look = [&](const std::map<std::string, AnalysisResult>& analyses, const std::string& label) {
    for (const auto& [id, result] : analyses) {
      for (const Curve& curve : result.curves) {
        const std::string name = id + "." + curve.name;
        if (std::find(known.begin(), known.end(), name) == known.end()) known.push_back(name);
        if (name != plate.field) continue;
        p.title = curve.title;
        p.x.title = curve.x_title;
        p.x.unit = curve.x_unit == "1" ? "" : curve.x_unit;
        p.y.title = curve.y_title;
        p.y.unit = curve.y_unit == "1" ? "" : curve.y_unit;
        plot::Line line;
        line.x = curve.x;
        line.y = curve.y;
        line.label = label;
        line.paint = {p.lines.empty() ? plot::Ink::accent : plot::Ink::ink, 1, {}};
        p.lines.push_back(std::move(line));
      }
    }
  };
  look(solution.analyses, "");
  for (const Contact& contact : solution.contacts)
    if (plate.contact.empty() || contact_name(contact).starts_with(plate.contact))
      look(contact.analyses, contact_name(contact));
  if (p.lines.empty())
    throw InputError(ErrorCode::unknown_name, "--field " + plate.field + ": no analysis gives such a curve.",
                     known.empty() ? "no analysis gave a curve here." : "there are: " + join_names(known) + ".");
  const plot::Box body =
      draw_title_block(title_block(solution.asked, plate, state_text(solution)), canvas, theme, style);
  plot::draw_plot(p, body, canvas, theme, style);
}

}  // namespace runband
