// Title, what it is, sheets to look at, and how old the answer is.
#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"

namespace runband {

namespace {

/// "hollow wheel on worn rail, 1:40, gauge 1435 mm" in as many parts as fit.
std::string about(const Case& c, const Solution* solution) {
  if (c.bench) return "one contact on the bench";
  std::string words;
  if (solution != nullptr && solution->locator != nullptr) {
    const Pairing& pairing = solution->locator->pairing();
    const std::string wheel = pairing.wheel(Side::left).title, rail = pairing.rail(Side::left).title;
    words = (wheel.empty() ? c.wheels[0].profile : wheel) + " on " + (rail.empty() ? c.rails[0].profile : rail) + ", ";
  }
  if (c.track.inclination_rad > 0)
    words += "1\u2009:\u2009" + plot::number(1 / std::tan(c.track.inclination_rad), 0) + ", ";
  return words + "gauge " + plot::number(c.track.gauge_mm, c.track.gauge_mm == std::round(c.track.gauge_mm) ? 0 : 1) +
         "\u2009mm";
}

}  // namespace

void Frame::draw_header(const plot::Box& box) {
  const Desk::Place& place = desk_.now();
  const plot::Theme& theme = desk_.theme();
  const double baseline = box.y + ui_.px(35);
  ScreenCanvas canvas = ui_.canvas();
  const plot::Point rule[] = {{0, box.bottom() - 0.5}, {box.right(), box.bottom() - 0.5}};
  canvas.line(rule, {theme.rule, 1, plot::Dash::solid}, false);

  // Status at the right, tabs in the middle; the title gives way first to what it needs.
  const std::string status = desk_.said().empty() ? desk_.status() : desk_.said();
  const plot::Font note = ui_.note_font();
  const double right = box.right() - ui_.px(24);
  double tabs_width = 0;
  std::vector<std::string> names(std::begin(kSheetNames), std::end(kSheetNames));
  for (const std::string& name : names) tabs_width += canvas.measure(name, ui_.body_font(true)).width + ui_.px(20);
  const double middle_left = std::max(ui_.px(260), box.width * 0.40);
  const double status_room = right - (middle_left + tabs_width + ui_.px(16));
  const std::string shown = cut_to_fit(canvas, status, note, std::max(ui_.px(80), status_room));
  canvas.text({right, baseline}, shown, note,
              desk_.said_warning() && !desk_.said().empty() ? theme.warning : theme.quiet, plot::Anchor::end, 0);
  const plot::Box status_box{right - std::max(ui_.px(80), status_room), box.y, std::max(ui_.px(80), status_room),
                             box.height};
  if (shown != status && ui_.hovers(status_box)) ui_.tooltip(status);

  std::string title = (place.document.unsaved() ? "• " : "") + place.document.name();
  if (desk_.two()) title = std::string(desk_.active() == 0 ? "A  " : "B  ") + title;
  title = cut_to_fit(canvas, title, ui_.title_font(), middle_left - ui_.px(48));
  canvas.text({box.x + ui_.px(24), baseline}, title, ui_.title_font(), theme.ink, plot::Anchor::start, 0);
  const double used = canvas.measure(title, ui_.title_font()).width + ui_.px(44);
  const double room = middle_left - used - ui_.px(24);
  if (room > ui_.px(60))
    canvas.text({box.x + used, baseline},
                cut_to_fit(canvas, about(place.document.current(), place.solution.get()), note, room), note,
                theme.quiet, plot::Anchor::start, 0);
  int sheet = static_cast<int>(desk_.view().sheet);
  if (ui_.tabs("sheet", {middle_left, baseline}, names, sheet))
    desk_.edit_view("Look at another sheet", "", [&](View& v) { v.sheet = static_cast<Sheet>(sheet); });

  // Long work: a hair line along the header's foot, and a word to stop it.
  const auto doing = desk_.solver().doing();
  if (doing && doing->for_s > 0.4) {
    const double done = std::clamp(doing->fraction, 0.02, 1.0);
    const plot::Point line[] = {{0, box.bottom() - 1}, {box.width * done, box.bottom() - 1}};
    canvas.line(line, {theme.accent, ui_.px(2), plot::Dash::solid}, false);
    if (ui_.button_at("cancel", {right, box.bottom() - ui_.px(4)}, "Stop solving", plot::Anchor::end, doing->what, true,
                      false, ui_.note_font()))
      desk_.actions().run("case.cancel");
  }
}

}  // namespace runband
