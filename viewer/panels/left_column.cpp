// What is asked: the state, the profiles, the analyses.
#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"

namespace runband {

namespace {

std::string short_name(const std::string& profile) {
  if (profile.starts_with("standard:")) return profile.substr(9);
  const std::size_t slash = profile.find_last_of('/');
  return slash == std::string::npos ? profile : profile.substr(slash + 1);
}

}  // namespace

void Frame::draw_left_column(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  if (!desk_.now().used) return;
  const Case& c = desk_.now().document.current();
  // Each slider edits a copy; a drag is one step.
  const auto slide = [&](const char* id, const char* name, double value, const plot::Range& range, int decimals,
                         const char* unit, const char* help, const std::function<void(Case&, double)>& put) {
    double wanted = value;
    const Change change = ui_.slider(id, name, wanted, range, decimals, unit, help);
    if (change == Change::none || wanted == value) return;
    desk_.edit(std::string("Change ") + static_cast<char>(std::tolower(name[0])) + (name + 1), id,
               [&](Case& edited) { put(edited, wanted); });
  };

  ui_.heading("STATE");
  ui_.space(6);
  if (!c.bench) {
    double reach = 8;
    if (const auto& t = desk_.now().traverse; t && !t->lateral_mm.empty())
      reach = std::ceil(std::max(-t->lateral_mm.front(), t->lateral_mm.back()));
    slide("state.lateral", "Lateral displacement", c.state.lateral_mm.front(), {-reach, reach}, 2, "mm",
          "How far the wheelset stands to the left of the track's centre line.",
          [](Case& e, double v) { e.state.lateral_mm.assign(1, v); });
    slide("state.yaw", "Yaw", c.state.yaw_mrad, {-30, 30}, 1, "mrad",
          "Turn of the wheelset about the vertical; positive moves the left wheel backwards. Also the angle of attack "
          "on straight track.",
          [](Case& e, double v) { e.state.yaw_mrad = v; });
    slide("state.speed", "Speed", c.state.speed_m_s, {1, 100}, 1, "m/s", "Speed of travel.",
          [](Case& e, double v) { e.state.speed_m_s = v; });
    // A curve is felt by its curvature; straight track is the middle.
    double curvature = c.track.curve_radius_m == 0 ? 0 : 1000 / c.track.curve_radius_m;
    slide("track.curvature",
          c.track.curve_radius_m == 0  ? "Curve: straight"
          : c.track.curve_radius_m > 0 ? "Curve to the left"
                                       : "Curve to the right",
          curvature, {-7, 7}, 2, "1/km", "Curvature of the track; positive turns to the left.",
          [](Case& e, double v) { e.track.curve_radius_m = std::abs(v) < 0.005 ? 0 : std::round(1e5 / v) / 100; });
    double load = (c.load.vertical_N[0] + c.load.vertical_N[1]) / 2e3;
    slide("load.wheel", "Wheel load", load, {5, 250}, 1, "kN",
          "Vertical force of one wheel on its rail. Both wheels keep their ratio.", [load](Case& e, double v) {
            const double factor = v / load;
            for (double& each : e.load.vertical_N) each = std::round(each * factor);
          });
    slide("friction", "Friction", c.friction, {0, 0.8}, 2, "",
          "Coefficient of Coulomb friction between wheel and rail.", [](Case& e, double v) { e.friction = v; });
  } else {
    slide("bench.load", "Normal force", c.bench->normal_force_N * 1e-3, {0.5, 250}, 1, "kN",
          "Force that presses the bodies together.", [](Case& e, double v) { e.bench->normal_force_N = v * 1e3; });
    slide("friction", "Friction", c.friction, {0, 0.8}, 2, "", "Coefficient of Coulomb friction.",
          [](Case& e, double v) { e.friction = v; });
  }

  ui_.space(2);
  ui_.heading("PATCH");
  ui_.space(2);
  int method = c.patch.method == PatchMethod::hertz ? 0 : 1;
  if (ui_.choice(
          "patch.method", "Method", {"Hertz's ellipse", "half-space"}, method,
          "The ellipse assumes constant curvature over the patch; the half-space takes the profiles as they are."))
    desk_.edit("Switch the method", "",
               [&](Case& e) { e.patch.method = method == 0 ? PatchMethod::hertz : PatchMethod::half_space; });
  const std::vector<int> cells{16, 32, 64, 96, 128};
  std::vector<std::string> cell_words;
  int cell_index = -1;
  for (std::size_t k = 0; k < cells.size(); ++k) {
    cell_words.push_back(std::to_string(cells[k]));
    if (cells[k] == c.patch.cells) cell_index = static_cast<int>(k);
  }
  if (cell_index < 0) {
    cell_words.push_back(std::to_string(c.patch.cells));
    cell_index = static_cast<int>(cell_words.size()) - 1;
  }
  if (ui_.choice("patch.cells", "Cells across", cell_words, cell_index,
                 "Grid cells across the longer side of the patch.") &&
      cell_index < static_cast<int>(cells.size()))
    desk_.edit("Change the grid", "", [&](Case& e) { e.patch.cells = cells[static_cast<std::size_t>(cell_index)]; });

  if (!c.bench) {
    ui_.space(12);
    ui_.heading("PROFILES");
    ui_.space(2);
    const char* names[] = {"Wheel left", "Wheel right", "Rail left", "Rail right"};
    for (int k = 0; k < 4; ++k) {
      const ProfileRequest& request = k < 2 ? c.wheels[k] : c.rails[k - 2];
      const double baseline = ui_.y() + ui_.px(17);
      ui_.canvas().text({ui_.column().x, baseline}, names[k], ui_.body_font(), theme.ink, plot::Anchor::start, 0);
      std::string name = short_name(request.profile);
      const double room = ui_.column().width - ui_.px(88);
      while (name.size() > 6 && ui_.canvas().measure(name, ui_.body_font()).width > room)
        name = "…" + name.substr(name.starts_with("…") ? 4 : 1);
      if (ui_.button_at("profile/" + std::to_string(k), {ui_.column().x + ui_.column().width, baseline}, name,
                        plot::Anchor::end, request.profile + ". Click to choose another; or drop a file on the window.",
                        true, false, ui_.body_font())) {
        desk_.ask(Prompt::Kind::profile, request.profile);
        desk_.prompt.wheel_or_rail = k;
      }
      ui_.space(25);
    }
  }

  ui_.space(12);
  ui_.heading("ANALYSES");
  ui_.space(2);
  const Solution* solution = desk_.now().solution.get();
  for (const Description& d : desk_.registry().descriptions()) {
    // A name opens its page; a red dot says that it failed.
    bool failed = false, done = false;
    if (solution != nullptr) {
      const auto look = [&](const std::map<std::string, AnalysisResult>& results) {
        const auto found = results.find(d.id);
        if (found == results.end()) return;
        done = true;
        for (const Caution& caution : found->second.cautions)
          failed = failed || caution.code == "analysis_failed" || caution.code == "input_missing";
      };
      look(solution->analyses);
      for (const Contact& contact : solution->contacts) look(contact.analyses);
    }
    const double baseline = ui_.y() + ui_.px(17);
    const plot::Point dot{ui_.column().x + ui_.px(5), baseline - ui_.px(4.5)};
    ui_.canvas().line(plot::circle(dot, ui_.px(3)),
                      {failed ? theme.warning
                       : done ? theme.accent
                              : theme.rule,
                       ui_.px(1.6), plot::Dash::solid},
                      true);
    if (ui_.button_at("analysis/" + d.id, {ui_.column().x + ui_.px(18), baseline}, d.title, plot::Anchor::start,
                      d.summary, true, false, ui_.body_font())) {
      chosen_analysis_ = d.id;
      desk_.edit_view("Look at an analysis", "", [](View& v) { v.sheet = Sheet::analyses; });
    }
    ui_.space(24);
  }
  ui_.space(8);
  double size = desk_.layout().left;
  if (ui_.splitter("split/left", {box.right() - ui_.px(3), box.y, ui_.px(6), box.height}, true, false, size, 200, 600))
    desk_.layout().left = size;
}

}  // namespace runband
