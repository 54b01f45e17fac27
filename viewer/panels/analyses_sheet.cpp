// A page for each analysis, made from its own description: parameters, results, cautions, sources.
#include <algorithm>
#include <cmath>

#include "viewer/panels/frame.h"
#include "viewer/plates/sheet.h"

namespace runband {

namespace {

int decimals_for(double value) {
  if (value == 0) return 0;
  return static_cast<int>(std::clamp(3 - std::floor(std::log10(std::abs(value))), 0.0, 6.0));
}

std::string number_words(double value) {
  if (value != 0 && (std::abs(value) < 1e-3 || std::abs(value) >= 1e6)) {
    const int exponent = static_cast<int>(std::floor(std::log10(std::abs(value))));
    return plot::number(value / std::pow(10.0, exponent), 2) + "·" + plot::power_of_ten(exponent);
  }
  return plot::number(value, decimals_for(value));
}

}  // namespace

void Frame::draw_analyses_sheet(const plot::Box& box) {
  const plot::Theme& theme = desk_.theme();
  {
    ScreenCanvas canvas = ui_.canvas();
    canvas.polygon(plot::corners(box), theme.paper);
  }
  const std::vector<Description> all = desk_.registry().descriptions();
  if (all.empty()) {
    ScreenCanvas canvas = ui_.canvas();
    canvas.text(box.centre(), "No analysis is installed.", ui_.body_font(), theme.quiet, plot::Anchor::middle, 0);
    return;
  }
  const Description* d = &all.front();
  for (const Description& each : all)
    if (each.id == chosen_analysis_) d = &each;
  chosen_analysis_ = d->id;
  // Names at the left, the page at the right.
  const double names_width = ui_.px(150);
  ui_.begin_area("analysis/names", {box.x, box.y, names_width, box.height}, 20, 20);
  for (const Description& each : all) {
    const bool chosen = each.id == d->id;
    if (ui_.button_at("page/" + each.id, {ui_.column().x, ui_.y() + ui_.px(16)}, each.title, plot::Anchor::start, {},
                      true, chosen, ui_.body_font(chosen)))
      chosen_analysis_ = each.id;
    ui_.space(27);
  }
  ui_.end_area();
  const plot::Box page{box.x + names_width, box.y, box.width - names_width, box.height};
  ui_.begin_area("analysis/page", page, 20, 16);
  const double whole = ui_.column().width;
  ui_.words(d->title, ui_.title_font(), theme.ink);
  ui_.paragraph(d->summary, ui_.body_font(), theme.quiet);
  ui_.space(12);
  // Two columns where there is room.
  const bool wide = whole > ui_.px(560);
  const double column_width = wide ? (whole - ui_.px(40)) / 2 : whole;
  const double x = ui_.column().x, top = ui_.y();
  ui_.set_column({x, page.y, column_width, page.height});
  ui_.heading("PARAMETERS");
  ui_.space(4);
  const Case& c = desk_.now().document.current();
  const auto asked = c.analyses.find(d->id);
  if (d->parameters.empty()) ui_.paragraph("None.", ui_.note_font(), theme.quiet);
  for (const Parameter& p : d->parameters) {
    ParameterValue value = p.value;
    bool own = false;
    if (asked != c.analyses.end()) {
      const auto found = asked->second.find(p.key);
      if (found != asked->second.end()) {
        value = found->second;
        own = true;
      }
    }
    const std::string id = d->id + "." + p.key;
    const std::string help = p.help + (p.reference.empty() ? "" : " Default from " + p.reference + ".");
    const auto put = [&](ParameterValue wanted) {
      desk_.edit("Change " + p.title, "", [&](Case& e) { e.analyses[d->id][p.key] = std::move(wanted); });
    };
    const double row = ui_.y();
    // Its own value can be taken back to the default.
    const plot::Box column = ui_.column();
    if (own) ui_.set_column({column.x, column.y, column.width - ui_.px(50), column.height});
    if (const bool* on = std::get_if<bool>(&value)) {
      bool wanted = *on;
      if (ui_.check(id, p.title, wanted, help)) put(wanted);
    } else if (const double* number = std::get_if<double>(&value)) {
      double wanted = *number;
      const plot::Range range{p.min.value_or(-1e300), p.max.value_or(1e300)};
      if (ui_.number(id, p.title, wanted, range, *number != 0 && std::abs(*number) < 1e-3 ? -1 : decimals_for(*number),
                     p.unit == "1" ? "" : p.unit, help) == Change::done)
        put(wanted);
    } else {
      const std::string& text = std::get<std::string>(value);
      int chosen = -1;
      for (std::size_t k = 0; k < p.choices.size(); ++k)
        if (p.choices[k] == text) chosen = static_cast<int>(k);
      if (ui_.choice(id, p.title, p.choices, chosen, help) && chosen >= 0)
        put(p.choices[static_cast<std::size_t>(chosen)]);
    }
    if (own) {
      ui_.set_column(column);
      if (ui_.button_at(id + "/reset", {column.x + column.width, row + ui_.px(16)}, "reset", plot::Anchor::end,
                        "Back to the default.", true, false, ui_.note_font()))
        desk_.edit("Reset " + p.title, "", [&](Case& e) {
          e.analyses[d->id].erase(p.key);
          if (e.analyses[d->id].empty()) e.analyses.erase(d->id);
        });
    }
    if (p.min || p.max) {
      const std::string range = "from " + number_words(p.min.value_or(0)) + " to " + number_words(p.max.value_or(0));
      ui_.canvas().text({column.x, ui_.y() + ui_.px(9)}, range, {ui_.px(kLabelSize), false, 0}, theme.quiet,
                        plot::Anchor::start, 0);
      ui_.space(17);
    }
  }
  ui_.space(14);
  ui_.heading("SOURCES");
  ui_.space(4);
  for (const std::string& reference : d->references) {
    ui_.paragraph(reference, ui_.note_font(), theme.quiet);
    ui_.space(4);
  }
  const auto joined = [](const std::vector<std::string>& names) {
    std::string words;
    for (const std::string& name : names) words += (words.empty() ? "" : ", ") + name;
    return words;
  };
  ui_.space(10);
  if (!d->needs.empty()) ui_.paragraph("Needs " + joined(d->needs) + ".", ui_.note_font(), theme.quiet);
  if (!d->gives.empty()) ui_.paragraph("Gives " + joined(d->gives) + ".", ui_.note_font(), theme.quiet);
  const double left_end = ui_.y();

  if (wide) {
    ui_.set_column({x + column_width + ui_.px(40), page.y, column_width, page.height});
    ui_.set_y(top);
  } else {
    ui_.space(16);
  }
  const Solution* solution = desk_.now().solution.get();
  const auto results = [&](const std::string& name, const AnalysisResult& result) {
    ui_.heading(name);
    ui_.space(4);
    for (const Quantity& q : result.quantities)
      ui_.value(name + "/" + q.name, q.title, number_words(q.value), q.unit == "1" ? "" : q.unit, {}, q.from);
    for (const Caution& caution : result.cautions) ui_.caution({}, caution.text, caution.severity != Severity::note);
    for (const Field& field : result.fields) {
      const std::string key = d->id + "." + field.name;
      if (ui_.button("show/" + name + "/" + key, "Show " + field.title + " on the patch"))
        desk_.edit_view("Show another field", "", [&](View& v) {
          v.field = key;
          v.sheet = Sheet::scene;
          v.locked_range.reset();
        });
    }
    ui_.space(12);
  };
  bool any = false;
  if (solution != nullptr) {
    const auto of_wheelset = solution->analyses.find(d->id);
    if (of_wheelset != solution->analyses.end()) {
      results("WHEELSET", of_wheelset->second);
      any = true;
    }
    for (const Contact& contact : solution->contacts) {
      const auto found = contact.analyses.find(d->id);
      if (found == contact.analyses.end()) continue;
      results(contact_label(contact), found->second);
      any = true;
    }
  }
  if (!any) {
    ui_.heading("RESULTS");
    ui_.space(4);
    ui_.paragraph(desk_.solver().busy(desk_.active()) ? "To come…" : "None for this state.", ui_.note_font(),
                  theme.quiet);
  }
  ui_.set_y(std::max(ui_.y(), left_end) + ui_.px(10));
  ui_.end_area();
}

}  // namespace runband
