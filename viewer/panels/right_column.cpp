// What is answered: the looked-at contact, the wheelset, and every caution.
#include <algorithm>
#include <cmath>
#include <numbers>

#include "viewer/panels/frame.h"

namespace runband {

namespace {

struct Row {
  const char* id;  ///< "analysis.quantity"
  const char* name;
  const char* unit;
  double factor;
  int decimals;
  const char* help;
};

// What a design review asks first; the rest is on the analyses' pages.
constexpr Row kPatchRows[] = {
    {"slip_bands.slip_area_fraction", "Slipping part", "%", 100, 0,
     "Share of the patch in which the surfaces slide over each other."},
    {"slip_bands.saturation", "Friction limit used", "%", 100, 0, "Creep force over friction times normal force."},
    {"slip_bands.force_rolling", "Creep force in rolling", "kN", 1e-3, 2,
     "Tangential force on the wheel along its rolling."},
    {"slip_bands.force_across", "Creep force across", "kN", 1e-3, 2,
     "Tangential force on the wheel across its rolling, positive to the field side."},
    {"creepage.longitudinal_creepage", "Longitudinal creepage", "10⁻³", 1e3, 2,
     "Difference of the surfaces' speeds along the rolling, over the speed."},
    {"creepage.lateral_creepage", "Lateral creepage", "10⁻³", 1e3, 2,
     "Difference of the surfaces' speeds across the rolling, over the speed."},
    {"creepage.spin", "Spin", "1/m", 1e3, 3,
     "Relative turning of the surfaces about the contact normal, over the speed."},
    {"wear.wear_number", "Wear number Tγ", "N", 1, 1, "Creep force times creepage: energy lost for each metre rolled."},
    {"subsurface.largest_von_mises", "Largest von Mises stress", "MPa", 1, 0,
     "Below the surface, under pressure and traction."},
    {"heat.largest_flash_temperature", "Flash temperature", "K", 1, 0,
     "Rise of the surface's temperature during one passage."},
    {"fatigue.surface_fatigue_index", "Surface fatigue index", "", 1, 2,
     "Above zero the surface can be expected to fatigue."},
    {"flange_climb.climb_limit_used", "Climb limit used", "%", 100, 0,
     "Lateral over vertical force, over Nadal's limit."}};

const Quantity* quantity_of(const std::map<std::string, AnalysisResult>& results, const std::string& id) {
  const std::size_t dot = id.find('.');
  const auto result = results.find(id.substr(0, dot));
  if (result == results.end()) return nullptr;
  for (const Quantity& q : result->second.quantities)
    if (q.name == id.substr(dot + 1)) return &q;
  return nullptr;
}

}  // namespace

void Frame::draw_right_column(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  const Desk::Place& place = desk_.now();
  if (place.failure) {
    ui_.caution("No solution for this state",
                place.failure->message + (place.failure->cure.empty() ? "" : " To do: " + place.failure->cure), true);
    if (place.solution) {
      ui_.paragraph("Shown is " + short_state(place.solution->asked) + ".", ui_.note_font(), theme.quiet);
      ui_.space(10);
    }
  }
  const auto finish = [&] {
    double size = desk_.layout().right;
    if (ui_.splitter("split/right", {box.x - ui_.px(3), box.y, ui_.px(6), box.height}, true, true, size, 220, 700))
      desk_.layout().right = size;
  };
  if (!place.solution) {
    ui_.space(8);
    if (!place.failure)
      ui_.paragraph(place.used ? "Solving…" : "Nothing is open. Drop a case here, or press Ctrl+O.", ui_.body_font(),
                    theme.quiet);
    finish();
    return;
  }
  const Solution& solution = *place.solution;
  const auto index = desk_.contact_of(solution);

  // Which contact: words in a row.
  std::vector<std::string> names;
  std::vector<std::size_t> indices;
  int chosen = 0;
  for (std::size_t i = 0; i < solution.contacts.size(); ++i) {
    if (!solution.contacts[i].patch) continue;
    if (index && *index == i) chosen = static_cast<int>(names.size());
    names.push_back(capitalised(contact_title(solution.contacts[i])));
    indices.push_back(i);
  }
  if (names.empty()) {
    ui_.paragraph("No contact carries load.", ui_.body_font(), theme.quiet);
    finish();
    return;
  }
  {
    double width = 0;
    for (const std::string& name : names) width += ui_.canvas().measure(name, ui_.body_font(true)).width + ui_.px(20);
    if (width <= ui_.column().width + ui_.px(20)) {
      if (ui_.tabs("contact", {ui_.column().x, ui_.y() + ui_.px(14)}, names, chosen))
        desk_.edit_view("Look at a contact", "", [&](View& v) {
          v.contact = contact_title(solution.contacts[indices[static_cast<std::size_t>(chosen)]]);
        });
      ui_.space(30);
    } else if (ui_.choice("contact", "Contact", names, chosen)) {
      desk_.edit_view("Look at a contact", "", [&](View& v) {
        v.contact = contact_title(solution.contacts[indices[static_cast<std::size_t>(chosen)]]);
      });
    }
  }
  const Contact& contact = solution.contacts[indices[static_cast<std::size_t>(chosen)]];
  const ContactZone& zone = contact.zone;
  const auto value = [&](const char* id, const std::string& name, double number, int decimals, const char* unit,
                         const char* help, const std::string& note = {}) {
    ui_.value(id, name, plot::number(number, decimals), unit, note, help);
  };
  if (!contact.on_bench) {
    value("zone.angle", "Contact angle", zone.contact_angle_rad * 180 / std::numbers::pi, 2, "°",
          "Slope of the common tangent plane against the track plane.");
    value("zone.radius", "Rolling radius", zone.rolling_radius_mm, 2, "mm", "Distance from the axle to the contact.");
  }
  value("zone.force", "Normal force", zone.normal_force_N * 1e-3, 1, "kN", "Force across the patch.");
  const bool half_space = contact.patch->method == PatchMethod::half_space;
  const auto hertz = [&](double number, int decimals) {
    return half_space && zone.ellipse ? "Hertz " + plot::number(number, decimals) : std::string();
  };
  value("patch.peak", "Peak pressure", contact.patch->peak_pressure_MPa, 0, "MPa", "Highest pressure in the patch.",
        hertz(zone.ellipse ? zone.ellipse->peak_pressure_MPa : 0, 0));
  value("patch.area", "Patch area", contact.patch->area_mm2, 1, "mm²", "Area that carries pressure.",
        hertz(zone.ellipse ? zone.ellipse->area_mm2() : 0, 1));
  value("patch.approach", "Approach", contact.patch->approach_mm * 1e3, 1, "µm",
        "How far the bodies press into each other.");
  for (const Row& row : kPatchRows) {
    const Quantity* q = quantity_of(contact.analyses, row.id);
    if (q == nullptr) continue;
    ui_.value(row.id, row.name, plot::number(q->value * row.factor, row.decimals), row.unit, {}, row.help);
  }

  if (!contact.on_bench) {
    ui_.rule();
    ui_.heading("WHEELSET");
    ui_.space(4);
    for (const auto& [id, result] : solution.analyses) {
      for (const Quantity& q : result.quantities) {
        const int decimals = q.unit == "mm"             ? 2
                             : q.unit == "m"            ? 0
                             : std::abs(q.value) >= 100 ? 0
                             : std::abs(q.value) >= 10  ? 1
                                                        : 3;
        ui_.value(id + "." + q.name, q.title, plot::number(q.value, decimals), q.unit == "1" ? "" : q.unit, {}, q.from);
      }
    }
    value("pose.roll", "Roll", solution.pose.roll_rad * 1e3, 2, "mrad",
          "Turn about the track's direction; positive lifts the left wheel.");
  }

  // Cautions: strong ones first, each said once.
  ui_.rule();
  std::vector<const Caution*> cautions;
  const auto gather = [&](const std::vector<Caution>& from) {
    for (const Caution& each : from)
      if (std::none_of(cautions.begin(), cautions.end(), [&](const Caution* c) { return c->text == each.text; }))
        cautions.push_back(&each);
  };
  gather(zone.cautions);
  for (const auto& [id, result] : contact.analyses) gather(result.cautions);
  for (const auto& [id, result] : solution.analyses) gather(result.cautions);
  gather(solution.cautions);
  std::stable_sort(cautions.begin(), cautions.end(),
                   [](const Caution* a, const Caution* b) { return a->severity > b->severity; });
  for (const Caution* caution : cautions) ui_.caution({}, caution->text, caution->severity != Severity::note);

  ui_.space(6);
  const double baseline = ui_.y() + ui_.px(18);
  if (ui_.button_at("keep_picture", {ui_.column().x, baseline}, "Keep this picture", plot::Anchor::start, "Ctrl+E"))
    desk_.actions().run("file.keep_picture");
  if (ui_.button_at("set_aside", {ui_.column().x + ui_.column().width, baseline},
                    desk_.two() ? "Swap A and B" : "Set aside to compare", plot::Anchor::end, desk_.two() ? "A" : "K"))
    desk_.actions().run(desk_.two() ? "compare.swap" : "compare.copy");
  ui_.space(34);
  finish();
}

}  // namespace runband
