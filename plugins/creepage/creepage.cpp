// Creepages of a contact and the field of rigid slip over its patch.
#include <cmath>

#include "core/analysis/plugin.h"

namespace runband {
namespace {

struct Creepages {
  double longitudinal = 0, lateral = 0, spin_per_mm = 0;
  double bow_per_mm = 0;  ///< xi gains bow * s^2 across the patch: the local radius beyond the linear part
};

class Creepage final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "creepage";
    d.title = "Creepage";
    d.summary = "Longitudinal, lateral and spin creepage from the motion, and the rigid slip over the patch.";
    d.gives = {"longitudinal_creepage", "lateral_creepage", "spin", "rigid_slip"};
    d.parameters = {
        {"traction_creepage",
         "Creepage of traction or braking",
         "1",
         0.0,
         -0.2,
         0.2,
         {},
         "Added to the longitudinal creepage of both wheels: negative when the axle drives, positive when it brakes.",
         ""},
        {"local_radius",
         "Local rolling radius",
         "",
         true,
         {},
         {},
         {},
         "Take the bow of the contact surface across the patch into account, not its slope alone.",
         ""}};
    d.references = {"J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990)",
                    "H. L. Heathcote, Proc. Inst. Automobile Engineers 15 (1921) 569 (memory)"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress&) const override {
    Creepages k = c.on_bench ? Creepages{} : from_motion(c, p.number("traction_creepage"));
    if (!p.flag("local_radius")) k.bow_per_mm = 0;
    if (c.creepage.longitudinal) k.longitudinal = *c.creepage.longitudinal;
    if (c.creepage.lateral) k.lateral = *c.creepage.lateral;
    if (c.creepage.spin_per_mm) k.spin_per_mm = *c.creepage.spin_per_mm;

    AnalysisResult r;
    const std::string from =
        c.on_bench ? "as given" : "motion of the wheelset, axle rolling freely on the mean of both radii";
    r.quantities = {{"longitudinal_creepage", "Longitudinal creepage", "1", k.longitudinal, from},
                    {"lateral_creepage", "Lateral creepage", "1", k.lateral, from},
                    {"spin", "Spin", "1/mm", k.spin_per_mm, from}};
    Field slip{"rigid_slip", "Rigid slip", "1", Field::Kind::vector, 2, c.patch.grid, {}, {}, from};
    const Grid& g = c.patch.grid;
    slip.values.reserve(static_cast<std::size_t>(2 * g.cells()));
    for (int j = 0; j < g.ns; ++j) {
      const double s = g.s(j), along = k.longitudinal - k.spin_per_mm * s + k.bow_per_mm * s * s;
      for (int i = 0; i < g.nx; ++i) {
        slip.values.push_back(along);
        slip.values.push_back(k.lateral + k.spin_per_mm * g.x(i));
      }
    }
    r.fields.push_back(std::move(slip));
    r.marks = pure_rolling(c, k);
    return r;
  }

 private:
  static Creepages from_motion(const PatchContext& c, double traction) {
    const double sign = side_sign(c.zone.side);
    const RigidContact rigid = c.locator->rigid(c.pose.lateral_mm, c.pose.yaw_rad, c.pose.reference);
    const double mean = 0.5 * (rigid.touch[0].rolling_radius_mm + rigid.touch[1].rolling_radius_mm);
    const double radius = c.zone.rolling_radius_mm, angle = c.zone.contact_angle_rad;
    const double turn_per_mm = c.motion.curve_radius_m == 0 ? 0 : 1e-3 / c.motion.curve_radius_m;
    Creepages k;
    // The wheel over the inner rail has less way to go: V_i = V (1 - y / R), y positive to the left.
    k.longitudinal = 1 - c.zone.track_mm.y() * turn_per_mm - radius / mean * std::cos(c.pose.yaw_rad) + traction;
    // A wheelset yawed about z rolls across the track; it follows the rail's tangent without leaving it.
    k.lateral = -sign * std::sin(c.pose.yaw_rad) * radius / mean / std::cos(angle);
    k.spin_per_mm = -std::sin(angle) / mean + sign * std::cos(angle) * turn_per_mm;
    k.bow_per_mm =
        0.25 * std::cos(angle) * (c.zone.curvature.wheel_across_per_mm - c.zone.curvature.rail_across_per_mm) / mean;
    return k;
  }

  /// Lines s = const on which the rigid slip along x vanishes.
  static std::vector<Mark> pure_rolling(const PatchContext& c, const Creepages& k) {
    const Grid& g = c.patch.grid;
    const double low = g.s(0), high = g.s(g.ns - 1);
    std::vector<double> places;
    if (k.bow_per_mm == 0) {
      if (k.spin_per_mm != 0) places.push_back(k.longitudinal / k.spin_per_mm);
    } else {
      const double root = k.spin_per_mm * k.spin_per_mm - 4 * k.bow_per_mm * k.longitudinal;
      if (root >= 0)
        for (const double side : {-1.0, 1.0})
          places.push_back((k.spin_per_mm + side * std::sqrt(root)) / (2 * k.bow_per_mm));
    }
    std::vector<Mark> marks;
    for (const double s : places) {
      if (!(s > low) || !(s < high)) continue;
      marks.push_back({"pure_rolling_" + std::to_string(marks.size() + 1),
                       "Line of pure rolling",
                       true,
                       {g.x(0), g.x(g.nx - 1)},
                       {s, s},
                       "rigid slip along x is zero"});
    }
    return marks;
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Creepage)
