#include "point_load.h"

#include <algorithm>
#include <cmath>
#include <numbers>

namespace runband::subsurface {

namespace {
constexpr double kPerTwoPi = 1 / (2 * std::numbers::pi);
}

Stress under_normal_force(double x, double y, double z, double nu) {
  const double r2 = x * x + y * y + z * z, r = std::sqrt(r2), r3 = r2 * r, r5 = r3 * r2;
  const double up = r + z, m = 1 - 2 * nu;
  const double common = z / r3 - 1 / (r * up), both = (2 * r + z) / (r3 * up * up);
  Stress s;
  s.xx = kPerTwoPi * (-3 * x * x * z / r5 + m * (common + x * x * both));
  s.yy = kPerTwoPi * (-3 * y * y * z / r5 + m * (common + y * y * both));
  s.zz = kPerTwoPi * (-3 * z * z * z / r5);
  s.xy = kPerTwoPi * x * y * (-3 * z / r5 + m * both);
  s.xz = kPerTwoPi * (-3 * x * z * z / r5);
  s.yz = kPerTwoPi * (-3 * y * z * z / r5);
  return s;
}

Stress under_force_along_x(double x, double y, double z, double nu) {
  const double r2 = x * x + y * y + z * z, r = std::sqrt(r2), r3 = r2 * r, r5 = r3 * r2;
  const double up = r + z, up2 = up * up, m = 1 - 2 * nu;
  const double both = 1 / (r3 * up2) + 2 / (r2 * up2 * up);
  Stress s;
  s.xx = kPerTwoPi * x * (-3 * x * x / r5 + m * (1 / r3 - 3 / (r * up2) + x * x * both));
  s.yy = kPerTwoPi * x * (-3 * y * y / r5 + m * (1 / r3 - 1 / (r * up2) + y * y * both));
  s.zz = kPerTwoPi * (-3 * x * z * z / r5);
  s.xy = kPerTwoPi * y * (-3 * x * x / r5 + m * (-1 / (r * up2) + x * x * both));
  s.xz = kPerTwoPi * (-3 * x * x * z / r5);
  s.yz = kPerTwoPi * (-3 * x * y * z / r5);
  return s;
}

double von_mises(const Stress& s) {
  const double a = s.xx - s.yy, b = s.yy - s.zz, c = s.zz - s.xx;
  return std::sqrt(0.5 * (a * a + b * b + c * c) + 3 * (s.xy * s.xy + s.xz * s.xz + s.yz * s.yz));
}

double largest_shear(const Stress& s) {
  // Roots of the characteristic cubic by its angle (O. K. Smith 1961).
  const double mean = (s.xx + s.yy + s.zz) / 3, a = s.xx - mean, b = s.yy - mean, c = s.zz - mean;
  const double q = (a * a + b * b + c * c + 2 * (s.xy * s.xy + s.xz * s.xz + s.yz * s.yz)) / 6;
  if (!(q > 0)) return 0;
  const double half_det =
      0.5 * (a * (b * c - s.yz * s.yz) - s.xy * (s.xy * c - s.yz * s.xz) + s.xz * (s.xy * s.yz - b * s.xz));
  const double root = std::sqrt(q);
  const double angle = std::acos(std::clamp(half_det / (q * root), -1.0, 1.0)) / 3;
  const double first = 2 * root * std::cos(angle);
  const double last = 2 * root * std::cos(angle + 2 * std::numbers::pi / 3);
  return 0.5 * (first - last);
}

}  // namespace runband::subsurface
