// Two cases beside or over each other: one scale, one colour range, and their difference.
#include <algorithm>
#include <cmath>

#include "viewer/panels/detail.h"
#include "viewer/panels/frame.h"
#include "viewer/panels/overlay.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

/// Value of a field at a place; not-a-number outside the patch.
double value_at(const Contact& contact, const std::vector<double>& values, double x, double s) {
  const Grid& g = contact.patch->grid;
  const int i = static_cast<int>(std::lround((x - g.x0_mm) / g.dx_mm)),
            j = static_cast<int>(std::lround((s - g.s0_mm) / g.ds_mm));
  if (i < 0 || j < 0 || i >= g.nx || j >= g.ns) return std::nan("");
  const auto cell = static_cast<std::size_t>(j * g.nx + i);
  if (contact.patch->pressure.values[cell] <= 0 || cell >= values.size()) return std::nan("");
  return values[cell];
}

double reach_of(const Contact& contact) {
  const Grid& g = contact.patch->grid;
  double half = 1;
  for (int j = 0; j < g.ns; ++j)
    for (int i = 0; i < g.nx; ++i)
      if (contact.patch->pressure.values[static_cast<std::size_t>(j * g.nx + i)] > 0)
        half = std::max({half, std::abs(g.x(i)) + g.dx_mm, std::abs(g.s(j)) + g.ds_mm});
  return half;
}

}  // namespace

plot::HeatMap difference_map(const Contact& a, const Field& fa, const Contact& b, const Field& fb) {
  const std::vector<double> va = scalars_of(fa), vb = scalars_of(fb);
  const double half = std::max(reach_of(a), reach_of(b));
  constexpr int kCells = 160;
  plot::HeatMap map;
  map.nx = map.ny = kCells;
  map.x0 = map.y0 = -half;
  map.dx = map.dy = 2 * half / kCells;
  map.map = plot::ColourMap::tide;
  double most = 0;
  for (int j = 0; j < kCells; ++j)
    for (int i = 0; i < kCells; ++i) {
      const double x = map.x0 + (i + 0.5) * map.dx, s = map.y0 + (j + 0.5) * map.dy;
      const double pa = value_at(a, va, x, s), pb = value_at(b, vb, x, s);
      double d = std::nan("");
      if (!std::isnan(pa) || !std::isnan(pb)) d = (std::isnan(pb) ? 0 : pb) - (std::isnan(pa) ? 0 : pa);
      map.values.push_back(d);
      if (!std::isnan(d)) most = std::max(most, std::abs(d));
    }
  map.range = {-std::max(most, 1e-12), std::max(most, 1e-12)};
  return map;
}

