// Transforms against the defining sum, in both precisions, with padded rows left out, and from several threads at once.
#include <gtest/gtest.h>

#include <complex>
#include <cstring>
#include <numbers>
#include <random>
#include <thread>
#include <vector>

#include "core/halfspace/fft.h"

namespace runband::halfspace {
namespace {

template <typename Real>
class TransformOf : public testing::Test {};
using Precisions = testing::Types<float, double>;
TYPED_TEST_SUITE(TransformOf, Precisions);

TEST(FastSize, HasNoFactorAboveSeven) {
  EXPECT_EQ(fast_size(0), 1);
  EXPECT_EQ(fast_size(11), 12);
  EXPECT_EQ(fast_size(97), 98);
  EXPECT_EQ(fast_size(127), 128);
  EXPECT_EQ(fast_size(257), 270);
}

TYPED_TEST(TransformOf, EqualsItsDefiningSum) {
  constexpr int px = 12, ps = 10, rows = 4;
  const auto plan = Transform<TypeParam>::of_size(px, ps, rows);
  auto real = fft_alloc<TypeParam>(px * rows), spectrum = fft_alloc<TypeParam>(2 * std::size_t(plan->spectrum_size()));
  std::mt19937 random(3);
  std::uniform_real_distribution<double> value(-1, 1);
  for (int k = 0; k < px * rows; ++k) real[std::size_t(k)] = static_cast<TypeParam>(value(random));
  plan->forward(real.get(), spectrum.get());
  const double tolerance = sizeof(TypeParam) == 4 ? 2e-6 * px * rows : 1e-15 * px * rows;
  for (int v = 0; v < ps; ++v) {
    for (int u = 0; u <= px / 2; ++u) {
      std::complex<double> sum = 0;
      for (int j = 0; j < rows; ++j) {
        for (int i = 0; i < px; ++i) {
          const double phase = -2 * std::numbers::pi * (double(u * i) / px + double(v * j) / ps);
          sum += double(real[std::size_t(j * px + i)]) * std::polar(1.0, phase);
        }
      }
      const auto at = 2 * std::size_t(v * (px / 2 + 1) + u);
      EXPECT_NEAR(spectrum[at], sum.real(), tolerance);
      EXPECT_NEAR(spectrum[at + 1], sum.imag(), tolerance);
    }
  }
  auto back = fft_alloc<TypeParam>(px * rows);
  plan->backward(spectrum.get(), back.get());
  for (int k = 0; k < px * rows; ++k) EXPECT_NEAR(back[std::size_t(k)] / (px * ps), real[std::size_t(k)], tolerance);
}

TYPED_TEST(TransformOf, GivesTheSameBitsFromSeveralThreadsThatAlsoPlan) {
  constexpr int n = 60;
  std::vector<std::vector<TypeParam>> results(8);
  {
    std::vector<std::jthread> threads;
    for (std::size_t t = 0; t < results.size(); ++t) {
      threads.emplace_back([&results, t] {
        for (int other = 20; other < 50; other += 3) Transform<TypeParam>::of_size(other, fast_size(other + int(t)));
        const auto plan = Transform<TypeParam>::of_size(n, n, n / 2);
        auto in = fft_alloc<TypeParam>(n * n), out = fft_alloc<TypeParam>(2 * std::size_t(plan->spectrum_size()));
        std::mt19937 random(1);
        for (int k = 0; k < n * n / 2; ++k) in[std::size_t(k)] = static_cast<TypeParam>(random() % 1000);
        plan->forward(in.get(), out.get());
        plan->backward(out.get(), in.get());
        results[t].assign(in.get(), in.get() + n * n / 2);
      });
    }
  }
  for (const auto& r : results) {
    EXPECT_EQ(0, std::memcmp(r.data(), results[0].data(), r.size() * sizeof(TypeParam)));
  }
}

}  // namespace
}  // namespace runband::halfspace
