// Stresses below the patch: what pressure and traction do in the rail.
#include <algorithm>
#include <atomic>
#include <cmath>
#include <thread>

#include "core/analysis/plugin.h"
#include "core/base/text.h"
#include "core/halfspace/fft.h"
#include "point_load.h"

namespace runband {
namespace {

using halfspace::fft_alloc;
using halfspace::FftBuffer;
using halfspace::Transform;
using subsurface::Stress;

constexpr int kComponents = 6, kLoads = 3;
constexpr double Stress::*kPart[kComponents] = {&Stress::xx, &Stress::yy, &Stress::zz,
                                                &Stress::xy, &Stress::xz, &Stress::yz};
// Whether a stress changes its sign with x, and with y: pressure, traction along x, traction along y.
constexpr bool kOddX[kLoads][kComponents] = {{false, false, false, true, true, false},
                                             {true, true, true, false, false, true},
                                             {false, false, false, true, true, false}};
constexpr bool kOddY[kLoads][kComponents] = {{false, false, false, true, false, true},
                                             {false, false, false, true, false, true},
                                             {true, true, true, false, true, false}};

/// Gauss-Legendre on [-1/2, 1/2].
struct Rule {
  int count;
  double at[6], weight[6];
};
constexpr Rule kOne{1, {0}, {1}};
constexpr Rule kTwo{2, {-0.288675134594813, 0.288675134594813}, {0.5, 0.5}};
constexpr Rule kFour{4,
                     {-0.430568155797026, -0.169990521792428, 0.169990521792428, 0.430568155797026},
                     {0.173927422568727, 0.326072577431273, 0.326072577431273, 0.173927422568727}};
constexpr Rule kSix{6,
                    {-0.466234757101576, -0.330604693233132, -0.119309593041599, 0.119309593041599, 0.330604693233132,
                     0.466234757101576},
                    {0.0856622461895852, 0.180380786524069, 0.233956967286346, 0.233956967286346, 0.180380786524069,
                     0.0856622461895852}};

/// Stress at (x, y, z) under unit pressure, unit traction along x and along y on a cell about the origin.
void cell_stress(double x, double y, double z, double dx, double dy, double nu, bool tractions, Stress (&out)[kLoads]) {
  const double far = std::sqrt(x * x + y * y + z * z) / std::max(dx, dy);
  const Rule& rule = far > 7 ? kOne : far > 2.5 ? kTwo : far > 1 ? kFour : kSix;
  for (Stress& s : out) s = {};
  for (int i = 0; i < rule.count; ++i) {
    for (int j = 0; j < rule.count; ++j) {
      const double px = x - rule.at[i] * dx, py = y - rule.at[j] * dy, w = rule.weight[i] * rule.weight[j] * dx * dy;
      const Stress n = subsurface::under_normal_force(px, py, z, nu);
      for (const auto part : kPart) out[0].*part += w * n.*part;
      if (!tractions) continue;
      const Stress t = subsurface::under_force_along_x(px, py, z, nu);
      for (const auto part : kPart) out[1].*part += w * t.*part;
      // Along y: the same with x and y exchanged.
      const Stress u = subsurface::under_force_along_x(py, px, z, nu);
      out[2].xx += w * u.yy;
      out[2].yy += w * u.xx;
      out[2].zz += w * u.zz;
      out[2].xy += w * u.xy;
      out[2].xz += w * u.yz;
      out[2].yz += w * u.xz;
    }
  }
}

/// The patch's loads, transformed once; layers are then computed from several threads.
class Below {
 public:
  Below(const Grid& grid, const std::vector<double>& pressure, const std::vector<double>* traction, double nu)
      : g_(grid), nu_(nu), tractions_(traction != nullptr) {
    px_ = halfspace::fast_size(2 * g_.nx - 1);
    ps_ = halfspace::fast_size(2 * g_.ns - 1);
    transform_ = Transform<float>::of_size(px_, ps_);
    FftBuffer<float> load = fft_alloc<float>(static_cast<std::size_t>(px_ * ps_));
    for (int l = 0; l < loads(); ++l) {
      std::fill_n(load.get(), px_ * ps_, 0.0F);
      for (int j = 0; j < g_.ns; ++j)
        for (int i = 0; i < g_.nx; ++i) {
          const auto cell = static_cast<std::size_t>(j * g_.nx + i);
          // On the rail: it is pressed down, and the traction on it is that on the wheel reversed.
          const double value = l == 0 ? pressure[cell] : -(*traction)[2 * cell + static_cast<std::size_t>(l - 1)];
          load[static_cast<std::size_t>(j * px_ + i)] = static_cast<float>(value);
        }
      spectrum_[l] = fft_alloc<float>(2 * static_cast<std::size_t>(transform_->spectrum_size()));
      transform_->forward(load.get(), spectrum_[l].get());
    }
  }

