// Convolution of a tangential traction with a 2x2 kernel on a box of cells, the two components carried as the real and
// the imaginary part of one complex transform.
#pragma once

#include <complex>
#include <functional>
#include <memory>
#include <vector>

namespace runband::halfspace {

/// The complex transform of a box nx x ns held in a padded rectangle px x ps. The rows that padding leaves empty are
/// not transformed, and the column pass transposes on the way, so that its memory accesses stay in cache. Immutable;
/// shared by threads without a lock. Plans are estimated, never measured: the same plan, hence the same bits, each
/// time.
template <typename Real>
class PairTransform {
 public:
  /// From the cache.
  static std::shared_ptr<const PairTransform> of_size(int nx, int ns, int px, int ps);
  PairTransform(int nx, int ns, int px, int ps);
  ~PairTransform();
  PairTransform(const PairTransform&) = delete;
  PairTransform& operator=(const PairTransform&) = delete;

  /// Complex numbers of the rectangle (row-major ps x stride) and of the spectrum (row-major px x spectrum stride).
  std::size_t rectangle_size() const;
  std::size_t spectrum_size() const;
  std::size_t stride() const { return stride_; }
  std::size_t spectrum_stride() const { return spectrum_stride_; }
  int px() const { return px_; }
  int ps() const { return ps_; }
  /// Unnormalised. Rows 0..ns-1 of `rectangle` must be filled over px (padding with zeros) and are destroyed; rows from
  /// ns on must be zero and stay so.
  void forward(std::complex<Real>* rectangle, std::complex<Real>* spectrum) const;
  /// Fills rows 0..ns-1 only; the rest is garbage.
  void backward(std::complex<Real>* spectrum, std::complex<Real>* rectangle) const;

 private:
  int nx_, ns_, px_, ps_;
  std::size_t stride_, spectrum_stride_;
  void* row_forward_;
  void* row_backward_;
  void* column_forward_;
  void* column_backward_;
};

/// Aligned complex storage.
template <typename Real>
class ComplexBuffer {
 public:
  ComplexBuffer() = default;
  explicit ComplexBuffer(std::size_t n, bool zero = true);
  std::complex<Real>* data() { return data_.get(); }
  const std::complex<Real>* data() const { return data_.get(); }
  std::size_t size() const { return size_; }

 private:
  struct Free {
    std::size_t bytes = 0;
    void operator()(std::complex<Real>* p) const;
  };
  std::unique_ptr<std::complex<Real>[], Free> data_;
  std::size_t size_ = 0;
};

/// Scratch of one caller; grows as needed and may serve convolutions of several sizes in turn.
template <typename Real>
struct PairScratch {
  ComplexBuffer<Real> rectangle, spectrum;
};

/// Symbol of a symmetric 2x2 kernel: with z = q_x + i q_s, u_x + i u_s has the transform
/// alpha(k) Z(k) + beta(k) conj(Z(-k)), alpha = (A_xx + A_ss) / 2, beta = (A_xx - A_ss) / 2 + i A_xs.
template <typename Real>
class PairConvolution {
 public:
  PairConvolution() = default;
  /// @param alpha, beta  Laid out as the transform's spectrum, already divided by px * ps.
  PairConvolution(std::shared_ptr<const PairTransform<Real>> transform, int nx, int ns,
                  const ComplexBuffer<double>& alpha, const ComplexBuffer<double>& beta);

  /// @param in, out  ns x nx pairs (x, s), row-major. May be the same.
  void apply(const Real* in, Real* out, PairScratch<Real>& scratch) const;
  std::size_t points() const { return transform_->spectrum_size(); }

 private:
  std::shared_ptr<const PairTransform<Real>> transform_;
  int nx_ = 0, ns_ = 0;
  ComplexBuffer<Real> alpha_, beta_;
};

/// Smallest length >= n that the library transforms well: 2^k and 3 2^k, 5 2^k, 9 2^k.
int pair_transform_length(int n);

}  // namespace runband::halfspace
