#include "core/halfspace/rolling_linear.h"

#include <algorithm>
#include <cmath>

namespace runband::halfspace {
namespace {

// Sixteen partial sums: vectorises, and keeps the rounding error of long float sums small.
double dot(const float* a, const float* b, std::size_t n) {
  constexpr std::size_t kLanes = 16;
  float lane[kLanes] = {};
  double total = 0;
  std::size_t i = 0;
  while (i + kLanes <= n) {
    const std::size_t stop = std::min(n, i + 256 * kLanes);
    std::fill(lane, lane + kLanes, 0.0F);
    for (; i + kLanes <= stop; i += kLanes) {
      for (std::size_t k = 0; k < kLanes; ++k) lane[k] += a[i + k] * b[i + k];
    }
    for (const float v : lane) total += static_cast<double>(v);
  }
  for (; i < n; ++i) total += static_cast<double>(a[i]) * static_cast<double>(b[i]);
  return total;
}

void add(float factor, const float* from, float* to, std::size_t n) {
  for (std::size_t i = 0; i < n; ++i) to[i] += factor * from[i];
}

}  // namespace

void LinearSystem::restrict_to_free(float* v) const {
  const std::size_t n = level->cells();
  for (std::size_t c = 0; c < n; ++c) {
    // In stick cells t = 0 and the mask is 1; in slip cells the mask is 0 and v becomes t (t.v).
    const float tx = tangent[2 * c], ts = tangent[2 * c + 1];
    const float along = tx * v[2 * c] + ts * v[2 * c + 1];
    v[2 * c] = mask[2 * c] * v[2 * c] + tx * along;
    v[2 * c + 1] = mask[2 * c + 1] * v[2 * c + 1] + ts * along;
  }
}

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

void LinearSystem::precondition(const float* in, float* out, PairScratch<float>& scratch) const {
  const int nx = level->nx(), ns = level->ns();
  const auto d = static_cast<float>(level->op->own_xx());
  const auto inverse_kappa = static_cast<float>(1.0 / (2.0 * level->op->influence_own()));
  const SlipStencil& stencil = level->op->shape().stencil;
  const auto c0 = static_cast<float>(stencil.here), c1 = static_cast<float>(stencil.ahead),
             c2 = static_cast<float>(stencil.ahead2);
  const auto damping = static_cast<float>(sigma) * inverse_kappa;
  for (int j = 0; j < ns; ++j) {
    float x1 = 0, s1 = 0, x2 = 0, s2 = 0;
    const std::size_t row = static_cast<std::size_t>(j) * static_cast<std::size_t>(nx);
    for (int i = nx - 1; i >= 0; --i) {
      const std::size_t c = row + static_cast<std::size_t>(i);
      float x = 0, s = 0;
      if (weight[2 * c] > 0) {
        const float fx = c1 * x1 - c2 * x2 + d / weight[2 * c] * in[2 * c];
        const float fs = c1 * s1 - c2 * s2 + d / weight[2 * c + 1] * in[2 * c + 1];
        const float tx = tangent[2 * c], ts = tangent[2 * c + 1], along = tx * fx + ts * fs;
        x = (mask[2 * c] * fx + tx * along) / (c0 + damping + own[2 * c] * inverse_kappa);
        s = (mask[2 * c + 1] * fs + ts * along) / (c0 + damping + own[2 * c + 1] * inverse_kappa);
      }
      out[2 * c] = x;
      out[2 * c + 1] = s;
      x2 = x1, s2 = s1, x1 = x, s1 = s;
    }
  }
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
    for (std::size_t i = 0; i <= k; ++i) {
      const float* v = vectors.basis[i].data();
      column[i] = dot(w, v, n);
      add(static_cast<float>(-column[i]), v, w, n);
    }
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
  for (std::size_t j = 0; j < k; ++j)
    add(static_cast<float>(start * y[j]), vectors.directions[j].data(), solution.data(), n);
  return result;
}

}  // namespace runband::halfspace
