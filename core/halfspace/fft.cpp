#include "core/halfspace/fft.h"

#include <fftw3.h>

#include <algorithm>
#include <map>
#include <mutex>
#include <new>
#include <tuple>
#include <type_traits>

namespace runband::halfspace {

namespace {

// FFTW's planner is not reentrant (its execute functions are): one lock for both precisions.
std::mutex& planner_lock() {
  static std::mutex lock;
  return lock;
}

// The two precisions of FFTW under one set of names.
template <typename Real>
struct Fftw;

template <>
struct Fftw<double> {
  using Plan = fftw_plan;
  using Complex = fftw_complex;
  static constexpr auto malloc = fftw_malloc;
  static constexpr auto free = fftw_free;
  static constexpr auto destroy = fftw_destroy_plan;
  static constexpr auto plan_r2c = fftw_plan_many_dft_r2c;
  static constexpr auto plan_c2r = fftw_plan_many_dft_c2r;
  static constexpr auto plan_c2c = fftw_plan_many_dft;
  static constexpr auto run_r2c = fftw_execute_dft_r2c;
  static constexpr auto run_c2r = fftw_execute_dft_c2r;
  static constexpr auto run_c2c = fftw_execute_dft;
};

template <>
struct Fftw<float> {
  using Plan = fftwf_plan;
  using Complex = fftwf_complex;
  static constexpr auto malloc = fftwf_malloc;
  static constexpr auto free = fftwf_free;
  static constexpr auto destroy = fftwf_destroy_plan;
  static constexpr auto plan_r2c = fftwf_plan_many_dft_r2c;
  static constexpr auto plan_c2r = fftwf_plan_many_dft_c2r;
  static constexpr auto plan_c2c = fftwf_plan_many_dft;
  static constexpr auto run_r2c = fftwf_execute_dft_r2c;
  static constexpr auto run_c2r = fftwf_execute_dft_c2r;
  static constexpr auto run_c2c = fftwf_execute_dft;
};

std::size_t count(int n) { return static_cast<std::size_t>(n); }

// Plans for lines of one length, shared by every transform that has such lines: a new box then needs no new plan unless
// one of its sides is new.
template <typename Key, typename Plans>
std::shared_ptr<const Plans> shared(Key key) {
  static std::mutex lock;
  static std::map<Key, std::shared_ptr<const Plans>> cache;
  const std::lock_guard guard(lock);
  auto& entry = cache[key];
  if (!entry) entry = std::make_shared<const Plans>(key);
  return entry;
}

constexpr int kLines = 8;  // transformed at once; that many single-precision complex numbers fill a cache line

// Rows of px reals and px/2+1 complex numbers, eight at a time or one.
template <typename Real>
struct RowPlans {
  using F = Fftw<Real>;
  explicit RowPlans(int px) {
    const int half = px / 2 + 1;
    const auto real = fft_alloc<Real>(count(px) * kLines), spectrum = fft_alloc<Real>(2 * count(half) * kLines);
    auto* c = reinterpret_cast<typename F::Complex*>(spectrum.get());
    const std::lock_guard guard(planner_lock());
    const auto there_flags = FFTW_ESTIMATE | FFTW_PRESERVE_INPUT, back_flags = FFTW_ESTIMATE | FFTW_DESTROY_INPUT;
    there = F::plan_r2c(1, &px, kLines, real.get(), nullptr, 1, px, c, nullptr, 1, half, there_flags);
    back = F::plan_c2r(1, &px, kLines, c, nullptr, 1, half, real.get(), nullptr, 1, px, back_flags);
    // A single row may begin anywhere.
    there_one = F::plan_r2c(1, &px, 1, real.get(), nullptr, 1, px, c, nullptr, 1, half, there_flags | FFTW_UNALIGNED);
    back_one = F::plan_c2r(1, &px, 1, c, nullptr, 1, half, real.get(), nullptr, 1, px, back_flags | FFTW_UNALIGNED);
  }
  ~RowPlans() {
    const std::lock_guard guard(planner_lock());
    for (auto plan : {there, back, there_one, back_one}) F::destroy(plan);
  }
  RowPlans(const RowPlans&) = delete;
  RowPlans& operator=(const RowPlans&) = delete;
  typename F::Plan there{}, back{}, there_one{}, back_one{};
};

// Columns of ps complex numbers, gathered from the spectrum into a small block [ps][lines]: the large strides of the
// spectrum are then walked once, cache line by cache line.
template <typename Real>
struct ColumnPlans {
  using F = Fftw<Real>;
  explicit ColumnPlans(int ps) {
    const auto from = fft_alloc<Real>(2 * count(ps) * kLines), to = fft_alloc<Real>(2 * count(ps) * kLines);
    auto* a = reinterpret_cast<typename F::Complex*>(from.get());
    auto* b = reinterpret_cast<typename F::Complex*>(to.get());
    const std::lock_guard guard(planner_lock());
    const auto plan = [&](int lines, int direction) {
      return F::plan_c2c(1, &ps, lines, a, nullptr, lines, 1, b, nullptr, lines, 1, direction,
                         FFTW_ESTIMATE | FFTW_DESTROY_INPUT);
    };
    there = plan(kLines, FFTW_FORWARD);
    back = plan(kLines, FFTW_BACKWARD);
    there_one = plan(1, FFTW_FORWARD);
    back_one = plan(1, FFTW_BACKWARD);
  }
  ~ColumnPlans() {
    const std::lock_guard guard(planner_lock());
    for (auto plan : {there, back, there_one, back_one}) F::destroy(plan);
  }
  ColumnPlans(const ColumnPlans&) = delete;
  ColumnPlans& operator=(const ColumnPlans&) = delete;
  typename F::Plan there{}, back{}, there_one{}, back_one{};
};

// The block of a thread, kept between calls.
template <typename Real>
struct Block {
  std::size_t reals = 0;
  FftBuffer<Real> from, to;
  void reserve(std::size_t n) {
    if (n <= reals) return;
    from = fft_alloc<Real>(n);
    to = fft_alloc<Real>(n);
    reals = n;
  }
};
template <typename Real>
Block<Real>& block_of_this_thread() {
  thread_local Block<Real> block;
  return block;
}

// Rows first (only those that carry data), then columns, block by block; the way back in reverse order.
template <typename Real>
class RowColumnTransform final : public Transform<Real> {
  using F = Fftw<Real>;
  using Complex = typename F::Complex;

