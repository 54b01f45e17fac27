#include "core/halfspace/normal_level.h"

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <limits>
#include <list>
#include <mutex>
#include <numeric>
#include <tuple>

#include "core/halfspace/influence.h"

namespace runband::halfspace {

namespace {

// Sums in a fixed order, whatever the alignment of the arrays: same bits every time, and vectorised.
template <typename Real, typename Term>
double ordered_sum(std::size_t n, Term&& term) {
  constexpr std::size_t kLanes = 16;
  Real lanes[kLanes] = {};
  std::size_t k = 0;
  for (; k + kLanes <= n; k += kLanes) {
    for (std::size_t l = 0; l < kLanes; ++l) lanes[l] += term(k + l);
  }
  double sum = 0;
  for (const Real lane : lanes) sum += static_cast<double>(lane);
  for (; k < n; ++k) sum += static_cast<double>(term(k));
  return sum;
}

// Preconditioned conjugate gradients for K d = r on the active cells, in single precision, to a tenth of the start;
// with a given load the corrections sum to zero and r may end as a constant, which is a change of the approach.
class Corrector {
 public:
  explicit Corrector(const NormalKernel& kernel)
      : kernel_(kernel),
        n_(static_cast<std::size_t>(kernel.quick.nx()) * static_cast<std::size_t>(kernel.quick.ns())),
        work_(kernel.quick.workspace()),
        inverse_work_(kernel.inverse.workspace()),
        mask(fft_alloc<float>(n_)),
        r(fft_alloc<float>(n_)),
        d(fft_alloc<float>(n_)),
        z_(fft_alloc<float>(n_)),
        p_(fft_alloc<float>(n_)),
        kp_(fft_alloc<float>(n_)),
        one_(fft_alloc<float>(n_)) {}

  // Returns the work in convolutions.
  double solve(bool keeps_sum, double reduction) {
    constexpr int kMostSteps = 12;
    double work = 0;
    std::fill_n(d.get(), n_, 0.0F);
    const double active = ordered_sum<float>(n_, [&](std::size_t k) { return mask[k]; });
    if (keeps_sum) {
      precondition(mask.get(), one_.get());
      work += kInverseWork;
      one_sum_ = ordered_sum<float>(n_, [&](std::size_t k) { return one_[k]; });
    }
    const double goal = reduction * norm(keeps_sum, active);
    double rz_old = 0;
    for (int step = 0; step < kMostSteps; ++step) {
      precondition(r.get(), z_.get());
      work += kInverseWork;
      if (keeps_sum) {
        const double z_sum = ordered_sum<float>(n_, [&](std::size_t k) { return z_[k]; });
        const auto share = static_cast<float>(z_sum / one_sum_);
        for (std::size_t k = 0; k < n_; ++k) z_[k] -= share * one_[k];
      }
      const double rz = ordered_sum<float>(n_, [&](std::size_t k) { return r[k] * z_[k]; });
      if (!(rz > 0)) break;
      const auto beta = step == 0 ? 0.0F : static_cast<float>(rz / rz_old);
      for (std::size_t k = 0; k < n_; ++k) p_[k] = z_[k] + beta * p_[k];
      kernel_.quick.apply(p_.get(), kp_.get(), work_);
      work += 1;
      const double curvature = ordered_sum<float>(n_, [&](std::size_t k) { return p_[k] * kp_[k]; });
      if (!(curvature > 0)) break;
      const auto alpha = static_cast<float>(rz / curvature);
      for (std::size_t k = 0; k < n_; ++k) {
        d[k] += alpha * p_[k];
        r[k] -= alpha * kp_[k] * mask[k];
      }
      rz_old = rz;
      if (norm(keeps_sum, active) <= goal) break;
    }
    return work;
  }

  static constexpr double kInverseWork = 0.4;  // measured, tests/bench

 private:
  void precondition(const float* from, float* to) {
    kernel_.inverse.apply(from, to, inverse_work_);
    for (std::size_t k = 0; k < n_; ++k) to[k] *= mask[k];
  }
  double norm(bool keeps_sum, double active) const {
    const double square = ordered_sum<float>(n_, [&](std::size_t k) { return r[k] * r[k]; });
    if (!keeps_sum) return std::sqrt(square);
    const double mean = ordered_sum<float>(n_, [&](std::size_t k) { return r[k]; }) / active;
    return std::sqrt(std::max(0.0, square - active * mean * mean));
  }

