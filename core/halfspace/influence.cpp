#include "core/halfspace/influence.h"

#include <Eigen/Core>
#include <array>
#include <cmath>
#include <cstddef>
#include <utility>

namespace runband::halfspace {

namespace {

struct Integrals {
  double j2 = 0, j3 = 0, j4 = 0;
};

// Corner values of the closed forms.
Integrals corner(double x, double s) {
  return {s == 0.0 ? 0.0 : s * std::asinh(x / std::abs(s)), x == 0.0 ? 0.0 : x * std::asinh(s / std::abs(x)),
          -std::hypot(x, s)};
}

Integrals by_corners(double x, double s, double dx, double ds) {
  Integrals sum;
  for (const double sx : {0.5, -0.5}) {
    for (const double ss : {0.5, -0.5}) {
      const double sign = sx * ss > 0.0 ? 1.0 : -1.0;
      const Integrals c = corner(x + sx * dx, s + ss * ds);
      sum.j2 += sign * c.j2;
      sum.j3 += sign * c.j3;
      sum.j4 += sign * c.j4;
    }
  }
  return sum;
}

// Far from the cell the corner sums cancel, while Gauss-Legendre's rule of five points each way is exact to rounding:
// its error falls like (cell / (4 distance))^10.
constexpr double kFar = 10.0;  // distance over the cell's longer side
Integrals by_quadrature(double x, double s, double dx, double ds) {
  constexpr std::array<std::pair<double, double>, 5> kRule{{{0.0, 0.5688888888888888889},
                                                            {0.5384693101056830910, 0.4786286704993664680},
                                                            {-0.5384693101056830910, 0.4786286704993664680},
                                                            {0.9061798459386639928, 0.2369268850561890875},
                                                            {-0.9061798459386639928, 0.2369268850561890875}}};
  Integrals sum;
  for (const auto& [tx, wx] : kRule) {
    for (const auto& [ts, ws] : kRule) {
      const double px = x - 0.5 * dx * tx, py = s - 0.5 * ds * ts;
      const double r2 = px * px + py * py;
      const double weight = 0.25 * wx * ws * dx * ds / (r2 * std::sqrt(r2));
      sum.j2 += weight * px * px;
      sum.j3 += weight * py * py;
      sum.j4 += weight * px * py;
    }
  }
  return sum;
}

Integrals integrals(double x, double s, double dx, double ds) {
  return std::hypot(x, s) > kFar * std::max(dx, ds) ? by_quadrature(x, s, dx, ds) : by_corners(x, s, dx, ds);
}

// Corner tables over the quadrant: entry (i, j) belongs to the corner ((i - 1/2) dx, (j - 1/2) ds), i = 0..nx. All
// corners but the first of each row and column have positive coordinates, where logarithms do not cancel; the first
// follow by symmetry. What a closed form may drop (a term in x or s alone) is dropped only if symmetry allows it.
using Row = Eigen::ArrayXd;
using Table = Eigen::ArrayXXd;  // column-major: column j is the row of constant s

template <typename Value>  // Value(x array, s) -> array of corner values at positive coordinates
Table corner_table(int nx, int ns, double dx, double ds, double parity_x, double parity_s, Value&& value) {
  const Row x = (Row::LinSpaced(nx, 0.0, nx - 1.0) + 0.5) * dx;
  Table table(nx + 1, ns + 1);
  for (int j = 1; j <= ns; ++j) table.col(j).tail(nx) = value(x, (j - 0.5) * ds);
  table.row(0).tail(ns) = parity_x * table.row(1).tail(ns);
  table.col(0) = parity_s * table.col(1);
  return table;
}

std::vector<double> differences(const Table& c) {
  const auto nx = c.rows() - 1, ns = c.cols() - 1;
  std::vector<double> result(static_cast<std::size_t>(nx * ns));
  Eigen::Map<Table>(result.data(), nx, ns) =
      (c.bottomRightCorner(nx, ns) - c.topRightCorner(nx, ns)) - (c.bottomLeftCorner(nx, ns) - c.topLeftCorner(nx, ns));
  return result;
}

}  // namespace

double love_coefficient(double x, double s, double dx, double ds) {
  const Integrals j = integrals(x, s, dx, ds);
  return j.j2 + j.j3;
}

TangentialCoefficients cerruti_coefficients(double x, double s, double dx, double ds, double nu) {
  const Integrals j = integrals(x, s, dx, ds);
  const double j1 = j.j2 + j.j3;
  return {(1.0 - nu) * j1 + nu * j.j2, nu * j.j4, (1.0 - nu) * j1 + nu * j.j3};
}

std::vector<double> love_table(int nx, int ns, double dx, double ds) {
  return differences(corner_table(nx, ns, dx, ds, -1.0, -1.0, [](const Row& x, double s) -> Row {
    const Row r = (x.square() + s * s).sqrt();
    return s * ((x + r) / s).log() + x * ((s + r) / x).log();
  }));
}

TangentialTable cerruti_table(int nx, int ns, double dx, double ds, double nu) {
  const Eigen::Map<const Row>::Index cells = static_cast<Eigen::Index>(nx) * ns;
  std::vector<double> j2 = differences(corner_table(nx, ns, dx, ds, -1.0, -1.0, [](const Row& x, double s) -> Row {
    return s * ((x + (x.square() + s * s).sqrt()) / s).log();
  }));
  std::vector<double> j3 = differences(corner_table(nx, ns, dx, ds, -1.0, -1.0, [](const Row& x, double s) -> Row {
    return x * ((s + (x.square() + s * s).sqrt()) / x).log();
  }));
  std::vector<double> j4 = differences(corner_table(
      nx, ns, dx, ds, 1.0, 1.0, [](const Row& x, double s) -> Row { return -(x.square() + s * s).sqrt(); }));
  TangentialTable table;
  table.xx.resize(j2.size());
  table.ss.resize(j2.size());
  const Eigen::Map<const Row> a2(j2.data(), cells), a3(j3.data(), cells);
  Eigen::Map<Row>(table.xx.data(), cells) = (1.0 - nu) * (a2 + a3) + nu * a2;
  Eigen::Map<Row>(table.ss.data(), cells) = (1.0 - nu) * (a2 + a3) + nu * a3;
  for (double& v : j4) v *= nu;
  table.xs = std::move(j4);
  return table;
}

}  // namespace runband::halfspace
