// Creepages of a contact and the field of rigid slip over its patch.
#include <algorithm>
#include <cmath>
#include <numeric>

#include "core/analysis/plugin.h"
#include "plugins/creepage/motion.h"
#include "plugins/creepage/strips.h"

namespace runband {
namespace {

/// Rigid slip along x of every strip, and its spin.
struct Strips {
  CommonSurface surface;  ///< flat on a bench and without the local radius
  const PatchContext* context = nullptr;
  std::optional<WheelsetMotion> motion;
  double turn_per_mm = 0;
  Creepages at_point;  ///< what the strip at s = 0 has

  double along(double s) const { return at_point.longitudinal - at_point.spin_per_mm * s + extra(s); }
  double spin(double s) const {
    if (!motion) return at_point.spin_per_mm;
    const double slope = surface.at(s).slope, length = std::hypot(1.0, slope);
    const auto& frame = context->zone.frame;
    const Vec3 tilted = (frame.col(2) - slope * frame.col(1)) / length;
    return at_point.spin_per_mm + motion->spin_per_mm(context->zone.side, tilted, turn_per_mm) -
           motion->spin_per_mm(context->zone.side, frame.col(2), turn_per_mm);
  }

 private:
  /// What the height of the strip above the tangent plane adds.
  double extra(double s) const {
    if (!motion) return 0;
    const ContactZone& zone = context->zone;
    const Vec3 raised = zone.track_mm + surface.at(s).height_mm * zone.frame.col(2);
    return (motion->slip(raised, turn_per_mm) - motion->slip(zone.track_mm, turn_per_mm)).x();
  }
};

/// Places between the first and the last strip where the slip of `strips`, raised by `offset`, is zero.
std::vector<double> pure_rolling(const Strips& strips, const Grid& g, double offset) {
  std::vector<double> places;
  for (int j = 1; j < g.ns; ++j) {
    double low = g.s(j - 1), high = g.s(j);
    const auto forward = [&](double s) { return strips.along(s) + offset > 0; };
    const bool before = forward(low);
    if (before == forward(high)) continue;
    for (int k = 0; k < 40; ++k) {
      const double half = 0.5 * (low + high);
      (forward(half) == before ? low : high) = half;
    }
    places.push_back(0.5 * (low + high));
  }
  return places;
}

/// The whole patch sliding: what is left of longitudinal creepage when its strips pass on no force together.
/// Source: H. L. Heathcote 1921, for a ball in a groove.
struct Heathcote {
  double offset = 0;      ///< to be added to the slip as it is
  double resistance = 0;  ///< mean |slip| under the pressure
};
std::optional<Heathcote> heathcote(const PatchContext& c, const std::vector<double>& along) {
  const Grid& g = c.patch.grid;
  std::vector<double> weight(along.size(), 0.0);
  double total = 0;
  for (int j = 0; j < g.ns; ++j)
    for (int i = 0; i < g.nx; ++i) {
      const double p = c.patch.pressure.values[static_cast<std::size_t>(j * g.nx + i)];
      weight[static_cast<std::size_t>(j)] += p;
      total += p;
    }
  if (!(total > 0)) return std::nullopt;
  // The median of the strips' slip, weighted by what each presses.
  std::vector<std::size_t> order(along.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return along[a] < along[b]; });
  Heathcote h;
  double below = 0, last_middle = 0, last_slip = along[order.front()];
  for (const std::size_t j : order) {
    const double middle = below + 0.5 * weight[j];
    if (middle >= 0.5 * total) {
      const double part = middle > last_middle ? (0.5 * total - last_middle) / (middle - last_middle) : 1.0;
      h.offset = -(last_slip + part * (along[j] - last_slip));
      break;
    }
    below += weight[j];
    last_middle = middle;
    last_slip = along[j];
  }
  for (std::size_t j = 0; j < along.size(); ++j) h.resistance += weight[j] * std::abs(along[j] + h.offset) / total;
  return h;
}

class Creepage final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "creepage";
    d.title = "Creepage";
    d.summary = "Longitudinal, lateral and spin creepage from the motion, and the rigid slip over the patch.";
    d.gives = {"longitudinal_creepage", "lateral_creepage", "spin", "rigid_slip"};
    d.parameters = {
        {"traction",
         "What turns the axle",
         "",
         std::string("free_rolling"),
         {},
         {},
         {"free_rolling", "torque", "creepage"},
         "free_rolling: no torque is left by the creep forces of all contacts; torque: axle_torque_Nm is; creepage: "
         "the "
         "mean of both rolling radii rolls with traction_creepage.",
         ""},
        {"axle_torque_Nm",
         "Axle torque",
         "N m",
         0.0,
         -100000.0,
         100000.0,
         {},
         "For traction = torque: positive drives, negative brakes.",
         ""},
        {"traction_creepage",
         "Creepage of traction or braking",
         "1",
         0.0,
         -0.2,
         0.2,
         {},
         "For traction = creepage: negative when the axle drives, positive when it brakes.",
         ""},
        {"local_radius",
         "Local rolling radius",
         "",
         true,
         {},
         {},
         {},
         "Every strip of the patch rolls on the radius and at the angle of its own, not all on the touching point's "
         "tangent.",
         ""}};
    d.references = {"J. J. Kalker, Three-Dimensional Elastic Bodies in Rolling Contact (1990)",
                    "Z. Y. Shen, J. K. Hedrick, J. A. Elkins, 8th IAVSD Symposium (1983)",
                    "H. L. Heathcote, Proc. Inst. Automobile Engineers 15 (1921) 569 (memory)"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress&) const override {
    AnalysisResult r;
    Strips strips;
    std::string from = "as given";
    if (!c.on_bench && c.locator != nullptr) from = set_in_motion(c, p, strips, r);
    if (c.creepage.longitudinal) strips.at_point.longitudinal = *c.creepage.longitudinal;
    if (c.creepage.lateral) strips.at_point.lateral = *c.creepage.lateral;
    if (c.creepage.spin_per_mm) strips.at_point.spin_per_mm = *c.creepage.spin_per_mm;
    const Creepages& k = strips.at_point;
    r.quantities.insert(r.quantities.begin(),
                        {{"longitudinal_creepage", "Longitudinal creepage", "1", k.longitudinal, from},
                         {"lateral_creepage", "Lateral creepage", "1", k.lateral, from},
                         {"spin", "Spin", "1/mm", k.spin_per_mm, from}});
    add_fields(c, strips, from, r);
    return r;
  }