  /// Stress at every cell of the layer at this depth, in the order of kPart.
  void layer(double depth, std::vector<float> (&stress)[kComponents]) const {
    const int nx = g_.nx, ns = g_.ns;
    std::vector<Stress> quadrant(static_cast<std::size_t>(nx * ns * kLoads));
    for (int j = 0; j < ns; ++j)
      for (int i = 0; i < nx; ++i) {
        Stress unit[kLoads];
        cell_stress(i * g_.dx_mm, j * g_.ds_mm, depth, g_.dx_mm, g_.ds_mm, nu_, tractions_, unit);
        for (int l = 0; l < loads(); ++l) quadrant[static_cast<std::size_t>((l * ns + j) * nx + i)] = unit[l];
      }
    const auto size = static_cast<std::size_t>(px_ * ps_),
               spectrum = 2 * static_cast<std::size_t>(transform_->spectrum_size());
    FftBuffer<float> kernel = fft_alloc<float>(size), turned = fft_alloc<float>(spectrum),
                     sum = fft_alloc<float>(spectrum);
    const float scale = 1.0F / static_cast<float>(size);
    for (int c = 0; c < kComponents; ++c) {
      std::fill_n(sum.get(), spectrum, 0.0F);
      for (int l = 0; l < loads(); ++l) {
        std::fill_n(kernel.get(), size, 0.0F);
        for (int j = 0; j < ns; ++j)
          for (int i = 0; i < nx; ++i) {
            const auto v = static_cast<float>(quadrant[static_cast<std::size_t>((l * ns + j) * nx + i)].*kPart[c]);
            const float vx = kOddX[l][c] ? -v : v, vy = kOddY[l][c] ? -v : v, vxy = kOddX[l][c] != kOddY[l][c] ? -v : v;
            const int mi = i == 0 ? 0 : px_ - i, mj = j == 0 ? 0 : ps_ - j;
            kernel[static_cast<std::size_t>(j * px_ + i)] = v;
            if (i > 0) kernel[static_cast<std::size_t>(j * px_ + mi)] = vx;
            if (j > 0) kernel[static_cast<std::size_t>(mj * px_ + i)] = vy;
            if (i > 0 && j > 0) kernel[static_cast<std::size_t>(mj * px_ + mi)] = vxy;
          }
        transform_->forward(kernel.get(), turned.get());
        const float *a = turned.get(), *b = spectrum_[l].get();
        for (std::size_t k = 0; k < spectrum; k += 2) {
          sum[k] += a[k] * b[k] - a[k + 1] * b[k + 1];
          sum[k + 1] += a[k] * b[k + 1] + a[k + 1] * b[k];
        }
      }
      transform_->backward(sum.get(), kernel.get());
      stress[c].resize(static_cast<std::size_t>(nx * ns));
      for (int j = 0; j < ns; ++j)
        for (int i = 0; i < nx; ++i)
          stress[c][static_cast<std::size_t>(j * nx + i)] = scale * kernel[static_cast<std::size_t>(j * px_ + i)];
    }
  }

 private:
  int loads() const { return tractions_ ? kLoads : 1; }
  const Grid& g_;
  double nu_;
  bool tractions_;
  int px_ = 0, ps_ = 0;
  std::shared_ptr<const Transform<float>> transform_;
  FftBuffer<float> spectrum_[kLoads];
};

class Subsurface final : public Analysis {
 public:
  Description describe() const override {
    Description d;
    d.id = "subsurface";
    d.title = "Below the surface";
    d.summary = "Stresses in the rail below the patch, under pressure and traction, and the force at first yield.";
    // Through slip_bands; its fast laws give forces without tractions, and then pressure alone is taken.
    d.needs = {"force_rolling"};
    d.gives = {"von_mises", "largest_shear", "largest_von_mises", "first_yield_force"};
    d.parameters = {
        {"layers", "Layers", "1", 32.0, 8.0, 96.0, {}, "Number of depths at which stresses are computed.", ""},
        {"depth",
         "Depth",
         "1",
         2.0,
         0.5,
         6.0,
         {},
         "Of the lowest layer, in half widths of the patch's shorter side.",
         ""},
        {"shear_yield_MPa",
         "Yield stress in shear, k",
         "MPa",
         300.0,
         50.0,
         2000.0,
         {},
         "Of the rail, work-hardened; the case's material.shear_yield_MPa wins.",
         "(memory)"}};
    d.references = {"K. L. Johnson, Contact Mechanics (1985), sections 3.2, 3.6 and 4.5", "J. Boussinesq (1885)",
                    "V. Cerruti (1882)"};
    return d;
  }