  const NormalKernel& kernel_;
  std::size_t n_;
  Convolver<float>::Workspace work_;
  CirculantInverse<float>::Workspace inverse_work_;

 public:
  FftBuffer<float> mask, r, d;

 private:
  FftBuffer<float> z_, p_, kp_, one_;
  double one_sum_ = 1;
};

}  // namespace

struct NormalKernel::Scratch {
  explicit Scratch(const NormalKernel& kernel) : corrector(kernel), exact(kernel.exact.workspace()) {}
  Corrector corrector;
  Convolver<double>::Workspace exact;
};

std::unique_ptr<NormalKernel::Scratch> NormalKernel::take() const {
  {
    const std::lock_guard guard(pool_lock_);
    if (!pool_.empty()) {
      auto scratch = std::move(pool_.back());
      pool_.pop_back();
      return scratch;
    }
  }
  return std::make_unique<Scratch>(*this);
}

void NormalKernel::give(std::unique_ptr<Scratch> scratch) const {
  constexpr std::size_t kMostKept = 4;
  const std::lock_guard guard(pool_lock_);
  if (pool_.size() < kMostKept) pool_.push_back(std::move(scratch));
}

NormalKernel::~NormalKernel() = default;

NormalKernel::NormalKernel(int nx, int ns, double ratio) : NormalKernel(nx, ns, love_table(nx, ns, ratio, 1.0)) {}
NormalKernel::NormalKernel(int nx, int ns, const std::vector<double>& table)
    : exact(nx, ns, table), quick(nx, ns, table), inverse(nx, ns, table) {}

std::shared_ptr<const NormalKernel> NormalKernel::of(int nx, int ns, double ratio) {
  using Key = std::tuple<int, int, double>;
  constexpr int kMostCells = 400 * 400;  // of all entries together: some 40 MB
  static std::mutex lock;
  static std::list<std::pair<Key, std::shared_ptr<const NormalKernel>>> cache;  // latest first
  const Key key{nx, ns, ratio};
  {
    const std::lock_guard guard(lock);
    for (auto entry = cache.begin(); entry != cache.end(); ++entry) {
      if (entry->first == key) {
        cache.splice(cache.begin(), cache, entry);
        return entry->second;
      }
    }
  }
  auto made = std::make_shared<const NormalKernel>(nx, ns, ratio);  // outside the lock: two threads may both make it
  if (nx * ns > kMostCells) return made;
  const std::lock_guard guard(lock);
  cache.emplace_front(key, made);
  int cells = 0;
  for (auto entry = cache.begin(); entry != cache.end(); ++entry) {
    cells += entry->second->quick.nx() * entry->second->quick.ns();
    if (cells > kMostCells) {
      cache.erase(entry, cache.end());
      break;
    }
  }
  return made;
}

bool rescale(std::vector<double>& q, double sum, double cap, const std::vector<double>& order) {
  const double enough = 1e-14 * sum;
  for (int pass = 0; pass < 60; ++pass) {
    const double total = ordered_sum<double>(q.size(), [&](std::size_t k) { return q[k]; });
    if (std::abs(total - sum) <= enough) return true;
    const double capped = ordered_sum<double>(q.size(), [&](std::size_t k) { return q[k] >= cap ? q[k] : 0.0; });
    const double free = total - capped;
    if (free > enough && sum > capped) {  // cells between keep their proportions, cells at the cap stay
      const double factor = (sum - capped) / free;
      for (double& v : q) v = v >= cap ? v : std::min(v * factor, cap);
    } else if (total > sum) {
      for (double& v : q) v *= sum / total;
    } else {  // all that is loaded has yielded: the nearest empty cells take the rest
      std::vector<std::size_t> empty;
      for (std::size_t k = 0; k < q.size(); ++k) {
        if (q[k] <= 0 && std::isfinite(order[k])) empty.push_back(k);
      }
      std::stable_sort(empty.begin(), empty.end(), [&](std::size_t i, std::size_t j) { return order[i] < order[j]; });
      double missing = sum - total;
      for (const std::size_t k : empty) {
        if (missing <= 0) break;
        q[k] = std::min(0.5 * cap, missing);
        missing -= q[k];
      }
      if (empty.empty()) return false;
    }
    if (!std::isfinite(cap) && total > 0) return true;
  }
  return std::abs(ordered_sum<double>(q.size(), [&](std::size_t k) { return q[k]; }) - sum) <= 1e-10 * sum;
}

void solve_level(const LevelProblem& problem, LevelState& state, const Progress& progress) {
  constexpr int kMostSteps = 60;
  constexpr int kPatience = 8;  // outer steps without a better residual before the steady method takes over
  const NormalKernel& kernel = *problem.kernel;
  const std::size_t n = problem.gap.size();
  const bool keeps_sum = problem.sum.has_value();
  const double infinity = std::numeric_limits<double>::infinity();
  struct Loan {
    const NormalKernel& kernel;
    std::unique_ptr<NormalKernel::Scratch> scratch = kernel.take();
    ~Loan() { kernel.give(std::move(scratch)); }
  } const loan{kernel};
  Corrector& corrector = loan.scratch->corrector;
  std::vector<double>& q = state.q;
  std::vector<double>& g = state.g;
  g.resize(n);
  state.approach = problem.approach.value_or(0.0);
  double best = infinity;
  int since_best = 0;
  if (keeps_sum && !rescale(q, *problem.sum, problem.cap, problem.gap)) {
    return;  // more load than the hardness allows on these cells
  }
  for (int step = 0; step < kMostSteps; ++step) {
    progress.check();
    kernel.exact.apply(q.data(), g.data(), loan.scratch->exact);
    state.work += 1;
    ++state.iterations;
    if (keeps_sum) {
      double sum = 0, count = 0, low = -infinity, high = infinity;
      for (std::size_t k = 0; k < n; ++k) {
        const double level = g[k] + problem.gap[k];
        if (q[k] > 0 && q[k] < problem.cap) {
          sum += level;
          count += 1;
        } else if (q[k] > 0) {
          low = std::max(low, level);
        } else {
          high = std::min(high, level);
        }
      }
      state.approach = count > 0 ? sum / count : (std::isfinite(high) ? std::max(low, 0.5 * (low + high)) : low);
    }
    double remaining = 0, scale = 0;
    std::size_t active = 0;
    for (std::size_t k = 0; k < n; ++k) {
      const double u = g[k];
      g[k] = u + problem.gap[k] - state.approach;
      const bool acts =
          (q[k] > 0 && q[k] < problem.cap) || (q[k] <= 0 && g[k] < 0) || (q[k] >= problem.cap && g[k] > 0);
      corrector.mask[k] = acts ? 1.0F : 0.0F;
      corrector.r[k] = acts ? static_cast<float>(-g[k]) : 0.0F;
      if (acts) {
        remaining += g[k] * g[k];
        ++active;
      }
      if (acts || q[k] > 0) scale += u * u;
    }
    state.residual = active == 0 ? 0.0 : std::sqrt(remaining / std::max(scale, 1e-300));
    if (scale == 0.0 && active > 0) state.residual = 1.0;
    if (state.residual <= problem.tolerance) {
      state.converged = true;
      return;
    }
    if (state.residual < 0.9 * best) {
      best = state.residual;
      since_best = 0;
    } else if (++since_best >= kPatience) {
      break;
    }
    const double reduction = std::clamp(0.3 * problem.tolerance / state.residual, 0.1, 0.5);
    state.work += corrector.solve(keeps_sum, reduction);
    for (std::size_t k = 0; k < n; ++k) {
      if (corrector.mask[k] != 0.0F) q[k] = std::clamp(q[k] + static_cast<double>(corrector.d[k]), 0.0, problem.cap);
    }
    if (keeps_sum && !rescale(q, *problem.sum, problem.cap, g)) return;
  }
  if (keeps_sum) {
    solve_level_by_approach(problem, state, progress);
  } else {
    solve_level_steadily(problem, state, progress);
  }
}

}  // namespace runband::halfspace
