#include "core/halfspace/rolling_convolution.h"

#include <fftw3.h>

#include <algorithm>
#include <array>
#include <bit>
#include <cstring>
#include <map>
#include <mutex>
#include <tuple>
#include <type_traits>

namespace runband::halfspace {
namespace {

// FFTW's planner is not thread-safe (its manual, "Thread safety"); its execution with new arrays is.
std::mutex& planner_mutex() {
  static std::mutex m;
  return m;
}

// Rows a multiple of a large power of two apart would share cache sets: a few numbers of padding keep them apart.
constexpr std::size_t kStridePadding = 4;

template <typename Real>
void* make_plan(int length, int howmany, int in_stride, int in_distance, int out_stride, int out_distance,
                bool in_place, std::size_t in_size, std::size_t out_size, int sign) {
  const int n[1] = {length};
  ComplexBuffer<Real> in(in_size, false), out(in_place ? 1 : out_size, false);
  std::complex<Real>* to = in_place ? in.data() : out.data();
  if constexpr (std::is_same_v<Real, float>) {
    auto* a = reinterpret_cast<fftwf_complex*>(in.data());
    auto* b = reinterpret_cast<fftwf_complex*>(to);
    return fftwf_plan_many_dft(1, n, howmany, a, nullptr, in_stride, in_distance, b, nullptr, out_stride, out_distance,
                               sign, FFTW_ESTIMATE);
  } else {
    auto* a = reinterpret_cast<fftw_complex*>(in.data());
    auto* b = reinterpret_cast<fftw_complex*>(to);
    return fftw_plan_many_dft(1, n, howmany, a, nullptr, in_stride, in_distance, b, nullptr, out_stride, out_distance,
                              sign, FFTW_ESTIMATE);
  }
}

template <typename Real>
void run_plan(void* plan, std::complex<Real>* in, std::complex<Real>* out) {
  if constexpr (std::is_same_v<Real, float>) {
    fftwf_execute_dft(static_cast<fftwf_plan>(plan), reinterpret_cast<fftwf_complex*>(in),
                      reinterpret_cast<fftwf_complex*>(out));
  } else {
    fftw_execute_dft(static_cast<fftw_plan>(plan), reinterpret_cast<fftw_complex*>(in),
                     reinterpret_cast<fftw_complex*>(out));
  }
}

template <typename Real>
void destroy_plan(void* plan) {
  if constexpr (std::is_same_v<Real, float>) {
    fftwf_destroy_plan(static_cast<fftwf_plan>(plan));
  } else {
    fftw_destroy_plan(static_cast<fftw_plan>(plan));
  }
}

}  // namespace

namespace {

// Buffers may outlive their thread's pool (other thread-local objects hold some): then they go straight back.
thread_local bool pool_is_gone = false;

/// Freed buffers of one thread, kept by size: a solve makes and drops a dozen, and giving them back to the system each
/// time costs as much as transforming them.
class BufferPool {
 public:
  BufferPool() = default;
  BufferPool(const BufferPool&) = delete;
  BufferPool& operator=(const BufferPool&) = delete;
  ~BufferPool() {
    for (auto& shelf : shelves_) {
      for (void* p : shelf) fftw_free(p);
    }
    pool_is_gone = true;
  }
  /// Of at least `bytes`, content undefined.
  void* take(std::size_t bytes) {
    auto& shelf = shelves_[shelf_of(bytes)];
    if (shelf.empty()) {
      void* p = fftw_malloc(std::size_t{1} << shelf_of(bytes));
      if (p == nullptr) throw std::bad_alloc();
      return p;
    }
    void* p = shelf.back();
    shelf.pop_back();
    held_ -= std::size_t{1} << shelf_of(bytes);
    return p;
  }
  void give(void* p, std::size_t bytes) {
    const std::size_t size = std::size_t{1} << shelf_of(bytes);
    if (held_ + size > kMostHeld) return fftw_free(p);
    held_ += size;
    shelves_[shelf_of(bytes)].push_back(p);
  }

