// Two-dimensional convolution with a fixed kernel by zero-padded FFT. Plans are made once per size and shared.
#pragma once

#include <memory>
#include <vector>

namespace runband::halfspace {

/// Smallest size >= n whose only prime factors are 2, 3, 5, 7: transforms of such lengths are fast.
int fast_size(int n);

/// Real-to-complex transforms of one padded size, row-major [ns][nx], in single or double precision. Immutable after
/// construction and used from several threads at once without a lock; each caller brings its own buffers.
template <typename Real>
class Transform {
 public:
  /// From the cache (created on first use under a lock; planned with a cheap planner, never measured in a call).
  static std::shared_ptr<const Transform> of_size(int px, int ps);
  virtual ~Transform() = default;
  virtual int px() const = 0;
  virtual int ps() const = 0;
  virtual int spectrum_size() const = 0;  ///< ps * (px / 2 + 1) complex numbers
  /// Unnormalised. `in` ps*px reals, `out` spectrum_size() interleaved complex numbers; both from fft_alloc.
  virtual void forward(const Real* in, Real* out) const = 0;
  virtual void backward(Real* in, Real* out) const = 0;  ///< destroys `in`
};

/// Aligned storage for transforms.
template <typename Real>
struct FftDeleter {
  void operator()(Real* p) const;
};
template <typename Real>
using FftBuffer = std::unique_ptr<Real[], FftDeleter<Real>>;
template <typename Real>
FftBuffer<Real> fft_alloc(std::size_t reals);

}  // namespace runband::halfspace
