#include "core/profile/profile.h"

#include <algorithm>
#include <cmath>

#include "core/base/error.h"
#include "core/base/file.h"
#include "core/base/text.h"
#include "core/profile/checks.h"
#include "core/profile/checksum.h"
#include "core/profile/definition.h"
#include "core/profile/points_file.h"
#include "core/profile/smoothing.h"

namespace runband {

namespace {

namespace fs = std::filesystem;

constexpr std::string_view kStandardPrefix = "standard:";

std::vector<fs::path> standard_files() {
  std::vector<fs::path> files;
  std::error_code failed;
  for (const auto& entry : fs::directory_iterator(data_folder() / "standards", failed))
    if (entry.path().extension() == ".toml") files.push_back(entry.path());
  std::sort(files.begin(), files.end());
  return files;
}

fs::path standard_file(const std::string& name) {
  std::vector<std::string> known;
  for (const fs::path& file : standard_files()) {
    known.push_back(file.stem().string());
    if (known.back() == name) return file;
  }
  const std::string near = nearest_name(name, known);
  throw InputError(ErrorCode::unknown_name, "standard:" + name + ": there is no such standard profile.",
                   (near.empty() ? "" : "did you mean 'standard:" + near + "'? ") + std::string("There are ") +
                       join_names(known) + ".");
}

std::shared_ptr<const Profile> load_definition(const std::string& bytes, const fs::path& file,
                                               const std::string& origin, ProfileKind kind) {
  Profile profile = parse_definition(bytes, origin, kind);
  profile.checksum = checksum(bytes);
  if (profile.title.empty()) profile.title = file.stem().string();
  return std::make_shared<const Profile>(std::move(profile));
}

// Where points lie farther from the curve than their noise explains.
void report_poor_fit(const CheckedPoints& in, const std::vector<double>& residuals, const ProfileFit& fit,
                     std::vector<Finding>& findings) {
  if (!(fit.noise_mm > 0.0)) return;
  // One in a billion points of pure noise stands out so far (6.1 standard deviations).
  constexpr double kFarOff = 6.1;
  for (std::size_t i = 0; i < residuals.size(); ++i)
    if (std::abs(residuals[i]) > kFarOff * fit.noise_mm)
      findings.push_back({"far_point",
                          "the point is " + number_text(std::abs(residuals[i]), 2) + " mm off the fitted curve, " +
                              number_text(std::abs(residuals[i]) / fit.noise_mm, 2) + " times the noise.",
                          in.rows[i], in.points[i]});
  // Twenty points in a row whose squares add up to what noise reaches once in a million (chi-squared, 20 degrees).
  constexpr std::size_t kRun = 20;
  constexpr double kRunLimit = 66.5;
  double sum = 0.0;
  std::size_t reported_to = 0;
  for (std::size_t i = 0; i < residuals.size(); ++i) {
    const auto square = [&](std::size_t k) { return std::pow(residuals[k] / fit.noise_mm, 2); };
    sum += square(i);
    if (i >= kRun) sum -= square(i - kRun);
    if (i + 1 < kRun || sum < kRunLimit || i < reported_to) continue;
    findings.push_back({"poor_fit",
                        "points around y = " + number_text(in.points[i - kRun / 2].x(), 4) + " mm scatter " +
                            number_text(std::sqrt(sum / kRun), 2) +
                            " times as much as the noise allows; the curve is uncertain there.",
                        in.rows[i - kRun + 1], in.points[i - kRun / 2]});
    reported_to = i + kRun;
  }
}

// Points in the profile frame, mm, to a fitted and checked profile.
void finish(Profile& profile, CheckedPoints&& in, std::optional<double> noise_mm) {
  put_in_order(in);
  check_count(in);
  check_spikes(in);
  check_gaps(in);
  check_crossing(in);
  check_origin(in);
  profile.findings = std::move(in.findings);
  if (noise_mm && *noise_mm == 0.0) {
    profile.curve = std::make_shared<SplineCurve>(interpolating_spline(in.points));
    profile.fit = ProfileFit{};
    profile.fit->effective_parameters = static_cast<double>(in.points.size());
  } else {
    SmoothedCurve smoothed = smooth_points(in.points, noise_mm);
    report_poor_fit(in, smoothed.residuals_mm, smoothed.fit, profile.findings);
    profile.curve = std::make_shared<SplineCurve>(std::move(smoothed.curve));
    profile.fit = smoothed.fit;
  }
  check_coverage(*profile.curve, profile.kind, profile.origin);
  profile.points = std::move(in.points);
}

void require_noise(const std::string& where, double noise_mm) {
  if (!(noise_mm >= 0.0 && noise_mm <= 1.0))
    throw out_of_range(where, "noise_mm", noise_mm, "mm", "from 0 (exact points) to 1");
}

std::shared_ptr<const Profile> load_points(const std::string& bytes, const fs::path& file, ProfileKind kind,
                                           const ProfileOptions& options) {
  PointsFile points = parse_points(bytes, file.string());
  Profile profile;
  profile.kind = kind;
  profile.origin = file.string();
  profile.title = points.title.empty() ? file.stem().string() : points.title;
  profile.source = points.source.empty() ? "points in " + file.filename().string() : points.source;
  profile.provenance = "points in " + file.filename().string();
  profile.checksum = checksum(bytes);
  const std::optional<double> noise = options.noise_mm ? options.noise_mm : points.noise_mm;
  if (noise) require_noise(profile.origin, *noise);
  if (!options.unit.empty() && !points.unit.empty() && options.unit != points.unit)
    throw InputError(
        ErrorCode::profile_wrong_unit,
        profile.origin + ": the file says its unit is " + points.unit + ", the option says " + options.unit + ".",
        "state the unit once, or twice alike.");
  CheckedPoints in{profile.origin, kind, std::move(points.values), std::move(points.rows), {}};
  const auto either = [](const std::string& option, const std::string& stated) {
    return option.empty() ? stated : option;
  };
  check_count(in);
  to_millimetres(in, either(options.unit, points.unit));
  to_profile_frame(in, either(options.y_axis, points.y_axis), either(options.z_axis, points.z_axis));
  finish(profile, std::move(in), noise);
  return std::make_shared<const Profile>(std::move(profile));
}

}  // namespace

std::shared_ptr<const Profile> load_profile(const std::string& spec, ProfileKind kind, const ProfileOptions& options,
                                            const fs::path& base_folder) {
  const bool standard = spec.starts_with(kStandardPrefix);
  const fs::path file = standard ? standard_file(spec.substr(kStandardPrefix.size())) : base_folder / spec;
  const std::string bytes = read_file(file);
  if (file.extension() != ".toml") return load_points(bytes, file, kind, options);
  return load_definition(bytes, file, standard ? spec : file.string(), kind);
}

std::shared_ptr<const Profile> profile_from_points(std::vector<Vec2> points, ProfileKind kind, double noise_mm,
                                                   const std::string& name) {
  require_noise(name, noise_mm);
  CheckedPoints in{name, kind, std::move(points), {}, {}};
  for (std::size_t i = 0; i < in.points.size(); ++i) {
    in.rows.push_back(static_cast<long>(i) + 1);
    if (!in.points[i].allFinite())
      throw InputError(ErrorCode::profile_not_a_number, in.place(i) + ": the point is not a pair of finite numbers.",
                       "remove it.");
  }
  check_count(in);
  Profile profile;
  profile.kind = kind;
  profile.title = profile.origin = name;
  profile.source = profile.provenance = "points given";
  finish(profile, std::move(in), noise_mm);
  return std::make_shared<const Profile>(std::move(profile));
}

std::vector<std::pair<std::string, std::string>> standard_profiles() {
  std::vector<std::pair<std::string, std::string>> names;
  for (const fs::path& file : standard_files()) {
    const std::string bytes = read_file(file);
    const bool wheel = bytes.find("\nkind = \"wheel\"") != std::string::npos;
    names.emplace_back(file.stem().string(),
                       parse_definition(bytes, file.string(), wheel ? ProfileKind::wheel : ProfileKind::rail).title);
  }
  return names;
}

}  // namespace runband
