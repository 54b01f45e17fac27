// Every curve that the traverse and the analyses give, several to a page; two cases over one another.
#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

struct Shown {
  std::string id, title;
  plot::Plot plot;
};

void add_curve(std::vector<Shown>& all, const std::string& id, const Curve& curve, const std::string& label,
               const plot::Paint& paint, plot::Dash dash) {
  auto found = std::find_if(all.begin(), all.end(), [&](const Shown& s) { return s.id == id; });
  if (found == all.end()) {
    Shown shown;
    shown.id = id;
    shown.title = curve.title;
    shown.plot.title = curve.title;
    shown.plot.x.title = curve.x_title;
    shown.plot.x.unit = curve.x_unit == "1" ? "" : curve.x_unit;
    shown.plot.y.title = curve.y_title;
    shown.plot.y.unit = curve.y_unit == "1" ? "" : curve.y_unit;
    all.push_back(std::move(shown));
    found = all.end() - 1;
  }
  plot::Line line;
  line.x = curve.x;
  line.y = curve.y;
  line.label = label;
  line.paint = paint;
  line.dash = dash;
  found->plot.lines.push_back(std::move(line));
}

void add_traverse(std::vector<Shown>& all, const Traverse& t, plot::Dash dash, const std::string& of) {
  const auto simple = [&](const char* id, const char* title, const char* unit, const std::vector<double>& y,
                          const std::string& label, plot::Ink ink) {
    Curve curve;
    curve.title = title;
    curve.x_title = "lateral displacement";
    curve.x_unit = "mm";
    curve.y_title = title;
    curve.y_title[0] = static_cast<char>(std::tolower(static_cast<unsigned char>(curve.y_title[0])));
    curve.y_unit = unit;
    curve.x = t.lateral_mm;
    curve.y = y;
    add_curve(all, id, curve, label + of, {ink, 1, {}}, dash);
  };
  simple("traverse.rrd", "Rolling radius difference", "mm", t.rolling_radius_difference_mm, "", plot::Ink::accent);
  simple("traverse.angle", "Contact angle", "°", t.left.contact_angle_deg, "left", plot::Ink::accent);
  simple("traverse.angle", "Contact angle", "°", t.right.contact_angle_deg, "right", plot::Ink::ink);
  simple("traverse.wheel", "Contact on the wheel", "mm", t.left.wheel_y_mm, "left", plot::Ink::accent);
  simple("traverse.wheel", "Contact on the wheel", "mm", t.right.wheel_y_mm, "right", plot::Ink::ink);
  simple("traverse.roll", "Roll", "mrad", t.roll_mrad, "", plot::Ink::accent);
}

}  // namespace

void Frame::draw_curves_sheet(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.paper);
  }
  std::vector<Shown> all;
  const auto add_place = [&](const Desk::Place& place, plot::Dash dash, const std::string& of) {
    if (place.traverse && place.traverse->lateral_mm.size() > 1 && curve_group_ == 0)
      add_traverse(all, *place.traverse, dash, of);
    if (!place.solution) return;
    if (curve_group_ == 1)
      for (const auto& [id, result] : place.solution->analyses)
        for (const Curve& curve : result.curves)
          add_curve(all, id + "." + curve.name, curve, of, {plot::Ink::accent, 1, {}}, dash);
    if (curve_group_ == 2) {
      for (const Contact& contact : place.solution->contacts) {
        const bool looked = contact.on_bench || contact.zone.side == Side::left;
        for (const auto& [id, result] : contact.analyses)
          for (const Curve& curve : result.curves)
            add_curve(all, id + "." + curve.name, curve, contact_name(contact) + of,
                      {looked ? plot::Ink::accent : plot::Ink::ink, 1, {}}, dash);
      }
    }
  };
  add_place(desk_.now(), plot::Dash::solid, "");
  if (desk_.two()) add_place(desk_.place(1 - desk_.active()), plot::Dash::dashed, desk_.active() == 0 ? ", B" : ", A");
  const double pad = ui_.px(20);
  ui_.tabs("curves", {box.x + pad, box.y + ui_.px(26)}, {"Across the track", "Wheelset", "Contacts"}, curve_group_);
  if (box.width > ui_.px(620)) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text({box.right() - pad, box.y + ui_.px(26)},
                "wheel zooms, drag moves, double click shows all; over a plot Ctrl+C copies, Shift+X and Shift+Y make "
                "an axis logarithmic",
                {ui_.px(kLabelSize), false, 0}, theme.quiet, plot::Anchor::end, 0);
  }
  if (all.empty()) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text(box.centre(), desk_.now().solution ? "Nothing here gives a curve." : "Solving…", ui_.body_font(),
                theme.quiet, plot::Anchor::middle, 0);
    return;
  }
  const int columns = box.width > ui_.px(700) && all.size() > 1 ? 2 : 1;
  const int rows = (static_cast<int>(all.size()) + columns - 1) / columns;
  const double gap = ui_.px(22), top = ui_.px(44);
  const double width = (box.width - 2 * pad - gap * (columns - 1)) / columns;
  const double visible = box.height - top - ui_.px(12);
  const double height = std::max(ui_.px(200), (visible - gap * (rows - 1)) / rows);
  ui_.begin_area("curves/list", {box.x, box.y + top, box.width, box.height - top}, 0, 0);
  const double start = ui_.y();
  for (std::size_t k = 0; k < all.size(); ++k) {
    const int row = static_cast<int>(k) / columns, column = static_cast<int>(k) % columns;
    draw_live_plot("curve/" + all[k].id, all[k].plot,
                   {box.x + pad + column * (width + gap), start + row * (height + gap), width, height});
  }
  ui_.set_y(start + rows * (height + gap));
  ui_.end_area();
}

}  // namespace runband
