#include "core/halfspace/fft.h"

#include <fftw3.h>

#include <algorithm>
#include <map>
#include <mutex>
#include <new>
#include <tuple>

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

// Rows first (only those that carry data), then all columns in place; the way back in reverse order.
template <typename Real>
class RowColumnTransform final : public Transform<Real> {
  using F = Fftw<Real>;
  using Complex = typename F::Complex;

 public:
  RowColumnTransform(int px, int ps, int rows) : px_(px), ps_(ps), rows_(rows), half_(px / 2 + 1) {
    auto real = fft_alloc<Real>(static_cast<std::size_t>(px_) * static_cast<std::size_t>(rows_));
    auto spectrum = fft_alloc<Real>(2 * static_cast<std::size_t>(spectrum_size()));
    auto* c = reinterpret_cast<Complex*>(spectrum.get());
    const std::lock_guard guard(planner_lock());
    rows_there_ = F::plan_r2c(1, &px_, rows_, real.get(), nullptr, 1, px_, c, nullptr, 1, half_,
                              FFTW_ESTIMATE | FFTW_PRESERVE_INPUT);
    rows_back_ = F::plan_c2r(1, &px_, rows_, c, nullptr, 1, half_, real.get(), nullptr, 1, px_,
                             FFTW_ESTIMATE | FFTW_DESTROY_INPUT);
    columns_there_ =
        F::plan_c2c(1, &ps_, half_, c, nullptr, half_, 1, c, nullptr, half_, 1, FFTW_FORWARD, FFTW_ESTIMATE);
    columns_back_ =
        F::plan_c2c(1, &ps_, half_, c, nullptr, half_, 1, c, nullptr, half_, 1, FFTW_BACKWARD, FFTW_ESTIMATE);
  }
  ~RowColumnTransform() override {
    const std::lock_guard guard(planner_lock());
    for (auto plan : {rows_there_, rows_back_, columns_there_, columns_back_}) F::destroy(plan);
  }
  RowColumnTransform(const RowColumnTransform&) = delete;
  RowColumnTransform& operator=(const RowColumnTransform&) = delete;

  int px() const override { return px_; }
  int ps() const override { return ps_; }
  int rows() const override { return rows_; }
  int spectrum_size() const override { return ps_ * half_; }

  void forward(const Real* in, Real* out) const override {
    auto* c = reinterpret_cast<Complex*>(out);
    F::run_r2c(rows_there_, const_cast<Real*>(in), c);  // planned with FFTW_PRESERVE_INPUT
    std::fill(out + 2 * static_cast<std::ptrdiff_t>(half_) * rows_, out + 2 * static_cast<std::ptrdiff_t>(half_) * ps_,
              Real{0});
    F::run_c2c(columns_there_, c, c);
  }
  void backward(Real* in, Real* out) const override {
    auto* c = reinterpret_cast<Complex*>(in);
    F::run_c2c(columns_back_, c, c);
    F::run_c2r(rows_back_, c, out);
  }

 private:
  int px_, ps_, rows_, half_;
  typename F::Plan rows_there_{}, rows_back_{}, columns_there_{}, columns_back_{};
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
