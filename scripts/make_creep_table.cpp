// Makes the table of linear creep coefficients. scripts/make_creep_table.sh compiles and runs this; it writes
// core/halfspace/creep_coefficients_table.cpp (Chebyshev coefficients of log C) and data/tables/creep_coefficients.csv.
#include <array>
#include <cmath>
#include <cstdio>
#include <numbers>
#include <vector>

#include "core/halfspace/creep_coefficients.h"
#include "core/halfspace/creep_coefficients_table.h"

using namespace runband::halfspace;

int main() {
  constexpr std::size_t kR = kCreepTableRatios, kN = kCreepTableNus;
  constexpr int kDegree = 64;
  std::vector<std::array<double, 4>> value(kR * kN);
  const auto angle = [](std::size_t i, std::size_t n) {
    return std::numbers::pi * (static_cast<double>(i) + 0.5) / static_cast<double>(n);
  };
  const auto node = [&](std::size_t i, std::size_t n) { return std::cos(angle(i, n)); };
  for (std::size_t i = 0; i < kR; ++i) {
    for (std::size_t j = 0; j < kN; ++j) {
      const CreepCoefficients c =
          compute_creep_coefficients(std::exp(node(i, kR) * kCreepTableLogRatio), 0.25 * (1 + node(j, kN)), kDegree);
      value[i * kN + j] = {std::log(c.c11), std::log(c.c22), std::log(c.c23), std::log(c.c33)};
    }
  }
  std::FILE* f = std::fopen("core/halfspace/creep_coefficients_table.cpp", "w");
  if (f == nullptr) return 3;
  std::fprintf(f,
               "// Written by scripts/make_creep_table.sh; do not edit.\n// clang-format off\n"
               "#include \"core/halfspace/creep_coefficients_table.h\"\n\nnamespace runband::halfspace {\n\n"
               "const double kCreepTable[4][kCreepTableRatios][kCreepTableNus] = {\n");
  for (std::size_t k = 0; k < 4; ++k) {
    std::fprintf(f, "  {\n");
    for (std::size_t p = 0; p < kR; ++p) {
      std::fprintf(f, "    {");
      for (std::size_t q = 0; q < kN; ++q) {
        double sum = 0;
        for (std::size_t i = 0; i < kR; ++i) {
          for (std::size_t j = 0; j < kN; ++j) {
            sum += value[i * kN + j][k] * std::cos(static_cast<double>(p) * angle(i, kR)) *
                   std::cos(static_cast<double>(q) * angle(j, kN));
          }
        }
        std::fprintf(f, "%s%.9g", q > 0 ? ", " : "",
                     sum * (p > 0 ? 2.0 : 1.0) * (q > 0 ? 2.0 : 1.0) / static_cast<double>(kR * kN));
      }
      std::fprintf(f, "},\n");
    }
    std::fprintf(f, "  },\n");
  }
  std::fprintf(f, "};\n\n}  // namespace runband::halfspace\n");
  std::fclose(f);

  f = std::fopen("data/tables/creep_coefficients.csv", "w");
  if (f == nullptr) return 3;
  std::fprintf(f,
               "# Linear creep coefficients of the ellipse (Kalker), computed by scripts/make_creep_table.sh: Galin's "
               "theorem, harmonics to degree %d.\na_over_b,poisson_ratio,c11,c22,c23,c33\n",
               kDegree);
  for (const double nu : {0.0, 0.1, 0.2, 0.25, 0.28, 0.3, 0.4, 0.5}) {
    for (int i = 1; i <= 19; ++i) {
      const double r = i <= 10 ? i / 10.0 : 10.0 / (20 - i);
      const CreepCoefficients c = compute_creep_coefficients(r, nu, kDegree);
      std::fprintf(f, "%.6g,%g,%.5f,%.5f,%.5f,%.5f\n", r, nu, c.c11, c.c22, c.c23, c.c33);
    }
  }
  std::fclose(f);
}
