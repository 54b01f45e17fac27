// Two-dimensional real transforms for convolution by zero-padded FFT. Plans are made once per size and shared.
#pragma once

#include <cstddef>
#include <memory>

namespace runband::halfspace {

/// Smallest size >= n whose only prime factors are 2, 3, 5, 7: transforms of such lengths are fast. n < 1 gives 1.
int fast_size(int n);

/// Real-to-complex transforms of one padded size, row-major [ps][px], in single or double precision. Immutable after
/// construction and used from several threads at once without a lock; each caller brings its own buffers.
///
/// Zero padding leaves most rows empty. A transform made for `rows` < ps reads only the first `rows` rows on the way
/// there (the others count as zero) and writes only those on the way back, which saves about a quarter of the work.
template <typename Real>
class Transform {
 public:
  /// From the cache (created on first use under a lock; planned by FFTW's estimate, never measured in a call, so the
  /// same plan and the same bits come out every time).
  /// @param rows  rows that carry data, 1..ps; 0 means all.
  static std::shared_ptr<const Transform> of_size(int px, int ps, int rows = 0);
  virtual ~Transform() = default;
  virtual int px() const = 0;
  virtual int ps() const = 0;
  virtual int rows() const = 0;           ///< rows read and written
  virtual int spectrum_size() const = 0;  ///< ps * (px / 2 + 1) complex numbers, row-major [ps][px / 2 + 1]
  /// Unnormalised. `in` rows*px reals (kept), `out` spectrum_size() interleaved complex numbers; both from fft_alloc.
  virtual void forward(const Real* in, Real* out) const = 0;
  /// Unnormalised: backward(forward(p)) = px*ps*p. Destroys `in`; `out` rows*px reals.
  virtual void backward(Real* in, Real* out) const = 0;
};

/// Aligned storage for transforms.
template <typename Real>
struct FftDeleter {
  void operator()(Real* p) const;
};
template <typename Real>
using FftBuffer = std::unique_ptr<Real[], FftDeleter<Real>>;
/// `reals` numbers, zeroed. @throws std::bad_alloc.
template <typename Real>
FftBuffer<Real> fft_alloc(std::size_t reals);

}  // namespace runband::halfspace
