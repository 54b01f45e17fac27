// Convolution by FFT against the direct sum.
#include <gtest/gtest.h>

#include <cmath>
#include <random>
#include <vector>

#include "core/halfspace/convolver.h"
#include "core/halfspace/influence.h"

namespace runband::halfspace {
namespace {

std::vector<double> direct(int nx, int ns, const std::vector<double>& table, double sign,
                           const std::vector<double>& p) {
  std::vector<double> u(p.size(), 0.0);
  for (int j = 0; j < ns; ++j) {
    for (int i = 0; i < nx; ++i) {
      for (int l = 0; l < ns; ++l) {
        for (int k = 0; k < nx; ++k) {
          const double side = (i < k ? sign : 1.0) * (j < l ? sign : 1.0);
          u[std::size_t(j * nx + i)] +=
              side * table[std::size_t(std::abs(j - l) * nx + std::abs(i - k))] * p[std::size_t(l * nx + k)];
        }
      }
    }
  }
  return u;
}

template <typename Real>
void expect_direct(int nx, int ns, double tolerance) {
  const auto tables = cerruti_table(nx, ns, 1.0, 0.6, 0.3);
  const auto love = love_table(nx, ns, 1.0, 0.6);
  std::mt19937 random(5);
  std::uniform_real_distribution<double> value(-1, 1);
  std::vector<double> p(static_cast<std::size_t>(nx * ns));
  for (double& v : p) v = value(random);
  const std::vector<Real> in(p.begin(), p.end());
  for (const auto& [table, parity] : {std::pair{&love, Parity::even},
                                      {&tables.xx, Parity::even},
                                      {&tables.ss, Parity::even},
                                      {&tables.xs, Parity::odd}}) {
    const auto exact = direct(nx, ns, *table, parity == Parity::even ? 1.0 : -1.0, p);
    const Convolver<Real> convolver(nx, ns, *table, parity, 2.5);
    auto work = convolver.workspace();
    std::vector<Real> out(p.size());
    convolver.apply(in.data(), out.data(), work);
    double largest = 0;
    for (const double v : exact) largest = std::max(largest, 2.5 * std::abs(v));
    for (std::size_t k = 0; k < p.size(); ++k) EXPECT_NEAR(out[k], 2.5 * exact[k], tolerance * largest);
    auto in_place = in;
    convolver.apply(in_place.data(), in_place.data(), work);
    EXPECT_EQ(in_place, out);
  }
}

TEST(Convolver, EqualsTheDirectSumInDouble) {
  expect_direct<double>(17, 9, 1e-14);
  expect_direct<double>(1, 12, 1e-14);
  expect_direct<double>(24, 32, 1e-14);
}
TEST(Convolver, EqualsTheDirectSumInFloat) { expect_direct<float>(24, 17, 2e-6); }

TEST(CirculantInverse, InvertsWhatIsFarFromTheBorder) {
  constexpr int n = 48;
  const auto table = love_table(n, n, 1, 1);
  const Convolver<double> convolver(n, n, table);
  const CirculantInverse<double> inverse(n, n, table);
  auto work = convolver.workspace();
  auto inverse_work = inverse.workspace();
  std::vector<double> p(n * n, 0.0), u(n * n);
  for (int j = 20; j < 28; ++j) {
    for (int i = 20; i < 28; ++i) p[std::size_t(j * n + i)] = (i + j) % 2 ? 1.0 : -1.0;  // no net load: far field small
  }
  convolver.apply(p.data(), u.data(), work);
  inverse.apply(u.data(), u.data(), inverse_work);
  for (std::size_t k = 0; k < p.size(); ++k) EXPECT_NEAR(u[k], p[k], 0.02);
}

TEST(FriendlySize, IsAMultipleOfEightThatTransformsFast) {
  EXPECT_EQ(friendly_size(1), 8);
  EXPECT_EQ(friendly_size(50), 56);
  EXPECT_EQ(friendly_size(81), 96);
}

}  // namespace
}  // namespace runband::halfspace