 private:
  static std::string set_in_motion(const PatchContext& c, const Parameters& p, Strips& strips, AnalysisResult& r) {
    const std::string traction = p.text("traction");
    const double torque = p.number("axle_torque_Nm"), creepage = p.number("traction_creepage");
    const auto unused = [&](const char* key, const char* when) {
      r.cautions.push_back({"parameter_not_used", Severity::note,
                            std::string(key) + " is given but traction is \"" + traction +
                                "\"; it is used with traction = \"" + when + "\"."});
    };
    if (torque != 0 && traction != "torque") unused("axle_torque_Nm", "torque");
    if (creepage != 0 && traction != "creepage") unused("traction_creepage", "creepage");
    strips.context = &c;
    strips.motion.emplace(c);
    const bool local = p.flag("local_radius");
    if (local) strips.surface = CommonSurface(c.locator->pairing(), c.zone);
    std::string from = "motion of the wheelset, ";
    strips.turn_per_mm = (1 - creepage) / strips.motion->mean_radius_mm();
    std::optional<double> turn;
    if (traction != "creepage") turn = strips.motion->turn_for_torque(traction == "torque" ? torque : 0.0, local);
    if (turn) {
      strips.turn_per_mm = *turn;
      from += traction == "torque" ? "axle under the torque given" : "axle rolling freely";
    } else {
      if (traction != "creepage") strips.turn_per_mm = 1 / strips.motion->mean_radius_mm();
      from += "mean of both radii rolling with the creepage given";
    }
    strips.at_point = strips.motion->creepages(c.zone, strips.turn_per_mm);
    const std::string law = "Shen, Hedrick and Elkins over all contacts of the wheelset";
    if (const auto left = strips.motion->torque_Nm(strips.turn_per_mm, local))
      r.quantities.push_back({"axle_torque", "Axle torque, + drives", "N m", *left, law});
    r.quantities.push_back({"axle_creepage", "Creepage of the mean rolling radius", "1",
                            1 - strips.turn_per_mm * strips.motion->mean_radius_mm(), from});
    return from;
  }

  static void add_fields(const PatchContext& c, const Strips& strips, const std::string& from, AnalysisResult& r) {
    const Grid& g = c.patch.grid;
    Field slip{"rigid_slip", "Rigid slip", "1", Field::Kind::vector, 2, g, {}, {}, from};
    Field bands{"bands",
                "Bands of rigid slip",
                "",
                Field::Kind::label,
                1,
                g,
                {},
                {"open", "wheel slips forward", "wheel slips backward"},
                "sign of the rigid slip along x; Heathcote 1921"};
    slip.values.reserve(static_cast<std::size_t>(2 * g.cells()));
    bands.values.reserve(static_cast<std::size_t>(g.cells()));
    std::vector<double> along;
    for (int j = 0; j < g.ns; ++j) {
      along.push_back(strips.along(g.s(j)));
      const double spin = strips.spin(g.s(j));
      for (int i = 0; i < g.nx; ++i) {
        slip.values.push_back(along.back());
        slip.values.push_back(strips.at_point.lateral + spin * g.x(i));
        const bool open = !(c.patch.pressure.values[static_cast<std::size_t>(j * g.nx + i)] > 0);
        bands.values.push_back(open ? 0 : along.back() >= 0 ? 1 : 2);
      }
    }
    const auto mark = [&](const char* name, const char* title, double s, std::size_t number, const std::string& why) {
      r.marks.push_back({name + std::to_string(number), title, true, {g.x(0), g.x(g.nx - 1)}, {s, s}, why});
    };
    std::size_t number = 0;
    for (const double s : pure_rolling(strips, g, 0))
      mark("pure_rolling_", "Line of pure rolling", s, ++number, "rigid slip along x is zero");
    const auto [least, most] = std::minmax_element(along.begin(), along.end());
    if (*most > *least)
      if (const auto h = heathcote(c, along)) {
        const std::string why = "all of the patch sliding without a resulting force, Heathcote 1921";
        r.quantities.push_back({"sliding_free_creepage",
                                "Longitudinal creepage at which a sliding patch passes on no "
                                "force",
                                "1", strips.at_point.longitudinal + h->offset, why});
        r.quantities.push_back({"sliding_resistance", "Rolling resistance of a sliding patch over its normal force",
                                "1", c.friction * h->resistance, why});
        number = 0;
        for (const double s : pure_rolling(strips, g, h->offset))
          mark("sliding_pure_rolling_", "Line of pure rolling of a sliding patch", s, ++number, why);
      }
    r.fields.push_back(std::move(slip));
    r.fields.push_back(std::move(bands));
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Creepage)
