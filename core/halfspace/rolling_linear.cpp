#include "core/halfspace/rolling_linear.h"

#include <algorithm>
#include <cmath>
#include <cstring>

namespace runband::halfspace {
namespace {

typedef float Eight __attribute__((vector_size(32)));

Eight load8(const float* p) {
  Eight v;
  std::memcpy(&v, p, sizeof v);
  return v;
}
void store8(float* p, Eight v) { std::memcpy(p, &v, sizeof v); }
double sum8(Eight v) {
  double sum = 0;
  for (int k = 0; k < 8; ++k) sum += static_cast<double>(v[k]);
  return sum;
}

// Sums are carried in single precision over at most this many values, then in double: keeps long sums accurate.
constexpr std::size_t kRun = 2048;
constexpr std::size_t kTogether = 4;

/// out[k] = w . v[k] for up to kTogether vectors in one pass over w.
template <std::size_t K>
void dots(const float* w, const float* const* v, std::size_t n, double* out) {
  std::fill(out, out + K, 0.0);
  std::size_t i = 0;
  while (i + 16 <= n) {
    const std::size_t stop = std::min(n, i + kRun);
    Eight a[K] = {}, b[K] = {};
    for (; i + 16 <= stop; i += 16) {
      const Eight w0 = load8(w + i), w1 = load8(w + i + 8);
      for (std::size_t k = 0; k < K; ++k) {
        a[k] += w0 * load8(v[k] + i);
        b[k] += w1 * load8(v[k] + i + 8);
      }
    }
    for (std::size_t k = 0; k < K; ++k) out[k] += sum8(a[k] + b[k]);
  }
  for (; i < n; ++i) {
    for (std::size_t k = 0; k < K; ++k) out[k] += static_cast<double>(w[i]) * static_cast<double>(v[k][i]);
  }
}

double dot(const float* a, const float* b, std::size_t n) {
  double out = 0;
  dots<1>(a, &b, n, &out);
  return out;
}

/// to += sum_k factor[k] from[k].
template <std::size_t K>
void add(const double* factor, const float* const* from, float* to, std::size_t n) {
  float f[K];
  for (std::size_t k = 0; k < K; ++k) f[k] = static_cast<float>(factor[k]);
  std::size_t i = 0;
  for (; i + 8 <= n; i += 8) {
    Eight t = load8(to + i);
    for (std::size_t k = 0; k < K; ++k) t += f[k] * load8(from[k] + i);
    store8(to + i, t);
  }
  for (; i < n; ++i) {
    for (std::size_t k = 0; k < K; ++k) to[i] += f[k] * from[k][i];
  }
}

/// Makes w orthogonal to `count` vectors, kTogether at a time (modified Gram-Schmidt between the groups).
void orthogonalise(float* w, const std::vector<std::vector<float>>& basis, std::size_t count, std::size_t n,
                   double* h) {
  const auto group = [&]<std::size_t K>(std::size_t first) {
    const float* v[K];
    double minus[K];
    for (std::size_t k = 0; k < K; ++k) v[k] = basis[first + k].data();
    dots<K>(w, v, n, h + first);
    for (std::size_t k = 0; k < K; ++k) minus[k] = -h[first + k];
    add<K>(minus, v, w, n);
  };
  std::size_t i = 0;
  for (; i + kTogether <= count; i += kTogether) group.template operator()<kTogether>(i);
  for (; i < count; ++i) group.template operator()<1>(i);
}

}  // namespace

void LinearSystem::apply(const float* in, float* out, PairScratch<float>& scratch) const {
  level->op->apply(in, out, scratch);
  const std::size_t n = level->cells();
  const auto inverse_d = static_cast<float>(1.0 / level->op->own_xx()), damping = static_cast<float>(sigma);
  for (std::size_t c = 0; c < n; ++c) {
    const float tx = tangent[2 * c], ts = tangent[2 * c + 1];
    const float x = weight[2 * c] * inverse_d * (out[2 * c] + (own[2 * c] + damping) * in[2 * c]);
    const float s = weight[2 * c + 1] * inverse_d * (out[2 * c + 1] + (own[2 * c + 1] + damping) * in[2 * c + 1]);
    const float along = tx * x + ts * s;
    out[2 * c] = mask[2 * c] * x + tx * along;
    out[2 * c + 1] = mask[2 * c + 1] * s + ts * along;
  }
}

template <int Strips>
void LinearSystem::integrate_strips(const float* in, float* out, int first) const {
  const auto nx = static_cast<std::size_t>(level->nx());
  const SlipStencil& stencil = level->op->shape().stencil;
  const auto c1 = static_cast<float>(stencil.ahead), c2 = static_cast<float>(stencil.ahead2);
  float x1[Strips] = {}, s1[Strips] = {}, x2[Strips] = {}, s2[Strips] = {};
  for (std::size_t i = nx; i-- > 0;) {
    for (int k = 0; k < Strips; ++k) {
      const std::size_t v = 2 * (static_cast<std::size_t>(first + k) * nx + i);
      // Outside contact the pivot is zero, which restarts the strip.
      const float fx = c1 * x1[k] - c2 * x2[k] + gain[v] * in[v];
      const float fs = c1 * s1[k] - c2 * s2[k] + gain[v + 1] * in[v + 1];
      const float tx = tangent[v], ts = tangent[v + 1], along = tx * fx + ts * fs;
      x2[k] = x1[k], s2[k] = s1[k];
      out[v] = x1[k] = pivot[v] * (mask[v] * fx + tx * along);
      out[v + 1] = s1[k] = pivot[v + 1] * (mask[v + 1] * fs + ts * along);
    }
  }
}

void LinearSystem::precondition(const float* in, float* out, PairScratch<float>& scratch) const {
  // Several strips abreast: each is a chain of dependent steps, together they fill the pipeline.
  int j = 0;
  for (; j + 4 <= level->ns(); j += 4) integrate_strips<4>(in, out, j);
  for (; j < level->ns(); ++j) integrate_strips<1>(in, out, j);
  level->op->solve_circulant(out, out, scratch);
  const std::size_t n = level->cells();
  for (std::size_t c = 0; c < n; ++c) {
    const float tx = tangent[2 * c], ts = tangent[2 * c + 1];
    const float x = weight[2 * c] * out[2 * c], s = weight[2 * c + 1] * out[2 * c + 1], along = tx * x + ts * s;
    out[2 * c] = mask[2 * c] * x + tx * along;
    out[2 * c + 1] = mask[2 * c + 1] * s + ts * along;
  }
}

KrylovResult solve_fgmres(const LinearSystem& system, const std::vector<float>& rhs, double tolerance,
                          int max_iterations, KrylovScratch& vectors, PairScratch<float>& scratch,
                          std::vector<float>& solution) {
  const std::size_t n = rhs.size();
  const auto m = static_cast<std::size_t>(max_iterations);
  const auto vector = [n](std::vector<std::vector<float>>& all, std::size_t k) {
    if (all.size() <= k) all.resize(k + 1);
    if (all[k].size() < n) all[k].resize(n);
    return all[k].data();
  };
  solution.assign(n, 0.0F);
  const double start = std::sqrt(dot(rhs.data(), rhs.data(), n));
  KrylovResult result;
  if (start == 0) {
    result.relative_residual = 0;
    return result;
  }
  const auto inverse_start = static_cast<float>(1.0 / start);
  float* first = vector(vectors.basis, 0);
  for (std::size_t i = 0; i < n; ++i) first[i] = rhs[i] * inverse_start;

  std::vector<double> h((m + 1) * m, 0.0), cosine(m), sine(m), g(m + 1, 0.0);  // h column-major
  g[0] = 1;
  std::size_t k = 0;
  for (; k < m; ++k) {
    float* z = vector(vectors.directions, k);
    float* w = vector(vectors.basis, k + 1);
    system.precondition(vectors.basis[k].data(), z, scratch);
    system.apply(z, w, scratch);
    double* column = h.data() + k * (m + 1);
    orthogonalise(w, vectors.basis, k + 1, n, column);
    const double length = std::sqrt(dot(w, w, n));
    column[k + 1] = length;
    if (length > 0) {
      const auto inverse = static_cast<float>(1.0 / length);
      for (std::size_t i = 0; i < n; ++i) w[i] *= inverse;
    }
    for (std::size_t i = 0; i < k; ++i) {
      const double a = column[i], b = column[i + 1];
      column[i] = cosine[i] * a + sine[i] * b;
      column[i + 1] = -sine[i] * a + cosine[i] * b;
    }
    const double r = std::hypot(column[k], column[k + 1]);
    cosine[k] = r > 0 ? column[k] / r : 1;
    sine[k] = r > 0 ? column[k + 1] / r : 0;
    column[k] = r;
    g[k + 1] = -sine[k] * g[k];
    g[k] *= cosine[k];
    result.relative_residual = std::abs(g[k + 1]);
    if (result.relative_residual <= tolerance || length == 0) {
      ++k;
      break;
    }
  }
  result.iterations = static_cast<int>(k);
  std::vector<double> y(k);
  for (std::size_t i = k; i-- > 0;) {
    double sum = g[i];
    for (std::size_t j = i + 1; j < k; ++j) sum -= h[j * (m + 1) + i] * y[j];
    const double pivot = h[i * (m + 1) + i];
    y[i] = pivot != 0 ? sum / pivot : 0;
  }
  for (std::size_t j = 0; j < k; ++j) {
    const double factor = start * y[j];
    const float* z = vectors.directions[j].data();
    add<1>(&factor, &z, solution.data(), n);
  }
  return result;
}

}  // namespace runband::halfspace
