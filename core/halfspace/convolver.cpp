#include "core/halfspace/convolver.h"

#include <algorithm>
#include <cstring>

namespace runband::halfspace {

namespace {

std::size_t size(int n) { return static_cast<std::size_t>(n); }

// The kernel wrapped onto a periodic box px by ps; its transform is real for a kernel even or odd in both offsets.
FftBuffer<double> real_symbol(int nx, int ns, std::span<const double> table, double sign, int px, int ps) {
  const auto plan = Transform<double>::of_size(px, ps);
  const auto kernel = fft_alloc<double>(size(px) * size(ps));
  const int top_i = std::min(nx - 1, px / 2), top_j = std::min(ns - 1, ps / 2);
  for (int j = 0; j <= top_j; ++j) {
    for (int i = 0; i <= top_i; ++i) {
      const double k = table[size(j) * size(nx) + size(i)];
      const int back_i = (px - i) % px, back_j = (ps - j) % ps;
      kernel[size(j) * size(px) + size(i)] = k;
      if (back_i != i) kernel[size(j) * size(px) + size(back_i)] = sign * k;
      if (back_j != j) kernel[size(back_j) * size(px) + size(i)] = sign * k;
      if (back_i != i && back_j != j) kernel[size(back_j) * size(px) + size(back_i)] = k;
    }
  }
  const auto spectrum = fft_alloc<double>(2 * size(plan->spectrum_size()));
  plan->forward(kernel.get(), spectrum.get());
  auto symbol = fft_alloc<double>(size(plan->spectrum_size()));
  for (std::size_t k = 0; k < size(plan->spectrum_size()); ++k) symbol[k] = spectrum[2 * k];
  return symbol;
}

template <typename Real>
void multiply(const Real* symbol, Real* spectrum, int count) {
  for (int k = 0; k < count; ++k) {
    spectrum[2 * k] *= symbol[k];
    spectrum[2 * k + 1] *= symbol[k];
  }
}

}  // namespace

int friendly_size(int n) {
  int candidate = 8 * ((std::max(n, 8) + 7) / 8);
  while (fast_size(candidate) != candidate) candidate += 8;
  return candidate;
}

template <typename Real>
Convolver<Real>::Convolver(int nx, int ns, std::span<const double> table, Parity parity, double scale)
    : nx_(nx), ns_(ns) {
  const int px = fast_size(2 * nx - 1), ps = fast_size(2 * ns - 1);
  plan_ = Transform<Real>::of_size(px, ps, ns);
  const auto exact = real_symbol(nx, ns, table, parity == Parity::even ? 1.0 : -1.0, px, ps);
  symbol_ = fft_alloc<Real>(size(plan_->spectrum_size()));
  const double factor = scale / (static_cast<double>(px) * ps);
  for (std::size_t k = 0; k < size(plan_->spectrum_size()); ++k) symbol_[k] = static_cast<Real>(factor * exact[k]);
}

template <typename Real>
typename Convolver<Real>::Workspace Convolver<Real>::workspace() const {
  return {fft_alloc<Real>(size(plan_->px()) * size(plan_->rows())), fft_alloc<Real>(2 * size(plan_->spectrum_size()))};
}

template <typename Real>
void Convolver<Real>::apply(const Real* p, Real* u, Workspace& work) const {
  const std::size_t px = size(plan_->px()), nx = size(nx_);
  for (std::size_t j = 0; j < size(ns_); ++j) {
    Real* row = work.padded.get() + j * px;
    std::memcpy(row, p + j * nx, nx * sizeof(Real));
    std::fill(row + nx, row + px, Real{0});
  }
  plan_->forward(work.padded.get(), work.spectrum.get());
  multiply(symbol_.get(), work.spectrum.get(), plan_->spectrum_size());
  plan_->backward(work.spectrum.get(), work.padded.get());
  for (std::size_t j = 0; j < size(ns_); ++j) std::memcpy(u + j * nx, work.padded.get() + j * px, nx * sizeof(Real));
}

template <typename Real>
CirculantInverse<Real>::CirculantInverse(int nx, int ns, std::span<const double> table) : nx_(nx), ns_(ns) {
  plan_ = Transform<Real>::of_size(nx, ns);
  const auto exact = real_symbol(nx, ns, table, 1.0, nx, ns);
  symbol_ = fft_alloc<Real>(size(plan_->spectrum_size()));
  const double* values = exact.get();
  const double largest = *std::max_element(values, values + plan_->spectrum_size());
  for (std::size_t k = 0; k < size(plan_->spectrum_size()); ++k) {
    // Positive for Love's kernel; the floor only guards other kernels.
    symbol_[k] = static_cast<Real>(1.0 / (std::max(exact[k], 1e-6 * largest) * nx * ns));
  }
}

template <typename Real>
typename CirculantInverse<Real>::Workspace CirculantInverse<Real>::workspace() const {
  return {fft_alloc<Real>(size(nx_) * size(ns_)), fft_alloc<Real>(2 * size(plan_->spectrum_size()))};
}

template <typename Real>
void CirculantInverse<Real>::apply(const Real* p, Real* u, Workspace& work) const {
  std::memcpy(work.padded.get(), p, size(nx_) * size(ns_) * sizeof(Real));
  plan_->forward(work.padded.get(), work.spectrum.get());
  multiply(symbol_.get(), work.spectrum.get(), plan_->spectrum_size());
  plan_->backward(work.spectrum.get(), work.padded.get());
  std::memcpy(u, work.padded.get(), size(nx_) * size(ns_) * sizeof(Real));
}

template class Convolver<float>;
template class Convolver<double>;
template class CirculantInverse<float>;
template class CirculantInverse<double>;

}  // namespace runband::halfspace
