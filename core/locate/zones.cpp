// Contact under load: every zone within the elastic approach, curvatures fitted over each patch, the wheel's load
// shared.
#include <algorithm>
#include <cmath>
#include <vector>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/locate/curvature.h"
#include "core/locate/normal_gap.h"
#include "core/locate/tables.h"

namespace runband {

namespace {

constexpr double kMisfit = 0.05;  // beyond it the patch is not the ellipse it is taken for
constexpr double kTurn = 0.25;    // patch half-width over smallest radius beyond which a half-space is doubtful
constexpr double kSmallestHalf_mm = 0.02;
constexpr double kLargestHalf_mm = 40.0;
constexpr double kFlange = 0.75;     // of the steepest angle of the wheel's flange: the flange proper
constexpr double kTread_rad = 0.15;  // treads are flatter than this
constexpr double kNear = 2.0;        // zones up to this many wheel displacements away are reported

// A zone on its way to its share of the load.
struct Candidate {
  Touch touch;
  CurvatureWindow window;
  double cosine = 1;  // of the contact angle
  double gap = 0;     // along the normal
  double force = 0;
  double half_width = 1;
  WindowFit fit;
  // Secant acceleration of half_width -> ellipse -> half_width, in logarithms.
  double last_x = 0, last_residual = 0;
  bool has_last = false;

  Candidate(const SideGeometry& geometry, const SidePose& pose, const Touch& t)
      : touch(t), window(geometry, pose, t), cosine(t.tangent.x()) {
    const Vec3 origin(t.wheel.x(), t.rail.x(), t.rail.y());
    const NormalGap normal(geometry, pose, origin, t.tangent);
    NormalGap::OnWheel wheel{t.t, t.gap * cosine};
    gap = normal.find(0.0, 0.0, wheel) ? wheel.height : t.gap * cosine;
  }

  // One round: fit over the present window, then a better window. Returns the relative change that is still needed.
  double round(double at_force, const MaterialPair& material) {
    fit = window.fit(half_width);
    const HertzEllipse ellipse =
        hertz_ellipse(fit.curvature.rolling_per_mm, fit.curvature.across_per_mm, at_force, material);
    const double wanted = std::clamp(ellipse.semi_axis_across_mm, kSmallestHalf_mm, kLargestHalf_mm);
    const double x = std::log(half_width), residual = std::log(wanted) - x;
    double pace = 1.0;
    if (has_last && std::abs(x - last_x) > 1e-14) {
      const double slope = (residual - last_residual) / (x - last_x);
      pace = slope < -0.25 ? std::clamp(-1.0 / slope, 0.1, 3.0) : 0.5;
    }
    last_x = x;
    last_residual = residual;
    has_last = true;
    half_width = std::clamp(std::exp(x + std::clamp(pace * residual, -1.5, 1.5)), kSmallestHalf_mm, kLargestHalf_mm);
    return std::abs(residual);
  }