void Frame::draw_compare_sheet(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.paper);
  }
  const plot::Style style = screen_style(screen_.scale());
  if (!desk_.two()) {
    const plot::Point centre = box.centre();
    ScreenCanvas canvas = ui_.canvas();
    canvas.text({centre.x, centre.y - ui_.px(16)}, "There is one case on the desk.", ui_.body_font(), theme.quiet,
                plot::Anchor::middle, 0);
    if (ui_.button_at("compare.copy", {centre.x, centre.y + ui_.px(12)}, "Set this state aside to compare",
                      plot::Anchor::middle, "K"))
      desk_.actions().run("compare.copy");
    if (ui_.button_at("file.open_second", {centre.x, centre.y + ui_.px(40)}, "Open a case beside this one",
                      plot::Anchor::middle, "Ctrl+Shift+O"))
      desk_.actions().run("file.open_second");
    return;
  }
  const double pad = ui_.px(20);
  const View& view = desk_.view();
  double x = box.x + pad;
  const auto word = [&](const char* id, const char* name, bool on) {
    if (ui_.button_at(id, {x, box.y + ui_.px(26)}, name, plot::Anchor::start, desk_.actions().find(id)->help, true, on,
                      ui_.body_font(on)))
      desk_.actions().run(id);
    x += ui_.canvas().measure(name, ui_.body_font(true)).width + ui_.px(20);
  };
  word("compare.overlay", view.compare_overlaid ? "Overlaid" : "Side by side", false);
  word("compare.difference", "Difference", view.compare_difference);
  word("compare.swap", "Swap A and B", false);
  word("compare.close", "Put B away", false);

  const std::shared_ptr<const Solution> solutions[2] = {desk_.place(0).solution, desk_.place(1).solution};
  std::optional<std::size_t> index[2];
  for (int k = 0; k < 2; ++k)
    if (solutions[k]) index[k] = desk_.contact_of(*solutions[k]);
  if (!index[0] || !index[1]) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text(box.centre(), "Solving…", ui_.body_font(), theme.quiet, plot::Anchor::middle, 0);
    return;
  }
  const Contact* contacts[2] = {&solutions[0]->contacts[*index[0]], &solutions[1]->contacts[*index[1]]};
  const Field* fields[2];
  ShownField shown[2];
  for (int k = 0; k < 2; ++k) {
    shown[k] = shown_field(desk_, *solutions[k]);
    fields[k] = shown[k].field;
  }
  if (fields[0] == nullptr || fields[1] == nullptr) return;
  // One range for both.
  plot::Range range = shown[0].range;
  range.include(shown[1].range.low);
  range.include(shown[1].range.high);
  const double half = std::max(reach_of(*contacts[0]), reach_of(*contacts[1]));

  // Figures: A, B, and B against A.
  const double table_height = ui_.px(168), bar_height = ui_.px(56);
  const plot::Box pictures{box.x + pad, box.y + ui_.px(44), box.width - 2 * pad,
                           box.height - ui_.px(44) - table_height - bar_height};
  const int count = (view.compare_overlaid ? 1 : 2) + (view.compare_difference ? 1 : 0);
  const double cell = pictures.width / count;
  const double radius = std::max(ui_.px(30), std::min(cell * 0.46, pictures.height * 0.5 - ui_.px(18)));
  const double scale = radius / (1.2 * half);
  int slot = 0;
  {
    ScreenCanvas canvas = ui_.canvas();
    const auto centre = [&](int k) {
      return plot::Point{pictures.x + cell * (k + 0.5), pictures.y + pictures.height * 0.5 + ui_.px(8)};
    };
    const auto caption = [&](plot::Point c, const std::string& words) {
      canvas.text({c.x, c.y - radius - ui_.px(8)}, words, ui_.body_font(true), theme.ink, plot::Anchor::middle, 0);
    };
    const auto subject = [&](int k) {
      DetailSubject s = detail_subject(desk_, *contacts[k], shown[k]);
      s.range = range;
      s.map = shown[0].map;
      return s;
    };
    if (view.compare_overlaid) {
      const plot::Point c = centre(slot++);
      const DetailPlace place = draw_detail_view(subject(0), c, radius, scale, canvas, theme, style);
      // B as its outline over A.
      const Grid& g = contacts[1]->patch->grid;
      const auto& p = contacts[1]->patch->pressure.values;
      const auto in = [&](int i, int j) {
        return i >= 0 && j >= 0 && i < g.nx && j < g.ns && p[static_cast<std::size_t>(j * g.nx + i)] > 0;
      };
      const plot::Stroke stroke{theme.accent, style.bold, plot::Dash::solid};
      for (int j = 0; j <= g.ns; ++j)
        for (int i = 0; i <= g.nx; ++i) {
          const double left = g.x(i) - g.dx_mm / 2, low = g.s(j) - g.ds_mm / 2;
          if (in(i, j) != in(i, j - 1))
            plot::draw_line(canvas, place.at(left, low), place.at(left + g.dx_mm, low), stroke);
          if (in(i, j) != in(i - 1, j))
            plot::draw_line(canvas, place.at(left, low), place.at(left, low + g.ds_mm), stroke);
        }
      caption(c, "A, and B's outline");
    } else {
      for (int k = 0; k < 2; ++k) {
        const plot::Point c = centre(slot++);
        draw_detail_view(subject(k), c, radius, scale, canvas, theme, style);
        caption(c, k == 0 ? "A" : "B");
      }
    }
    if (view.compare_difference) {
      const plot::Point c = centre(slot++);
      canvas.polygon(plot::circle(c, radius), theme.sheet);
      const plot::HeatMap map = difference_map(*contacts[0], *fields[0], *contacts[1], *fields[1]);
      canvas.push_clip(plot::circle(c, radius));
      canvas.image({c.x + map.x0 * scale, c.y + map.y0 * scale, map.nx * map.dx * scale, map.ny * map.dy * scale},
                   plot::image_of(map), false);
      canvas.pop_clip();
      canvas.line(plot::circle(c, radius), {theme.ink, style.bold, plot::Dash::solid}, true);
      caption(c, "B minus A");
      const plot::Box bar{box.right() - pad - ui_.px(280), pictures.bottom() + ui_.px(6), ui_.px(280), ui_.px(40)};
      plot::draw_colour_bar(bar, map.map, map.range, "difference", shown[0].unit, canvas, theme, style);
    }
    const plot::Box bar{box.x + pad, pictures.bottom() + ui_.px(6), std::min(ui_.px(280), box.width * 0.4), ui_.px(40)};
    if (fields[0]->kind != Field::Kind::label) {
      std::string title = shown[0].title;
      if (!title.empty()) title[0] = static_cast<char>(std::tolower(static_cast<unsigned char>(title[0])));
      plot::draw_colour_bar(bar, shown[0].map, range, title, shown[0].unit, canvas, theme, style);
    }
  }

  struct Row {
    std::string name, unit;
    double a, b;
    int decimals;
  };
  std::vector<Row> rows;
  rows.push_back(
      {"Peak pressure", "MPa", contacts[0]->patch->peak_pressure_MPa, contacts[1]->patch->peak_pressure_MPa, 0});
  rows.push_back({"Patch area", "mm²", contacts[0]->patch->area_mm2, contacts[1]->patch->area_mm2, 1});
  rows.push_back(
      {"Normal force", "kN", contacts[0]->zone.normal_force_N * 1e-3, contacts[1]->zone.normal_force_N * 1e-3, 1});
  if (!contacts[0]->on_bench)
    rows.push_back(
        {"Rolling radius", "mm", contacts[0]->zone.rolling_radius_mm, contacts[1]->zone.rolling_radius_mm, 2});
  const auto quantity = [&](const char* analysis, const char* name, const char* title, const char* unit, double factor,
                            int decimals) {
    double v[2];
    for (int k = 0; k < 2; ++k) {
      const auto result = contacts[k]->analyses.find(analysis);
      if (result == contacts[k]->analyses.end()) return;
      const auto found = std::find_if(result->second.quantities.begin(), result->second.quantities.end(),
                                      [&](const Quantity& q) { return q.name == name; });
      if (found == result->second.quantities.end()) return;
      v[k] = found->value * factor;
    }
    rows.push_back({title, unit, v[0], v[1], decimals});
  };
  quantity("slip_bands", "slip_area_fraction", "Slipping part", "%", 100, 0);
  quantity("wear", "wear_number", "Wear number Tγ", "N", 1, 1);
  quantity("fatigue", "surface_fatigue_index", "Surface fatigue index", "", 1, 2);
  ScreenCanvas canvas = ui_.canvas();
  const double table_x = box.x + pad, y0 = box.bottom() - table_height + ui_.px(22);
  const double columns[] = {table_x + ui_.px(230), table_x + ui_.px(320), table_x + ui_.px(420)};
  const char* heads[] = {"A", "B", "B − A"};
  for (int k = 0; k < 3; ++k)
    canvas.text({columns[k], y0 - ui_.px(6)}, heads[k], ui_.note_font(), theme.quiet, plot::Anchor::end, 0);
  double y = y0 + ui_.px(14);
  for (const Row& row : rows) {
    canvas.text({table_x, y}, row.name, ui_.body_font(), theme.ink, plot::Anchor::start, 0);
    canvas.number({columns[0], y}, plot::number(row.a, row.decimals), ui_.body_font(true), theme.ink,
                  plot::Anchor::end);
    canvas.number({columns[1], y}, plot::number(row.b, row.decimals), ui_.body_font(true), theme.ink,
                  plot::Anchor::end);
    canvas.number({columns[2], y}, plot::number(row.b - row.a, row.decimals), ui_.body_font(), theme.accent,
                  plot::Anchor::end);
    canvas.text({columns[2] + ui_.px(8), y}, row.unit, ui_.note_font(), theme.quiet, plot::Anchor::start, 0);
    y += ui_.px(20);
  }
  // What B differs in from A, in words.
  if (box.width > ui_.px(760)) {
    const double words_x = columns[2] + ui_.px(80);
    double wy = y0 + ui_.px(14);
    for (int k = 0; k < 2; ++k) {
      const Case& c = solutions[k]->asked;
      const std::string words = std::string(k == 0 ? "A  " : "B  ") + desk_.place(k).document.name() + ", " +
                                short_state(c) + (c.patch.method == PatchMethod::hertz ? ", ellipse" : ", half-space");
      canvas.text({words_x, wy}, words, ui_.note_font(), k == desk_.active() ? theme.ink : theme.quiet,
                  plot::Anchor::start, 0);
      wy += ui_.px(20);
    }
  }
}

}  // namespace runband