 public:
  RowColumnTransform(int px, int ps, int rows)
      : px_(px),
        ps_(ps),
        rows_(rows),
        half_(px / 2 + 1),
        row_plans_(shared<int, RowPlans<Real>>(px)),
        column_plans_(shared<int, ColumnPlans<Real>>(ps)) {}

  int px() const override { return px_; }
  int ps() const override { return ps_; }
  int rows() const override { return rows_; }
  int spectrum_size() const override { return ps_ * half_; }

  void forward(const Real* in, Real* out) const override {
    for_rows([&](auto j, bool block) {
      // Planned with FFTW_PRESERVE_INPUT.
      F::run_r2c(block ? row_plans_->there : row_plans_->there_one, const_cast<Real*>(in + j * count(px_)),
                 complex(out + 2 * j * count(half_)));
    });
    columns(out, column_plans_->there, column_plans_->there_one, rows_, ps_);
  }
  void backward(Real* in, Real* out) const override {
    columns(in, column_plans_->back, column_plans_->back_one, ps_, rows_);
    for_rows([&](auto j, bool block) {
      F::run_c2r(block ? row_plans_->back : row_plans_->back_one, complex(in + 2 * j * count(half_)),
                 out + j * count(px_));
    });
  }

 private:
  static Complex* complex(Real* p) { return reinterpret_cast<Complex*>(p); }

  template <typename Run>
  void for_rows(Run&& run) const {
    int j = 0;
    for (; j + kLines <= rows_; j += kLines) run(count(j), true);
    for (; j < rows_; ++j) run(count(j), false);
  }

  // Transforms every column of which `filled` rows are given and `wanted` are needed.
  void columns(Real* spectrum, typename F::Plan plan, typename F::Plan plan_one, int filled, int wanted) const {
    Block<Real>& block = block_of_this_thread<Real>();
    block.reserve(2 * count(ps_) * kLines);
    const auto run = [&](int first, auto lines, typename F::Plan with) {
      constexpr std::size_t kReals = 2 * decltype(lines)::value;
      Real* place = spectrum + 2 * first;
      const std::size_t stride = 2 * count(half_);
      Real* from = block.from.get();
      for (std::size_t j = 0; j < count(filled); ++j) {
        for (std::size_t k = 0; k < kReals; ++k) from[j * kReals + k] = place[j * stride + k];
      }
      std::fill(from + count(filled) * kReals, from + count(ps_) * kReals, Real{0});
      F::run_c2c(with, complex(from), complex(block.to.get()));
      const Real* to = block.to.get();
      for (std::size_t j = 0; j < count(wanted); ++j) {
        for (std::size_t k = 0; k < kReals; ++k) place[j * stride + k] = to[j * kReals + k];
      }
    };
    int i = 0;
    for (; i + kLines <= half_; i += kLines) run(i, std::integral_constant<std::size_t, kLines>(), plan);
    for (; i < half_; ++i) run(i, std::integral_constant<std::size_t, 1>(), plan_one);
  }

  int px_, ps_, rows_, half_;
  std::shared_ptr<const RowPlans<Real>> row_plans_;
  std::shared_ptr<const ColumnPlans<Real>> column_plans_;
};

}  // namespace

int fast_size(int n) {
  for (int size = std::max(n, 1);; ++size) {
    int rest = size;
    for (const int factor : {2, 3, 5, 7}) {
      while (rest % factor == 0) rest /= factor;
    }
    if (rest == 1) return size;
  }
}

template <typename Real>
std::shared_ptr<const Transform<Real>> Transform<Real>::of_size(int px, int ps, int rows) {
  static std::mutex lock;
  static std::map<std::tuple<int, int, int>, std::shared_ptr<const Transform<Real>>> cache;
  const std::tuple key{px, ps, rows <= 0 ? ps : std::min(rows, ps)};
  const std::lock_guard guard(lock);
  auto& entry = cache[key];
  if (!entry) entry = std::make_shared<RowColumnTransform<Real>>(px, ps, std::get<2>(key));
  return entry;
}

template <typename Real>
void FftDeleter<Real>::operator()(Real* p) const {
  Fftw<Real>::free(p);
}

template <typename Real>
FftBuffer<Real> fft_alloc(std::size_t reals) {
  auto* p = static_cast<Real*>(Fftw<Real>::malloc(std::max<std::size_t>(reals, 1) * sizeof(Real)));
  if (!p) throw std::bad_alloc();
  std::fill_n(p, reals, Real{0});
  return FftBuffer<Real>(p);
}

template class Transform<float>;
template class Transform<double>;
template struct FftDeleter<float>;
template struct FftDeleter<double>;
template FftBuffer<float> fft_alloc<float>(std::size_t);
template FftBuffer<double> fft_alloc<double>(std::size_t);

}  // namespace runband::halfspace