  double force_per_power(const MaterialPair& material) const {
    return hertz_force_N(fit.curvature.rolling_per_mm, fit.curvature.across_per_mm, 1.0, material);
  }
  // The zone alone under the whole load; its approach.
  double carry_alone(double vertical, const MaterialPair& material) {
    force = vertical / cosine;
    has_last = false;
    for (int k = 0; k < 40 && round(force, material) > 1e-9; ++k) {
    }
    return std::pow(force / force_per_power(material), 2.0 / 3.0);
  }
};

double distance(const Candidate& a, const Candidate& b) { return (a.touch.rail - b.touch.rail).norm(); }

// Vertical displacement of the wheel at which the zones together carry the load. Rising and convex, so Newton's method
// from above descends without overshoot; halving stands behind it.
double wheel_displacement(const std::vector<Candidate>& zones, const std::vector<double>& factor, double vertical) {
  const auto carried = [&](double delta, double& slope) {
    double sum = 0.0;
    slope = 0.0;
    for (std::size_t i = 0; i < zones.size(); ++i) {
      const double in = delta * zones[i].cosine - zones[i].gap;
      if (in <= 0.0) continue;
      sum += factor[i] * in * std::sqrt(in) * zones[i].cosine;
      slope += 1.5 * factor[i] * std::sqrt(in) * zones[i].cosine * zones[i].cosine;
    }
    return sum;
  };
  double high = INFINITY;
  for (std::size_t i = 0; i < zones.size(); ++i)
    high =
        std::min(high, (std::pow(vertical / zones[i].cosine / factor[i], 2.0 / 3.0) + zones[i].gap) / zones[i].cosine);
  double low = 0.0, delta = high;
  for (int k = 0; k < 100; ++k) {
    double slope = 0.0;
    const double excess = carried(delta, slope) - vertical;
    if (std::abs(excess) < 1e-13 * vertical) break;
    (excess > 0.0 ? high : low) = delta;
    double next = slope > 0.0 ? delta - excess / slope : 0.5 * (low + high);
    if (!(next > low && next < high)) next = 0.5 * (low + high);
    if (std::abs(next - delta) < 1e-16) break;
    delta = next;
  }
  return delta;
}

// Shares the load; returns the wheel's displacement.
double share_load(std::vector<Candidate>& zones, double vertical, const MaterialPair& material) {
  std::vector<double> factor(zones.size());
  double delta = 0.0;
  for (Candidate& zone : zones) zone.has_last = false;
  for (int k = 0; k < 80; ++k) {
    double change = 0.0;
    for (std::size_t i = 0; i < zones.size(); ++i) {
      const double left = zones[i].round(std::max(zones[i].force, 1e-6 * vertical), material);
      if (zones[i].force > 0.0) change = std::max(change, left);
      factor[i] = zones[i].force_per_power(material);
    }
    delta = wheel_displacement(zones, factor, vertical);
    for (std::size_t i = 0; i < zones.size(); ++i) {
      const double in = delta * zones[i].cosine - zones[i].gap;
      const double force = in > 0.0 ? factor[i] * in * std::sqrt(in) : 0.0;
      change = std::max(change, std::abs(force - zones[i].force) / vertical);
      zones[i].force = force;
    }
    if (change < 1e-9) break;
  }
  return delta;
}

// Minima that lie within one another's patch are one contact: a waviness that the load flattens.
std::vector<Candidate> merged(std::vector<Candidate> all, double vertical, const MaterialPair& material,
                              double& displacement) {
  std::sort(all.begin(), all.end(), [](const Candidate& a, const Candidate& b) { return a.touch.gap < b.touch.gap; });
  std::vector<Candidate> kept;
  displacement = INFINITY;
  for (Candidate& zone : all) {
    const bool covered = std::any_of(kept.begin(), kept.end(),
                                     [&](const Candidate& other) { return distance(zone, other) < other.half_width; });
    if (covered || zone.touch.gap > kNear * displacement) continue;
    const double approach = zone.carry_alone(vertical, material);
    displacement = std::min(displacement, (approach + zone.gap) / zone.cosine);
    kept.push_back(std::move(zone));
  }
  std::erase_if(kept, [&](const Candidate& zone) { return zone.touch.gap > kNear * displacement; });
  // From the field side to the flange.
  std::sort(kept.begin(), kept.end(), [](const Candidate& a, const Candidate& b) { return a.touch.t > b.touch.t; });
  return kept;
}

std::string zone_name(const SideGeometry& geometry, double wheel_y, double angle) {
  const double steepest = geometry.flange_angle();
  if (wheel_y > 0.5 * geometry.field_end_y() || angle < -kTread_rad) return "field side";
  if (angle > kTread_rad && angle > kFlange * steepest) return "flange";
  if (angle > kTread_rad) return "flange root";
  return "tread";
}

std::string millimetres(double value) { return number_text(value, 3) + " mm"; }

void describe_trouble(const Candidate& c, ContactZone& zone) {
  const auto caution = [&](const char* code, const std::string& text) {
    zone.cautions.push_back({code, Severity::caution, text});
  };
  if (c.touch.at_edge)
    caution(
        "edge_contact",
        "an edge or an end of a profile touches here; pressure at an edge is not Hertz's, take it as a lower bound.");
  if (c.fit.conforming)
    caution(
        "conforming",
        "wheel and rail fit into each other over the whole patch, so that Hertz's ellipse is only a stand-in; solve "
        "this patch with the half-space method.");
  if (c.fit.cut_off && !c.touch.at_edge)
    caution("profile_ends", "a profile ends, or turns out of sight, inside the patch; measure it further.");
  if (zone.curvature.misfit > kMisfit)
    caution("not_hertzian", "the gap departs from its parabola by " + number_text(100.0 * zone.curvature.misfit, 2) +
                                " % of the approach over the patch (stated limit " + number_text(100.0 * kMisfit, 2) +
                                " %); solve this patch with the half-space method.");
  if (c.half_width > kTurn * c.fit.smallest_radius_mm)
    caution("half_space_doubtful", "the patch is " + millimetres(2.0 * c.half_width) +
                                       " wide against a smallest radius of " + millimetres(c.fit.smallest_radius_mm) +
                                       "; a flat half-space is a poor stand-in for such a body.");
}

ContactZone describe(const SideGeometry& geometry, Side side, const Candidate& c, const MaterialPair& material) {
  const double sign = side_sign(side);
  const CurvePoint wheel = geometry.wheel().at(c.touch.t), rail = geometry.rail().at(c.touch.tau);
  ContactZone zone;
  zone.side = side;
  zone.wheel_y_mm = wheel.y();
  zone.wheel_z_mm = wheel.z();
  zone.rail_y_mm = rail.y();
  zone.rail_z_mm = rail.z();
  zone.track_mm = Vec3(c.touch.wheel.x(), sign * c.touch.rail.x(), c.touch.rail.y());
  const Vec2& s = c.touch.tangent;
  zone.frame.col(0) = Vec3::UnitX();
  zone.frame.col(1) = Vec3(0.0, sign * s.x(), s.y());
  zone.frame.col(2) = Vec3(0.0, -sign * s.y(), s.x());
  zone.contact_angle_rad = std::atan2(s.y(), s.x());
  zone.rolling_radius_mm = geometry.rolling_radius(wheel.z());
  zone.zone = zone_name(geometry, zone.wheel_y_mm, zone.contact_angle_rad);
  zone.gap_mm = c.gap;
  zone.normal_force_N = c.force;
  zone.carries_load = c.force > 0.0;
  zone.curvature = c.fit.curvature;
  if (zone.carries_load) {
    zone.ellipse = hertz_ellipse(zone.curvature.rolling_per_mm, zone.curvature.across_per_mm, c.force, material);
    zone.curvature.misfit = c.fit.deviation_mm / zone.ellipse->approach_mm;
    describe_trouble(c, zone);
  }
  return zone;
}

// Where the wheel, sunk by a good part of its displacement, would also meet the rail outside the patches: the contact
// is wider than its zones, as in a flange root that fits the rail's corner.
void describe_spread(const SideGeometry& geometry, const SearchSpace& space, const std::vector<Candidate>& zones,
                     double displacement, std::vector<ContactZone*> described) {
  constexpr double kSunk = 0.3, kOutside = 1.7;
  for (Eigen::Index i = 0; i < space.gap.size(); ++i) {
    if (!(space.gap[i] < kSunk * displacement)) continue;
    const Vec2 place(space.u[i], space.v[i]);
    std::size_t nearest = zones.size();
    double nearness = INFINITY;
    for (std::size_t k = 0; k < zones.size(); ++k) {
      if (zones[k].force <= 0.0) continue;
      const double off = (place - zones[k].touch.wheel.tail<2>()).norm() / zones[k].half_width;
      if (off < nearness) nearness = off, nearest = k;
    }
    if (nearness < kOutside || nearest == zones.size() || !described[nearest]) continue;
    described[nearest]->cautions.push_back(
        {"contact_spreads", Severity::caution,
         "under this load the wheel also meets the rail outside the patch, near y = " +
             number_text(geometry.wheel_y_at(i), 4) +
             " mm on the wheel, without a touching point of its own; solve this patch with the half-space method."});
    described[nearest] = nullptr;
  }
}

// A wheel that stands on steep ground alone would slide off it unless something pushes it there.
void describe_lateral_balance(Side side, double vertical, std::vector<ContactZone>& zones, std::size_t first) {
  constexpr double kSteep_rad = 0.5;  // no tread is that steep
  double lateral = 0.0, flattest = INFINITY;
  for (std::size_t k = first; k < zones.size(); ++k) {
    if (!zones[k].carries_load) continue;
    flattest = std::min(flattest, std::abs(zones[k].contact_angle_rad));
    lateral += zones[k].normal_force_N * std::sin(zones[k].contact_angle_rad);
  }
  if (!(flattest > kSteep_rad) || !std::isfinite(flattest)) return;
  const std::string text = std::string("the ") + side_name(side) +
                           " wheel stands on its flange alone, and its normal force follows from the " +
                           "vertical load of " + number_text(vertical, 6) +
                           " N only; without friction it would take a lateral force of " +
                           number_text(std::abs(lateral), 3) +
                           " N on that wheel to hold it there, which nothing here applies or checks. Judge the "
                           "position by the lateral force.";
  for (std::size_t k = first; k < zones.size(); ++k)
    if (zones[k].carries_load) zones[k].cautions.push_back({"lateral_not_balanced", Severity::caution, text});
}

void describe_overlaps(std::vector<ContactZone>& zones) {
  for (std::size_t i = 0; i + 1 < zones.size(); ++i)
    for (std::size_t k = i + 1; k < zones.size(); ++k) {
      ContactZone &a = zones[i], &b = zones[k];
      if (a.side != b.side || !a.carries_load || !b.carries_load) continue;
      const double apart = (a.track_mm - b.track_mm).tail<2>().norm();
      if (apart >= a.ellipse->semi_axis_across_mm + b.ellipse->semi_axis_across_mm) continue;
      const Caution caution{"patches_overlap", Severity::caution,
                            "the " + a.zone + " and " + b.zone + " patches of the " + side_name(a.side) +
                                " wheel lie " + millimetres(apart) +
                                " apart, nearer than they are wide, and press on each other; solve them together with "
                                "the half-space method."};
      a.cautions.push_back(caution);
      b.cautions.push_back(caution);
    }
}

}  // namespace

Located Locator::loaded(double lateral_mm, double yaw_rad, LateralReference reference, const WheelLoads& loads,
                        const MaterialPair& material) const {
  Located located;
  located.pose = rigid(lateral_mm, yaw_rad, reference).pose;
  SearchSpace space;
  for (const Side side : {Side::left, Side::right}) {
    const double vertical = loads.vertical_N[side == Side::left ? 0 : 1];
    require_positive("load", std::string(side_name(side)) + "_N", vertical, "N");
    const SideGeometry& geometry = tables_->side(side);
    const SidePose pose = tables_->seen_from(side, located.pose);
    // No contact of steel is deeper than this; what is too far away is dropped once the displacement is known.
    constexpr double kDeepest_mm = 3.0;
    std::vector<Candidate> all;
    for (const Touch& touch : geometry.minima(pose, space, kDeepest_mm))
      if (touch.tangent.x() > 0.01) all.emplace_back(geometry, pose, touch);
    double displacement = 0.0;
    std::vector<Candidate> zones = merged(std::move(all), vertical, material, displacement);
    displacement = share_load(zones, vertical, material);
    std::erase_if(zones, [&](const Candidate& c) { return c.force <= 0.0 && c.gap > kNear * displacement * c.cosine; });
    const std::size_t first = located.zones.size();
    for (const Candidate& zone : zones) located.zones.push_back(describe(geometry, side, zone, material));
    std::vector<ContactZone*> described;
    for (std::size_t k = first; k < located.zones.size(); ++k) described.push_back(&located.zones[k]);
    describe_spread(geometry, space, zones, displacement, described);
    describe_lateral_balance(side, vertical, located.zones, first);
  }
  describe_overlaps(located.zones);
  return located;
}

}  // namespace runband
