#include "core/halfspace/simplified.h"

#include <Eigen/Core>
#include <algorithm>
#include <cmath>
#include <numbers>

#include "core/base/error.h"
#include "core/halfspace/rolling_grid.h"

namespace runband::halfspace {
namespace {

constexpr int kLanes = 32;
using Lanes = Eigen::Array<double, kLanes, 1>;
constexpr double kTiny = 1e-290;

void check(const SimplifiedEllipse& e) {
  const char* where = "simplified theory";
  require_positive(where, "semi-axis along rolling", e.semi_axis_rolling_mm, "mm");
  require_positive(where, "semi-axis across", e.semi_axis_across_mm, "mm");
  require_positive(where, "normal force", e.normal_force_N, "N");
  require_positive(where, "flexibility L1", e.flexibility.longitudinal, "mm/MPa");
  require_positive(where, "flexibility L2", e.flexibility.lateral, "mm/MPa");
  require_positive(where, "flexibility L3", e.flexibility.spin, "mm/MPa");
  if (!(e.friction >= 0 && std::isfinite(e.friction))) {
    throw out_of_range(where, "friction coefficient", e.friction, "", "finite and not negative");
  }
  for (const double v : {e.longitudinal, e.lateral, e.spin_per_mm}) {
    if (!std::isfinite(v)) throw out_of_range(where, "creepage", v, "", "finite");
  }
  for (const int n : {e.strips, e.elements}) {
    if (n < 1 || n > 4096) throw out_of_range(where, "number of strips or elements", n, "", "1 to 4096");
  }
}

}  // namespace

Flexibility flexibility(double semi_axis_rolling_mm, double semi_axis_across_mm, double shear_modulus_MPa,
                        const CreepCoefficients& c) {
  require_positive("simplified theory", "semi-axis along rolling", semi_axis_rolling_mm, "mm");
  require_positive("simplified theory", "semi-axis across", semi_axis_across_mm, "mm");
  require_positive("simplified theory", "shear modulus", shear_modulus_MPa, "MPa");
  const double a = semi_axis_rolling_mm, g = shear_modulus_MPa;
  return {8 * a / (3 * g * c.c11), 8 * a / (3 * g * c.c22),
          std::numbers::pi * a * a / (4 * g * std::sqrt(a * semi_axis_across_mm) * c.c23)};
}

SimplifiedForces simplified_forces(const SimplifiedEllipse& e) {
  check(e);
  const double a = e.semi_axis_rolling_mm, b = e.semi_axis_across_mm, pi = std::numbers::pi;
  const bool elliptic = e.bound == TractionBound::elliptic;
  const double peak = e.friction * e.normal_force_N / (pi * a * b) * (elliptic ? 1.5 : 2.0);
  const double ds = 2 * b / e.strips, step = 2.0 / e.elements;  // step of x / a(s)
  const double wx = e.longitudinal / e.flexibility.longitudinal, ws = e.lateral / e.flexibility.lateral;
  const double spin = e.spin_per_mm / e.flexibility.spin;

  SimplifiedForces sum;
  double slipping = 0, all = 0;
  for (int first = 0; first < e.strips; first += kLanes) {
    Lanes s, chord, present;
    for (int l = 0; l < kLanes; ++l) {
      s[l] = -b + (first + l + 0.5) * ds;
      present[l] = first + l < e.strips ? 1.0 : 0.0;
      chord[l] = std::max(0.0, 1.0 - s[l] * s[l] / (b * b));  // (half length / a)^2
    }
    const Lanes half = a * chord.sqrt() * present;
    // Square of the bound is shape * (1 - zeta^2) for Hertz's, shape * (1 - zeta^2)^2 for the parabola.
    const Lanes shape = peak * peak * (elliptic ? chord : chord.square());
    const Lanes rate_x = (wx - spin * s) * half, rate_0 = ws * half, rate_1 = spin * half.square();
    Lanes px = Lanes::Zero(), ps = Lanes::Zero(), fx = Lanes::Zero(), fs = Lanes::Zero(), m = Lanes::Zero(),
          slip = Lanes::Zero();
    double before = 1;
    for (int k = 0; k < e.elements; ++k) {
      const double zeta = 1 - (k + 0.5) * step, run = before - zeta, mean = 0.5 * (before + zeta),
                   fall = 1 - zeta * zeta;
      before = zeta;
      const Lanes tx = px - run * rate_x, ts = ps - run * (rate_0 + mean * rate_1);
      const Lanes ratio = (elliptic ? fall : fall * fall) * shape / (tx.square() + ts.square() + kTiny);
      const Lanes scale = ratio.min(1.0).sqrt();
      px = scale * tx;
      ps = scale * ts;
      fx += px;
      fs += ps;
      m += zeta * ps;
      slip += (ratio < 1.0).select(Lanes::Ones(), Lanes::Zero());
    }
    const Lanes cell = half * (step * ds);
    sum.force_rolling_N += (fx * cell).sum();
    sum.force_across_N += (fs * cell).sum();
    sum.moment_normal_Nmm += ((half * m - s * fx) * cell).sum();
    slipping += (slip * cell).sum();
    all += cell.sum() * e.elements;
  }
  sum.slip_area_fraction = slipping / all;
  return sum;
}

RollingResult simplified_rolling(const RollingProblem& problem, const Flexibility& flexibility) {
  const char* where = "simplified theory";
  check_problem(where, problem, {});
  require_positive(where, "flexibility L1", flexibility.longitudinal, "mm/MPa");
  require_positive(where, "flexibility L2", flexibility.lateral, "mm/MPa");
  require_positive(where, "flexibility L3", flexibility.spin, "mm/MPa");
  const Grid& g = problem.grid;
  const auto cells = static_cast<std::size_t>(g.nx) * static_cast<std::size_t>(g.ns);
  const auto bound = [&](std::size_t c) {
    return problem.pressure_MPa[c] * (problem.friction.size() == 1 ? problem.friction[0] : problem.friction[c]);
  };
  double count = 0, mean_x = 0, mean_s = 0;
  for (std::size_t c = 0; c < cells; ++c) {
    if (!(bound(c) > 0)) continue;
    const double f = problem.area_fraction.empty() ? 1.0 : problem.area_fraction[c];
    count += f;
    mean_x += f * problem.slip[2 * c];
    mean_s += f * problem.slip[2 * c + 1];
  }
  RollingResult result;
  result.traction_MPa.assign(2 * cells, 0);
  result.slip.assign(2 * cells, 0);
  result.state.assign(cells, RollingState::open);
  if (count <= 0) return result;
  mean_x /= count;
  mean_s /= count;
  const double dx = g.dx_mm, l1 = flexibility.longitudinal, l2 = flexibility.lateral, l3 = flexibility.spin;
  for (int j = 0; j < g.ns; ++j) {
    double px = 0, ps = 0, bx = 0, bs = 0;  // traction and its rate at the point before
    bool inside = false;
    for (int i = g.nx - 1; i >= 0; --i) {
      const std::size_t c = static_cast<std::size_t>(j) * static_cast<std::size_t>(g.nx) + static_cast<std::size_t>(i);
      const double limit = bound(c);
      if (!(limit > 0)) {
        inside = false;
        continue;
      }
      const double rx = mean_x / l1 + (problem.slip[2 * c] - mean_x) / l3;
      const double rs = mean_s / l2 + (problem.slip[2 * c + 1] - mean_s) / l3;
      double run = dx;
      if (!inside) {  // from the leading edge, which a cut cell carries within
        px = ps = 0;
        bx = rx, bs = rs;
        run = dx * (problem.area_fraction.empty() ? 0.5 : 0.5 * problem.area_fraction[c]);
        inside = true;
      }
      const double tx = px - run * 0.5 * (rx + bx), ts = ps - run * 0.5 * (rs + bs);
      const double size = std::hypot(tx, ts), scale = size > limit ? limit / size : 1.0;
      px = scale * tx;
      ps = scale * ts;
      bx = rx, bs = rs;
      result.traction_MPa[2 * c] = px;
      result.traction_MPa[2 * c + 1] = ps;
      result.slip[2 * c] = l1 * (px - tx) / run;
      result.slip[2 * c + 1] = l2 * (ps - ts) / run;
      result.state[c] = scale < 1 ? RollingState::slip : RollingState::stick;
      const double area = g.dx_mm * g.ds_mm;
      result.force_rolling_N += area * px;
      result.force_across_N += area * ps;
      result.moment_normal_Nmm += area * (g.x(i) * ps - g.s(j) * px);
    }
  }
  return result;
}

}  // namespace runband::halfspace