  AnalysisResult run(const PatchContext& c, const Parameters& p, const Progress& progress) const override {
    const Grid& g = c.patch.grid;
    const std::vector<double>& pressure = c.patch.pressure.values;
    const Field* traction = c.inputs.has("traction") ? &c.inputs.field("traction") : nullptr;
    double first_x = 1e9, last_x = -1e9, first_s = 1e9, last_s = -1e9;
    for (int j = 0; j < g.ns; ++j)
      for (int i = 0; i < g.nx; ++i)
        if (pressure[static_cast<std::size_t>(j * g.nx + i)] > 0) {
          first_x = std::min(first_x, g.x(i));
          last_x = std::max(last_x, g.x(i));
          first_s = std::min(first_s, g.s(j));
          last_s = std::max(last_s, g.s(j));
        }
    const double half = 0.5 * std::min(last_x - first_x + g.dx_mm, last_s - first_s + g.ds_mm);
    const bool slides = traction != nullptr &&
                        std::any_of(traction->values.begin(), traction->values.end(), [](double v) { return v != 0; });
    const Below below(g, pressure, slides ? &traction->values : nullptr, c.material.rail.poisson_ratio);

    const int layers = static_cast<int>(p.number("layers"));
    const double step = p.number("depth") * half / layers;
    const std::string from = slides ? "point loads integrated over the cells, pressure and traction"
                                    : "point loads integrated over the cells, pressure alone";
    Volume mises{"von_mises", "Von Mises stress", "MPa", g, {}, {}, from},
        shear{"largest_shear", "Largest shear stress", "MPa", g, {}, {}, from};
    const auto cells = static_cast<std::size_t>(g.cells());
    for (int k = 0; k < layers; ++k) mises.depth_mm.push_back((k + 0.5) * step);
    shear.depth_mm = mises.depth_mm;
    mises.values.resize(cells * static_cast<std::size_t>(layers));
    shear.values.resize(mises.values.size());
    std::atomic<int> next{0};
    const auto work = [&] {
      std::vector<float> stress[kComponents];
      for (int k = next++; k < layers && !progress.stop.stop_requested(); k = next++) {
        below.layer(mises.depth_mm[static_cast<std::size_t>(k)], stress);
        for (std::size_t cell = 0; cell < cells; ++cell) {
          const Stress s{stress[0][cell], stress[1][cell], stress[2][cell],
                         stress[3][cell], stress[4][cell], stress[5][cell]};
          mises.values[static_cast<std::size_t>(k) * cells + cell] = subsurface::von_mises(s);
          shear.values[static_cast<std::size_t>(k) * cells + cell] = subsurface::largest_shear(s);
        }
      }
    };
    {
      std::vector<std::jthread> helpers;
      const unsigned more = std::clamp(std::thread::hardware_concurrency(), 1U, 8U) - 1;
      for (unsigned k = 0; k < more; ++k) helpers.emplace_back(work);
      work();
    }
    progress.check();

    const auto [most_mises, mises_depth] = worst(mises, step);
    const auto [most_shear, shear_depth] = worst(shear, step);
    const double k_MPa = c.material.shear_yield_MPa.value_or(p.number("shear_yield_MPa"));
    const double yield = std::sqrt(3.0) * k_MPa;
    AnalysisResult r;
    r.quantities = {
        {"largest_von_mises", "Largest von Mises stress", "MPa", most_mises, from},
        {"largest_von_mises_depth", "Depth of the largest von Mises stress", "mm", mises_depth, from},
        {"largest_shear", "Largest shear stress", "MPa", most_shear, from},
        {"largest_shear_depth", "Depth of the largest shear stress", "mm", shear_depth, from},
        // Pressures grow with the cube root of the force, tractions with them.
        {"first_yield_force", "Normal force at first yield", "N",
         most_mises > 0 ? c.zone.normal_force_N * std::pow(yield / most_mises, 3) : 0.0,
         "von Mises, k = " + number_text(k_MPa, 4) + " MPa; stresses grow with the cube root of the force (Hertz)"}};
    r.volumes = {std::move(mises), std::move(shear)};
    if (most_mises > yield)
      r.cautions.push_back({"beyond_yield", Severity::caution,
                            "Elastic stresses exceed first yield: residual stress and hardening will change them; see "
                            "the shakedown limit in the analysis of fatigue."});
    r.cautions.push_back({"no_life", Severity::note,
                          "Stresses of one state of an ideal half-space are no statement on the life of a rail; "
                          "inspection and the applicable standards are."});
    return r;
  }

 private:
  /// Largest value and its depth, by a parabola through the layers about it.
  static std::pair<double, double> worst(const Volume& v, double step) {
    const auto cells = static_cast<std::size_t>(v.grid.cells());
    const auto at = static_cast<std::size_t>(std::max_element(v.values.begin(), v.values.end()) - v.values.begin());
    const std::size_t k = at / cells;
    if (k == 0 || k + 1 >= v.depth_mm.size()) return {v.values[at], v.depth_mm[k]};
    const double a = v.values[at - cells], b = v.values[at], c = v.values[at + cells], bend = a - 2 * b + c;
    if (!(bend < 0)) return {b, v.depth_mm[k]};
    const double t = 0.5 * (a - c) / bend;
    return {b - 0.25 * (a - c) * t, v.depth_mm[k] + t * step};
  }
};

}  // namespace
}  // namespace runband

RUNBAND_ANALYSIS(runband::Subsurface)
