#include <iostream>
#include <numbers>

#include "core/base/file.h"
#include "core/base/text.h"
#include "core/solve/solution.h"
#include "viewer/app/commands.h"
#include "viewer/app/table.h"
#include "viewer/plates/plate.h"

namespace runband {

namespace {

std::string contact_name(const Contact& contact) {
  return contact.on_bench ? "bench" : std::string(side_name(contact.zone.side)) + " " + contact.zone.zone;
}

/// One row, asked of every contact; an empty text where it does not apply.
template <typename Ask>
void contact_row(TextTable& table, const Solution& solution, const std::string& name, const std::string& unit,
                 Ask&& ask) {
  std::vector<std::string> cells;
  bool any = false;
  for (const Contact& contact : solution.contacts) {
    cells.push_back(ask(contact));
    any = any || !cells.back().empty();
  }
  if (any) table.row(name, unit, std::move(cells));
}

template <typename Ask>
auto of_wheelset(int decimals, Ask ask) {
  return [decimals, ask](const Contact& c) { return c.on_bench ? std::string() : fixed_text(ask(c.zone), decimals); };
}
template <typename Ask>
auto of_ellipse(int decimals, Ask ask) {
  return [decimals, ask](const Contact& c) {
    return c.zone.ellipse ? fixed_text(ask(*c.zone.ellipse), decimals) : std::string();
  };
}
template <typename Ask>
auto of_patch(int decimals, Ask ask) {
  return [decimals, ask](const Contact& c) { return c.patch ? fixed_text(ask(*c.patch), decimals) : std::string(); };
}

void print_analyses(const Solution& solution, std::ostream& out) {
  TextTable table([&] {
    std::vector<std::string> heads;
    for (const Contact& contact : solution.contacts) heads.push_back(contact_name(contact));
    return heads;
  }());
  bool any = false;
  std::vector<std::pair<std::string, Quantity>> names;  // analysis id and quantity, in order of appearance
  for (const Contact& contact : solution.contacts) {
    for (const auto& [id, result] : contact.analyses) {
      for (const Quantity& q : result.quantities) {
        const auto known = [&, &key = id](const auto& entry) {
          return entry.first == key && entry.second.name == q.name;
        };
        if (std::find_if(names.begin(), names.end(), known) == names.end()) names.emplace_back(id, q);
      }
    }
  }
  std::string last;
  for (const auto& [id, quantity] : names) {
    if (!last.empty() && id != last) table.rule();
    last = id;
    std::vector<std::string> cells;
    for (const Contact& contact : solution.contacts) {
      std::string cell;
      if (const auto found = contact.analyses.find(id); found != contact.analyses.end()) {
        for (const Quantity& q : found->second.quantities)
          if (q.name == quantity.name) cell = number_text(q.value, 4);
      }
      cells.push_back(cell);
    }
    table.row(quantity.title, quantity.unit == "1" ? "" : quantity.unit, std::move(cells));
    any = true;
  }
  if (any) out << "\n" << table.text();
  for (const auto& [id, result] : solution.analyses) {
    for (const Quantity& q : result.quantities)
      out << q.title << ": " << number_text(q.value, 4) << (q.unit == "1" ? "" : " " + q.unit) << "\n";
  }
}

void print_solution(const Solution& solution, std::ostream& out) {
  const Case& c = solution.asked;
  if (!c.title.empty()) out << c.title << "\n";
  if (!c.bench) {
    out << "lateral displacement " << fixed_text(solution.pose.lateral_mm, 3) << " mm at "
        << (solution.pose.reference == LateralReference::axle ? "the axle centre" : "the height of the running surface")
        << ", yaw " << fixed_text(solution.pose.yaw_rad * 1e3, 2) << " mrad, roll "
        << fixed_text(solution.pose.roll_rad * 1e3, 4) << " mrad\n";
  }
  out << "\n";
  std::vector<std::string> heads;
  for (const Contact& contact : solution.contacts) heads.push_back(contact_name(contact));
  TextTable table(std::move(heads));
  contact_row(table, solution, "Normal force", "kN",
              [](const Contact& k) { return fixed_text(k.zone.normal_force_N * 1e-3, 2); });
  contact_row(table, solution, "Contact angle", "°",
              of_wheelset(3, [](const ContactZone& z) { return z.contact_angle_rad * 180.0 / std::numbers::pi; }));
  contact_row(table, solution, "Rolling radius", "mm",
              of_wheelset(4, [](const ContactZone& z) { return z.rolling_radius_mm; }));
  contact_row(table, solution, "Gap", "mm", of_wheelset(4, [](const ContactZone& z) { return z.gap_mm; }));
  contact_row(table, solution, "On the wheel, from the running circle", "mm",
              of_wheelset(3, [](const ContactZone& z) { return z.wheel_y_mm; }));
  contact_row(table, solution, "On the rail, from the head's centre", "mm",
              of_wheelset(3, [](const ContactZone& z) { return z.rail_y_mm; }));
  table.rule();
  contact_row(table, solution, "Relative curvature in rolling", "1/m",
              [](const Contact& k) { return fixed_text(k.zone.curvature.rolling_per_mm * 1e3, 4); });
  contact_row(table, solution, "Relative curvature across", "1/m",
              [](const Contact& k) { return fixed_text(k.zone.curvature.across_per_mm * 1e3, 4); });
  contact_row(table, solution, "Ellipse, semi-axis in rolling", "mm",
              of_ellipse(3, [](const HertzEllipse& e) { return e.semi_axis_rolling_mm; }));
  contact_row(table, solution, "Ellipse, semi-axis across", "mm",
              of_ellipse(3, [](const HertzEllipse& e) { return e.semi_axis_across_mm; }));
  contact_row(table, solution, "Ellipse, area", "mm²",
              of_ellipse(2, [](const HertzEllipse& e) { return e.area_mm2(); }));
  contact_row(table, solution, "Ellipse, peak pressure", "MPa",
              of_ellipse(1, [](const HertzEllipse& e) { return e.peak_pressure_MPa; }));
  contact_row(table, solution, "Ellipse, approach", "mm",
              of_ellipse(4, [](const HertzEllipse& e) { return e.approach_mm; }));
  contact_row(table, solution, "Misfit of the ellipse's gap", "% of the approach", [](const Contact& k) {
    return k.zone.ellipse && !k.on_bench ? fixed_text(k.zone.curvature.misfit * 100.0, 2) : std::string();
  });
  if (c.patch.method == PatchMethod::half_space) {
    table.rule();
    contact_row(table, solution, "Half-space, area", "mm²", of_patch(2, [](const Patch& p) { return p.area_mm2; }));
    contact_row(table, solution, "Half-space, peak pressure", "MPa",
                of_patch(1, [](const Patch& p) { return p.peak_pressure_MPa; }));
    contact_row(table, solution, "Half-space, approach", "mm",
                of_patch(4, [](const Patch& p) { return p.approach_mm; }));
  }
  out << table.text();
  print_analyses(solution, out);
  const auto caution = [&](const std::string& who, const Caution& k) {
    out << "\n"
        << (k.severity == Severity::note      ? "Note"
            : k.severity == Severity::caution ? "Caution"
                                              : "Warning")
        << (who.empty() ? "" : ", " + who) << ": " << k.text;
  };
  for (const Contact& contact : solution.contacts) {
    for (const Caution& k : contact.zone.cautions) caution(contact_name(contact), k);
    for (const auto& [id, result] : contact.analyses)
      for (const Caution& k : result.cautions) caution(contact_name(contact) + ", " + id, k);
  }
  for (const auto& [id, result] : solution.analyses)
    for (const Caution& k : result.cautions) caution(id, k);
  for (const Caution& k : solution.cautions) caution("", k);
  out << "\n";
}

/// The figures that the case asks for ([[plate]]), beside the numbers.
void draw_wanted(const Solution& solution, const std::filesystem::path& folder, const Progress& progress) {
  int number = 0;
  for (const PlateRequest& wanted : solution.asked.plates) {
    Plate plate;
    plate.kind = wanted.plate;
    plate.dpi = wanted.dpi;
    plate.theme = *plot::theme_named(wanted.theme);
    std::tie(plate.width_mm, plate.height_mm) = parse_size(wanted.size);
    ++number;
    const std::string name = wanted.file.empty() ? wanted.plate + "_" + std::to_string(number) + ".png" : wanted.file;
    progress.at(1.0, "drawing");
    if (wanted.plate == "traverse")
      draw_plate(plate, traverse(solution.asked, -6.0, 6.0, 0.05, progress), folder / name);
    else
      draw_plate(plate, solution, folder / name);
  }
}

}  // namespace

int solve_command(const SolveOptions& options, const Progress& progress) {
  const Case c = load_case(options.input.case_file, options.input.settings);
  const Solution solution = solve(c, progress, {&installed_analyses(), options.input.with});
  if (!options.output.out.empty()) {
    write_solution(solution, options.output.out);
    draw_wanted(solution, options.output.out, progress);
  }
  if (options.output.json) {
    std::cout << solution_json(solution);
  } else if (options.output.csv) {
    std::cout << solution_csv(solution);
  } else {
    print_solution(solution, std::cout);
    if (!options.output.out.empty())
      std::cout << "Written to " << options.output.out
                << ": solution.json, contacts.csv, case.toml, patches (.vti), surfaces (.vtp) and the plates that the "
                   "case asks for.\n";
  }
  return 0;
}

}  // namespace runband
