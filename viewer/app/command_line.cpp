#include "viewer/app/command_line.h"

#include <CLI/CLI.hpp>
#include <iostream>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/base/version.h"
#include "viewer/app/commands.h"

namespace runband {

namespace {

void add_case(CLI::App* verb, CaseOptions& input) {
  verb->add_option("CASE", input.case_file, "case file (TOML), or a picture that carries its case")->required();
  verb->add_option("--set", input.settings, "override a key of the case: --set state.lateral_mm=3 (may be repeated)")
      ->type_name("KEY=VALUE")
      ->allow_extra_args(false);
}

void add_with(CLI::App* verb, CaseOptions& input) {
  verb->add_option("--with", input.with, "only these analyses and what they need: --with creepage,slip_bands")
      ->type_name("NAME,...")
      ->delimiter(',')
      ->allow_extra_args(false);
}

void add_output(CLI::App* verb, OutputOptions& output, const std::string& what) {
  auto* json = verb->add_flag("--json", output.json, "print JSON");
  verb->add_flag("--csv", output.csv, "print CSV")->excludes(json);
  verb->add_option("--out", output.out, what)->type_name("DIR");
}

/// CLI11's complaint in our three parts.
InputError as_error(const CLI::App& app, const CLI::ParseError& error, int argc, char** argv) {
  std::vector<std::string> verbs;
  for (const CLI::App* verb : app.get_subcommands([](const CLI::App*) { return true; }))
    verbs.push_back(verb->get_name());
  const std::string first = argc > 1 ? argv[1] : "";
  const bool is_verb = std::find(verbs.begin(), verbs.end(), first) != verbs.end();
  if (!is_verb && !first.empty() && first.front() != '-') {
    const std::string near = nearest_name(first, verbs);
    return {ErrorCode::unknown_name, "\"" + first + "\" is not a command.",
            near.empty() ? "known: " + join_names(verbs) + "." : "did you mean `runband " + near + "`?"};
  }
  return {ErrorCode::bad_option, (is_verb ? first + ": " : std::string()) + error.what() + ".",
          "`runband " + (is_verb ? first + " " : std::string()) + "--help` lists what is possible."};
}

}  // namespace

int run_command_line(int argc, char** argv, const Progress& progress) {
  CLI::App app{"Where a wheelset touches the track, how hard, and what the touch does."};
  app.name("runband");
  app.set_version_flag("--version", std::string("runband ") + version());
  app.require_subcommand(0, 1);
  app.footer(
      "Exit status: 0 done, 2 what was written, 3 a file, 4 no convergence, 5 a plugin, 130 stopped.\n"
      "Nothing here is a safety acceptance; the applicable standards and licensed practice decide.");

  ViewOptions view;
  auto* view_verb = app.add_subcommand("view", "the window, on a case (without any command: on the demo case)");
  add_case(view_verb, view.input);
  view_verb->add_option("--frames", view.frames, "end after so many frames (to try a machine's drawing)")
      ->check(CLI::Range(1L, 1000000L));

  SolveOptions solve;
  auto* solve_verb = app.add_subcommand("solve", "contacts, forces and patches of a case");
  add_case(solve_verb, solve.input);
  add_with(solve_verb, solve.input);
  add_output(solve_verb, solve.output, "folder for everything: JSON, CSV, VTK XML");

  TraverseOptions traverse;
  auto* traverse_verb = app.add_subcommand("traverse", "curves over lateral displacement");
  add_case(traverse_verb, traverse.input);
  add_with(traverse_verb, traverse.input);
  add_output(traverse_verb, traverse.output, "folder for traverse.json and traverse.csv");
  traverse_verb->add_option("--from", traverse.from_mm, "first lateral displacement, mm (default -6)");
  traverse_verb->add_option("--to", traverse.to_mm, "last lateral displacement, mm (default 6)");
  traverse_verb->add_option("--step", traverse.step_mm, "step, mm (default 0.1)");

  DrawOptions draw;
  auto* draw_verb = app.add_subcommand("draw", "a plate: section, patch, curve, scene or traverse");
  add_case(draw_verb, draw.input);
  draw_verb->add_option("--plate", draw.plate, "which")
      ->required()
      ->check(CLI::IsMember({"section", "patch", "curve", "scene", "traverse"}));
  draw_verb->add_option("--out", draw.out, "file; its ending says the format: png, svg, pdf (scene: png, glb)")
      ->required()
      ->type_name("FILE");
  draw_verb->add_option("--size", draw.size, "paper size, for example 180x120mm")->type_name("WxHmm");
  draw_verb->add_option("--dpi", draw.dpi, "dots per inch of a PNG")->capture_default_str();
  draw_verb->add_option("--theme", draw.theme, "paper, light or dark")
      ->check(CLI::IsMember({"paper", "light", "dark"}))
      ->capture_default_str();
  draw_verb->add_flag("--transparent", draw.transparent, "no background");
  draw_verb->add_option("--contact", draw.contact, "only this one, for example \"left tread\" or right");
  draw_verb
      ->add_option("--field", draw.field, "of an analysis: a field on the patch, or a curve: wear.frictional_power")
      ->type_name("ANALYSIS.NAME");
  draw_verb->add_option("--date", draw.date,
                        "date to print in the title block (none by default: same input, same bytes)");

  ProfileCommandOptions profile;
  auto* profile_verb = app.add_subcommand("profile", "check and describe a profile");
  profile_verb->add_option("FILE", profile.file, "points (CSV), a definition (TOML), or standard:NAME")->required();
  profile_verb->add_option("--kind", profile.kind, "wheel or rail, where the file does not say")
      ->check(CLI::IsMember({"wheel", "rail"}));
  profile_verb->add_option("--reference", profile.reference, "profile to measure wear against")->type_name("FILE");
  profile_verb->add_option("--noise", profile.noise_mm, "standard deviation of the measurement, mm")
      ->check(CLI::Range(0.0, 1.0));
  profile_verb->add_option("--unit", profile.unit, "unit of the points")->check(CLI::IsMember({"mm", "m", "um", "in"}));
  profile_verb->add_option("--y-axis", profile.y_axis, "where positive y points")
      ->check(CLI::IsMember({"field", "gauge"}));
  profile_verb->add_option("--z-axis", profile.z_axis, "where positive z points")->check(CLI::IsMember({"up", "down"}));
  profile_verb->add_option("--plot", profile.plot, "draw it: png, svg or pdf")->type_name("FILE");
  add_output(profile_verb, profile.output, "folder for profile.json and the fitted points as profile.csv");

  std::string analysis;
  auto* analyses_verb = app.add_subcommand("analyses", "what is installed, and what one needs, gives and takes");
  analyses_verb->add_option("NAME", analysis, "one of them");

  try {
    app.parse(argc, argv);
  } catch (const CLI::Success& success) {
    return app.exit(success);
  } catch (const CLI::ParseError& error) {
    throw as_error(app, error, argc, argv);
  }
  if (*view_verb || app.get_subcommands().empty()) return view_command(view, progress);
  if (*solve_verb) return solve_command(solve, progress);
  if (*traverse_verb) return traverse_command(traverse, progress);
  if (*draw_verb) return draw_command(draw, progress);
  if (*analyses_verb) return analyses_command(analysis);
  return profile_command(profile, progress);
}

}  // namespace runband
