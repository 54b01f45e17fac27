#include <iostream>
#include <nlohmann/json.hpp>
#include <sstream>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/profile/profile.h"
#include "viewer/app/commands.h"
#include "viewer/app/table.h"
#include "viewer/plates/profile_plate.h"

namespace runband {

namespace {

/// Wheel or rail, as said; else whichever of the two the file can be read as.
std::shared_ptr<const Profile> load_as_told(const ProfileCommandOptions& options) {
  const ProfileOptions reading{options.noise_mm, options.unit, options.y_axis, options.z_axis};
  if (!options.kind.empty())
    return load_profile(options.file, options.kind == "wheel" ? ProfileKind::wheel : ProfileKind::rail, reading);
  std::shared_ptr<const Profile> found[2];
  std::optional<Error> refusal[2];
  for (const int i : {0, 1}) {
    try {
      found[i] = load_profile(options.file, i == 0 ? ProfileKind::wheel : ProfileKind::rail, reading);
    } catch (const FileError&) {
      throw;
    } catch (const Error& error) {
      refusal[i] = error;
    }
  }
  if (found[0] && found[1])
    throw InputError(ErrorCode::missing_key, options.file + ": could be a wheel as well as a rail.",
                     "say --kind wheel or --kind rail.");
  if (found[0] || found[1]) return found[0] ? found[0] : found[1];
  const int likely = options.file.find("wheel") != std::string::npos ? 0 : 1;
  if (refusal[0]->message() == refusal[1]->message())
    throw InputError(refusal[0]->code(), refusal[0]->message(), refusal[0]->cure());
  throw InputError(refusal[likely]->code(),
                   refusal[likely]->message() + " (read as a " + (likely == 0 ? "wheel" : "rail") + ")",
                   refusal[likely]->cure() + " Say --kind wheel or --kind rail to read it as that.");
}

nlohmann::ordered_json profile_json(const Profile& p, const std::vector<Quantity>& figures,
                                    const std::optional<Curve>& wear) {
  nlohmann::ordered_json j;
  j["profile"] = {{"kind", p.kind == ProfileKind::wheel ? "wheel" : "rail"},
                  {"title", p.title},
                  {"source", p.source},
                  {"provenance", p.provenance},
                  {"origin", p.origin},
                  {"checksum", p.checksum},
                  {"points", p.points.size()}};
  for (const Quantity& q : figures)
    j["figures"][q.name] = {{"value", q.value}, {"unit", q.unit}, {"title", q.title}, {"from", q.from}};
  if (p.fit) {
    j["fit"] = {{"noise_mm", p.fit->noise_mm},
                {"noise_estimated", p.fit->noise_estimated},
                {"residual_rms_mm", p.fit->residual_rms_mm},
                {"residual_max_mm", p.fit->residual_max_mm},
                {"smoothing", p.fit->smoothing},
                {"effective_parameters", p.fit->effective_parameters}};
  }
  j["findings"] = nlohmann::ordered_json::array();
  for (const Finding& f : p.findings)
    j["findings"].push_back(
        {{"code", f.code}, {"text", f.text}, {"line", f.first_row}, {"y_mm", f.at.x()}, {"z_mm", f.at.y()}});
  if (wear) j["wear"] = {{"y_mm", wear->x}, {"wear_mm", wear->y}};
  return j;
}

std::string fitted_csv(const Profile& p) {
  std::ostringstream csv;
  csv << "y_mm,z_mm,slope,curvature_per_mm\n";
  for (const CurvePoint& point : sample_curve(*p.curve, 0.001, 0.25))
    csv << number_text(point.y()) << ',' << number_text(point.z()) << ',' << number_text(point.slope()) << ','
        << number_text(point.curvature()) << '\n';
  return std::move(csv).str();
}

}  // namespace

int profile_command(const ProfileCommandOptions& options, const Progress& progress) {
  const auto profile = load_as_told(options);
  std::shared_ptr<const Profile> reference;
  if (!options.reference.empty()) reference = load_profile(options.reference, profile->kind);
  progress.check();
  const std::vector<Quantity> figures = describe_profile(*profile, reference.get());
  std::optional<Curve> wear;
  if (reference) wear = wear_against(*profile, *reference);
  if (!options.plot.empty()) draw_profile(*profile, reference.get(), options.plot);
  const std::string json = profile_json(*profile, figures, wear).dump(2) + "\n";
  if (!options.output.out.empty()) {
    write_file(std::filesystem::path(options.output.out) / "profile.json", json);
    write_file(std::filesystem::path(options.output.out) / "profile.csv", fitted_csv(*profile));
  }
  if (options.output.json) {
    std::cout << json;
    return 0;
  }
  if (options.output.csv) {
    std::cout << fitted_csv(*profile);
    return 0;
  }
  std::cout << profile->title << " (" << (profile->kind == ProfileKind::wheel ? "wheel" : "rail") << ")\n";
  if (!profile->source.empty()) std::cout << "Source: " << profile->source << "\n";
  if (!profile->provenance.empty()) std::cout << "Provenance: " << profile->provenance << "\n";
  std::cout << "\n";
  TextTable table({""});
  for (const Quantity& q : figures) table.row(q.title, q.unit == "1" ? "" : q.unit, {fixed_text(q.value, 3)});
  if (profile->fit) {
    table.rule();
    table.row("Points", "", {std::to_string(profile->points.size())});
    table.row(profile->fit->noise_estimated ? "Noise, estimated" : "Noise, stated", "mm",
              {fixed_text(profile->fit->noise_mm, 4)});
    table.row("Residual of the fit, rms", "mm", {fixed_text(profile->fit->residual_rms_mm, 4)});
    table.row("Residual of the fit, largest", "mm", {fixed_text(profile->fit->residual_max_mm, 4)});
  }
  std::cout << table.text();
  for (const Finding& f : profile->findings)
    std::cout << "Note" << (f.first_row > 0 ? ", line " + std::to_string(f.first_row) : "") << ": " << f.text << "\n";
  std::cout << "Wear limits and acceptance are for the applicable standards and licensed practice to decide.\n";
  return 0;
}

}  // namespace runband
