// From a case to its solution, one direction: profiles, pairing, zones, patches.
#include <chrono>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/patch/half_space_patch.h"
#include "core/solve/solution.h"
#include "core/solve/wheelset_analyses.h"

namespace runband {

namespace {

using Clock = std::chrono::steady_clock;

double since_ms(Clock::time_point start) {
  return std::chrono::duration<double, std::milli>(Clock::now() - start).count();
}

bool same(const ProfileRequest& a, const ProfileRequest& b) {
  return a.profile == b.profile && a.options.noise_mm == b.options.noise_mm && a.options.unit == b.options.unit &&
         a.options.y_axis == b.options.y_axis && a.options.z_axis == b.options.z_axis;
}

std::array<std::shared_ptr<const Profile>, 2> load_pair(const ProfileRequest (&requests)[2], ProfileKind kind,
                                                        const Case& c) {
  std::array<std::shared_ptr<const Profile>, 2> pair;
  pair[0] = load_profile(requests[0].profile, kind, requests[0].options, c.folder);
  pair[1] =
      same(requests[0], requests[1]) ? pair[0] : load_profile(requests[1].profile, kind, requests[1].options, c.folder);
  return pair;
}

void add_findings(const Profile& profile, const std::string& who, std::vector<Caution>& cautions) {
  for (const Finding& finding : profile.findings)
    cautions.push_back({finding.code, Severity::note, who + ": " + finding.text});
}

/// The ellipse on a bench: one contact given by its curvatures.
Contact bench_contact(const Case& c) {
  const BenchRequest& bench = *c.bench;
  Contact contact;
  contact.on_bench = true;
  ContactZone& zone = contact.zone;
  zone.zone = "bench";
  zone.carries_load = true;
  zone.normal_force_N = bench.normal_force_N;
  if (!bench.gap_file.empty()) return contact;
  zone.curvature.rolling_per_mm = bench.curvature_rolling_per_mm;
  zone.curvature.wheel_across_per_mm = bench.curvature_across_per_mm;
  zone.curvature.across_per_mm = bench.curvature_across_per_mm;
  zone.rolling_radius_mm = 1.0 / bench.curvature_rolling_per_mm;
  zone.ellipse =
      hertz_ellipse(bench.curvature_rolling_per_mm, bench.curvature_across_per_mm, bench.normal_force_N, c.material);
  return contact;
}

/// The elastic half-space for every loaded contact; zones that press on each other share one patch.
void solve_half_spaces(Solution& solution, const Progress& progress) {
  const Case& c = solution.asked;
  if (c.bench) {
    const BenchRequest& bench = *c.bench;
    if (bench.gap_file.empty()) {
      solution.contacts.front().patch = half_space_patch(bench.curvature_rolling_per_mm, bench.curvature_across_per_mm,
                                                         bench.normal_force_N, c.material, c.patch, progress);
    } else {
      solution.contacts.front().patch = half_space_patch(read_gap_grid(c.folder / bench.gap_file), bench.normal_force_N,
                                                         c.material, c.patch, progress);
    }
    return;
  }
  std::vector<ContactZone> zones;
  for (const Contact& contact : solution.contacts) zones.push_back(contact.zone);
  const auto groups = zones_solved_together(zones);
  double done = 0;
  for (const auto& group : groups) {
    progress.at(0.3 + 0.5 * done++ / static_cast<double>(groups.size()), "solving the patch");
    Contact& leader = solution.contacts[group.front()];
    leader.patch = half_space_patch(*solution.locator, zones, group, solution.pose, c.material, c.patch, progress);
    for (std::size_t k = 1; k < group.size(); ++k) {
      solution.contacts[group[k]].zone.cautions.push_back(
          {"patch_shared", Severity::note,
           "Its load is part of the patch of the " + leader.zone.zone + " zone beside it, which it overlaps."});
    }
  }
}

void solve_patches(Solution& solution, const Progress& progress) {
  if (solution.asked.patch.method == PatchMethod::half_space) return solve_half_spaces(solution, progress);
  for (Contact& contact : solution.contacts) {
    if (!contact.zone.carries_load) continue;
    const auto start = Clock::now();
    contact.patch = hertz_patch(*contact.zone.ellipse, solution.asked.patch);
    contact.patch->solve_ms = since_ms(start);
  }
}

Motion motion_of(const Case& c) {
  return {c.state.speed_m_s, c.state.yaw_mrad * 1e-3, c.track.curve_radius_m, c.track.cant_mm};
}

/// Every analysis of every loaded contact, then those of the wheelset as a whole.
void run_analyses(Solution& solution, const AnalysisChoice& choice, const Progress& progress) {
  const Case& c = solution.asked;
  std::vector<ContactZone> zones;
  for (const Contact& contact : solution.contacts) zones.push_back(contact.zone);
  for (Contact& contact : solution.contacts) {
    if (!contact.patch) continue;
    progress.at(0.85, "analyses");
    const PatchContext context{contact.on_bench,
                               contact.zone,
                               *contact.patch,
                               c.material,
                               c.friction,
                               motion_of(c),
                               c.creepage,
                               solution.pose,
                               solution.locator.get(),
                               {},
                               c.bench ? nullptr : &zones};
    contact.analyses = choice.registry->run(context, choice.with, c.analyses, progress);
  }
  if (solution.locator) solution.analyses = analyses_of_wheelset(c, *solution.locator, solution.pose, choice, progress);
}

}  // namespace

std::map<std::string, AnalysisResult> analyses_of_wheelset(const Case& c, const Locator& locator,
                                                           const WheelsetPose& pose, const AnalysisChoice& choice,
                                                           const Progress& progress) {
  const WheelsetContext context{locator, c.state.reference, pose, motion_of(c), c.load, {}};
  return choice.registry->run(context, choice.with, c.analyses, progress);
}

void refuse_missing_analyses(const Case& c, const AnalysisRegistry& registry) {
  std::vector<std::string> names;
  for (const Description& d : registry.descriptions()) names.push_back(d.id);
  for (const auto& [id, parameters] : c.analyses) {
    if (registry.find(id) != nullptr) continue;
    const std::string near = nearest_name(id, names);
    throw InputError(ErrorCode::unknown_name,
                     c.origin + ": analyses." + id + ": no analysis of this name is installed.",
                     near.empty() ? "`runband analyses` lists what is there." : "did you mean " + near + "?");
  }
}

void add_plugin_problems(const AnalysisRegistry& registry, std::vector<Caution>& cautions) {
  for (const PluginProblem& problem : registry.problems())
    cautions.push_back({"plugin_not_used", Severity::warning, problem.file.string() + ": " + problem.text});
}

std::shared_ptr<const Locator> prepare(const Case& c) {
  if (c.bench) return nullptr;
  auto pairing = std::make_shared<const Pairing>(load_pair(c.wheels, ProfileKind::wheel, c),
                                                 load_pair(c.rails, ProfileKind::rail, c), c.track, c.wheelset);
  return std::make_shared<const Locator>(std::move(pairing));
}

Solution solve(const Case& c, const Progress& progress, const AnalysisChoice& choice) {
  if (!c.bench) progress.at(0.0, "reading profiles");
  return solve(c, prepare(c), progress, choice);
}

Solution solve(const Case& c, std::shared_ptr<const Locator> locator, const Progress& progress,
               const AnalysisChoice& choice) {
  const auto start = Clock::now();
  refuse_missing_analyses(c, *choice.registry);
  Solution solution;
  solution.asked = c;
  solution.locator = std::move(locator);
  if (c.bench) {
    solution.contacts.push_back(bench_contact(c));
  } else {
    progress.at(0.2, "locating contacts");
    const Located located = solution.locator->loaded(c.state.lateral_mm.front(), c.state.yaw_mrad * 1e-3,
                                                     c.state.reference, c.load, c.material);
    solution.pose = located.pose;
    solution.cautions = located.cautions;
    for (const ContactZone& zone : located.zones) solution.contacts.emplace_back().zone = zone;
    const Pairing& pairing = solution.locator->pairing();
    for (const Side side : {Side::left, Side::right}) {
      add_findings(pairing.wheel(side), std::string(side_name(side)) + " wheel", solution.cautions);
      add_findings(pairing.rail(side), std::string(side_name(side)) + " rail", solution.cautions);
    }
  }
  solve_patches(solution, progress);
  for (Contact& contact : solution.contacts) {
    if (!contact.patch) continue;
    auto& cautions = contact.zone.cautions;
    cautions.insert(cautions.end(), contact.patch->cautions.begin(), contact.patch->cautions.end());
  }
  run_analyses(solution, choice, progress);
  add_plugin_problems(*choice.registry, solution.cautions);
  solution.cautions.push_back(
      {"no_acceptance", Severity::note,
       "Nothing here is a safety acceptance; the applicable standards and licensed practice decide."});
  solution.solve_ms = since_ms(start);
  progress.at(1.0, "solved");
  return solution;
}

}  // namespace runband