 private:
  static constexpr std::size_t kMostHeld = std::size_t{64} << 20;
  static std::size_t shelf_of(std::size_t bytes) {
    return std::max<std::size_t>(8, static_cast<std::size_t>(std::bit_width(bytes - 1)));
  }
  std::array<std::vector<void*>, 48> shelves_;
  std::size_t held_ = 0;
};

BufferPool& pool() {
  thread_local BufferPool p;
  return p;
}

}  // namespace

template <typename Real>
ComplexBuffer<Real>::ComplexBuffer(std::size_t n, bool zero) : size_(n) {
  const std::size_t bytes = std::max<std::size_t>(n, 1) * sizeof(std::complex<Real>);
  auto* raw = static_cast<std::complex<Real>*>(pool().take(bytes));
  if (zero) std::memset(static_cast<void*>(raw), 0, bytes);
  data_ = {raw, Free{bytes}};
}

template <typename Real>
void ComplexBuffer<Real>::Free::operator()(std::complex<Real>* p) const {
  if (pool_is_gone) return fftw_free(p);
  pool().give(p, bytes);
}

int pair_transform_length(int n) {
  for (int m = std::max(n, 4);; ++m) {
    int odd = m;
    while (odd % 2 == 0) odd /= 2;
    if (odd == 1 || odd == 3 || odd == 5 || odd == 9) {
      if (m % 4 == 0) return m;
    }
  }
}

template <typename Real>
PairTransform<Real>::PairTransform(int nx, int ns, int px, int ps)
    : nx_(nx),
      ns_(ns),
      px_(px),
      ps_(ps),
      stride_(static_cast<std::size_t>(px) + kStridePadding),
      spectrum_stride_(static_cast<std::size_t>(ps) + kStridePadding) {
  const int row = static_cast<int>(stride_), column = static_cast<int>(spectrum_stride_);
  const std::size_t r = rectangle_size(), s = spectrum_size();
  row_forward_ = make_plan<Real>(px, ns, 1, row, 1, row, true, r, r, FFTW_FORWARD);
  row_backward_ = make_plan<Real>(px, ns, 1, row, 1, row, true, r, r, FFTW_BACKWARD);
  column_forward_ = make_plan<Real>(ps, px, row, 1, 1, column, false, r, s, FFTW_FORWARD);
  column_backward_ = make_plan<Real>(ps, px, 1, column, row, 1, false, s, r, FFTW_BACKWARD);
}

template <typename Real>
PairTransform<Real>::~PairTransform() {
  const std::lock_guard lock(planner_mutex());
  for (void* plan : {row_forward_, row_backward_, column_forward_, column_backward_}) destroy_plan<Real>(plan);
}

template <typename Real>
std::shared_ptr<const PairTransform<Real>> PairTransform<Real>::of_size(int nx, int ns, int px, int ps) {
  using Key = std::tuple<int, int, int, int>;
  static auto& cache = *new std::map<Key, std::shared_ptr<const PairTransform>>();  // lives as long as the process
  const std::lock_guard lock(planner_mutex());
  auto& entry = cache[Key{nx, ns, px, ps}];
  if (!entry) entry = std::make_shared<const PairTransform>(nx, ns, px, ps);
  return entry;
}

template <typename Real>
std::size_t PairTransform<Real>::rectangle_size() const {
  return stride_ * static_cast<std::size_t>(ps_);
}

template <typename Real>
std::size_t PairTransform<Real>::spectrum_size() const {
  return spectrum_stride_ * static_cast<std::size_t>(px_);
}

template <typename Real>
void PairTransform<Real>::forward(std::complex<Real>* rectangle, std::complex<Real>* spectrum) const {
  run_plan<Real>(row_forward_, rectangle, rectangle);
  run_plan<Real>(column_forward_, rectangle, spectrum);
}

template <typename Real>
void PairTransform<Real>::backward(std::complex<Real>* spectrum, std::complex<Real>* rectangle) const {
  run_plan<Real>(column_backward_, spectrum, rectangle);
  run_plan<Real>(row_backward_, rectangle, rectangle);
}

template <typename Real>
PairConvolution<Real>::PairConvolution(std::shared_ptr<const PairTransform<Real>> transform, int nx, int ns,
                                       const ComplexBuffer<double>& alpha, const ComplexBuffer<double>& beta)
    : transform_(std::move(transform)), nx_(nx), ns_(ns), alpha_(alpha.size(), false), beta_(beta.size(), false) {
  for (std::size_t i = 0; i < alpha.size(); ++i) {
    alpha_.data()[i] = static_cast<std::complex<Real>>(alpha.data()[i]);
    beta_.data()[i] = static_cast<std::complex<Real>>(beta.data()[i]);
  }
}

namespace {

// A vector register of complex numbers: four of float, two of double.
template <typename Real>
struct Packed;

template <>
struct Packed<float> {
  static constexpr int kCount = 4;
  typedef float V __attribute__((vector_size(32)));
  static V reversed(V v) { return __builtin_shufflevector(v, v, 6, 7, 4, 5, 2, 3, 0, 1); }
  static V swapped(V v) { return __builtin_shufflevector(v, v, 1, 0, 3, 2, 5, 4, 7, 6); }
  static V real(V v) { return __builtin_shufflevector(v, v, 0, 0, 2, 2, 4, 4, 6, 6); }
  static V imag(V v) { return __builtin_shufflevector(v, v, 1, 1, 3, 3, 5, 5, 7, 7); }
  static V minus_plus() { return V{-1, 1, -1, 1, -1, 1, -1, 1}; }
};

template <>
struct Packed<double> {
  static constexpr int kCount = 2;
  typedef double V __attribute__((vector_size(32)));
  static V reversed(V v) { return __builtin_shufflevector(v, v, 2, 3, 0, 1); }
  static V swapped(V v) { return __builtin_shufflevector(v, v, 1, 0, 3, 2); }
  static V real(V v) { return __builtin_shufflevector(v, v, 0, 0, 2, 2); }
  static V imag(V v) { return __builtin_shufflevector(v, v, 1, 1, 3, 3); }
  static V minus_plus() { return V{-1, 1, -1, 1}; }
};

template <typename Real>
typename Packed<Real>::V load(const Real* p) {
  typename Packed<Real>::V v;
  std::memcpy(&v, p, sizeof v);
  return v;
}

template <typename Real>
void store(Real* p, typename Packed<Real>::V v) {
  std::memcpy(p, &v, sizeof v);
}

/// a z + b conj(y)
template <typename P>
typename P::V combine(typename P::V a, typename P::V z, typename P::V b, typename P::V y) {
  return P::real(a) * z + P::minus_plus() * (P::imag(a) * P::swapped(z) - P::real(b) * y) + P::imag(b) * P::swapped(y);
}

// y(k) = alpha(k) z(k) + beta(k) conj(z(-k)) for the two rows kx and -kx at once, in place.
template <typename Real>
void multiply_rows(const Real* a0, const Real* b0, const Real* a1, const Real* b1, Real* z0, Real* z1, int ps) {
  const auto one = [&](int k, int m) {
    const Real zr = z0[2 * k], zi = z0[2 * k + 1];
    const Real yr = z1[2 * m], yi = z1[2 * m + 1];
    z0[2 * k] = a0[2 * k] * zr - a0[2 * k + 1] * zi + b0[2 * k] * yr + b0[2 * k + 1] * yi;
    z0[2 * k + 1] = a0[2 * k] * zi + a0[2 * k + 1] * zr - b0[2 * k] * yi + b0[2 * k + 1] * yr;
    z1[2 * m] = a1[2 * m] * yr - a1[2 * m + 1] * yi + b1[2 * m] * zr + b1[2 * m + 1] * zi;
    z1[2 * m + 1] = a1[2 * m] * yi + a1[2 * m + 1] * yr - b1[2 * m] * zi + b1[2 * m + 1] * zr;
  };
  using P = Packed<Real>;
  one(0, 0);
  int k = 1;
  for (; k + P::kCount <= ps; k += P::kCount) {
    const int m = ps - k - (P::kCount - 1);
    const auto z = load(z0 + 2 * k), y = load(z1 + 2 * m);
    store(z0 + 2 * k, combine<P>(load(a0 + 2 * k), z, load(b0 + 2 * k), P::reversed(y)));
    store(z1 + 2 * m, combine<P>(load(a1 + 2 * m), y, load(b1 + 2 * m), P::reversed(z)));
  }
  for (; k < ps; ++k) one(k, ps - k);
}

template <typename Real>
void multiply_own_row(const Real* a, const Real* b, Real* z, int ps) {
  for (int k = 0; k <= ps / 2; ++k) {
    const int m = (ps - k) % ps;
    const Real zr = z[2 * k], zi = z[2 * k + 1], yr = z[2 * m], yi = z[2 * m + 1];
    z[2 * k] = a[2 * k] * zr - a[2 * k + 1] * zi + b[2 * k] * yr + b[2 * k + 1] * yi;
    z[2 * k + 1] = a[2 * k] * zi + a[2 * k + 1] * zr - b[2 * k] * yi + b[2 * k + 1] * yr;
    if (m == k) continue;
    z[2 * m] = a[2 * m] * yr - a[2 * m + 1] * yi + b[2 * m] * zr + b[2 * m + 1] * zi;
    z[2 * m + 1] = a[2 * m] * yi + a[2 * m + 1] * yr - b[2 * m] * zi + b[2 * m + 1] * zr;
  }
}

}  // namespace

template <typename Real>
void PairConvolution<Real>::apply(const Real* in, Real* out, PairScratch<Real>& scratch) const {
  const auto& t = *transform_;
  const int px = t.px(), ps = t.ps();
  if (scratch.rectangle.size() < t.rectangle_size()) scratch.rectangle = ComplexBuffer<Real>(t.rectangle_size(), false);
  if (scratch.spectrum.size() < t.spectrum_size()) scratch.spectrum = ComplexBuffer<Real>(t.spectrum_size(), false);
  auto* r = reinterpret_cast<Real*>(scratch.rectangle.data());
  const std::size_t row = 2 * t.stride(), box_row = 2 * static_cast<std::size_t>(nx_);
  for (int j = 0; j < ps; ++j) {
    Real* to = r + static_cast<std::size_t>(j) * row;
    if (j < ns_) {
      const Real* from = in + static_cast<std::size_t>(j) * box_row;
      std::copy(from, from + box_row, to);
      std::fill(to + box_row, to + 2 * px, Real(0));
    } else {
      std::fill(to, to + 2 * px, Real(0));
    }
  }
  t.forward(scratch.rectangle.data(), scratch.spectrum.data());
  auto* z = reinterpret_cast<Real*>(scratch.spectrum.data());
  const auto* a = reinterpret_cast<const Real*>(alpha_.data());
  const auto* b = reinterpret_cast<const Real*>(beta_.data());
  const std::size_t column = 2 * t.spectrum_stride();
  multiply_own_row(a, b, z, ps);
  const std::size_t half = static_cast<std::size_t>(px / 2) * column;
  multiply_own_row(a + half, b + half, z + half, ps);
  for (int k = 1; k < px / 2; ++k) {
    const std::size_t k0 = static_cast<std::size_t>(k) * column, k1 = static_cast<std::size_t>(px - k) * column;
    multiply_rows(a + k0, b + k0, a + k1, b + k1, z + k0, z + k1, ps);
  }
  t.backward(scratch.spectrum.data(), scratch.rectangle.data());
  for (int j = 0; j < ns_; ++j) {
    const Real* from = r + static_cast<std::size_t>(j) * row;
    std::copy(from, from + box_row, out + static_cast<std::size_t>(j) * box_row);
  }
}

template class PairTransform<float>;
template class PairTransform<double>;
template class ComplexBuffer<float>;
template class ComplexBuffer<double>;
template class PairConvolution<float>;
template class PairConvolution<double>;

}  // namespace runband::halfspace
