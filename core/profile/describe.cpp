// The figures that the trade reads off a profile.
#include <Eigen/QR>
#include <algorithm>
#include <cmath>
#include <functional>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/profile/profile.h"

namespace runband {

namespace {

constexpr double kChordError_mm = 1e-4;
constexpr double kDegrees = 180.0 / M_PI;

// Parameters where f changes sign along the samples, refined by bisection on the curve itself.
std::vector<double> crossings(const ProfileCurve& curve, const std::vector<CurvePoint>& samples,
                              const std::function<double(const CurvePoint&)>& f) {
  std::vector<double> found;
  for (std::size_t i = 1; i < samples.size(); ++i) {
    double a = samples[i - 1].t, b = samples[i].t, fa = f(samples[i - 1]);
    const double fb = f(samples[i]);
    if (fa == 0.0) found.push_back(a);
    if (!(fa * fb < 0.0)) continue;
    for (int step = 0; step < 60 && b - a > 1e-13 * std::abs(b); ++step) {
      const double middle = 0.5 * (a + b), fm = f(curve.at(middle));
      (fm * fa > 0.0 ? a : b) = middle;
      if (fm * fa > 0.0) fa = fm;
    }
    found.push_back(0.5 * (a + b));
  }
  return found;
}

class Describer {
 public:
  Describer(const Profile& profile) : curve_(*profile.curve), samples_(sample_curve(curve_, kChordError_mm, 1.0)) {}

  std::vector<Quantity> wheel() {
    const std::optional<CurvePoint> running = at_y(0.0);
    if (!running) return std::move(out_);
    const CurvePoint tip = lowest([](const CurvePoint& p) { return p.y() < -30.0; });
    add("flange_height", "Flange height", "mm", running->z() - tip.z(), "tip below the running circle");
    // The flank lies between tip and tread.
    const std::optional<CurvePoint> gauge = flank(running->z() - 10.0, tip);
    const std::optional<CurvePoint> below_tip = flank(tip.z() + 2.0, tip);
    const double first_y = samples_.front().y();
    const bool upright = std::abs(samples_.front().d1.y()) > 5.0 * std::abs(samples_.front().d1.x());
    const double back = upright || first_y < -69.5 ? leftmost() : -70.0;
    if (gauge)
      add("flange_thickness", "Flange thickness Sd", "mm", gauge->y() - back,
          std::string("10 mm below the running circle, from ") +
              (back == -70.0 && !upright ? "the nominal flange back" : "the flange back") + "; EN 15313 (memory)");
    if (gauge && below_tip)
      add("flange_slope_dimension", "Flange slope dimension qR", "mm", gauge->y() - below_tip->y(),
          "from 2 mm above the tip to 10 mm below the running circle; EN 15313 (memory)");
    double steepest = 0.0;
    for (const CurvePoint& p : samples_)
      if (p.t > tip.t && p.y() < -25.0) steepest = std::max(steepest, std::atan2(p.d1.y(), p.d1.x()));
    add("flange_angle", "Largest flange angle", "deg", steepest * kDegrees, "from the axle, tip to tread");
    add("hollow_depth", "Hollow depth", "mm", hollow_depth(),
        "deepest drop under a straight edge parallel to the axle that rests on the field side of the tread");
    add("tread_slope", "Tread slope at the running circle", "1", running->slope(),
        "positive: radius grows to the flange");
    add("width", "Covered width", "mm", rightmost() - leftmost(), "");
    return std::move(out_);
  }

  std::vector<Quantity> rail() {
    const CurvePoint top = highest();
    const double level = top.z();
    add("head_width_14", "Head width, 14 mm below the top", "mm", width_at(level - 14.0), "");
    if (lowest_on(1.0) < level - 14.3 && lowest_on(-1.0) < level - 14.3)
      add("head_width_14_3", "Head width, 14.3 mm below the top", "mm", width_at(level - 14.3),
          "where EN 13674-1 states it for 60E1");
    if (const auto gauge = side_at(level - 14.0, -1.0)) {
      add("gauge_point_y", "Gauge point, 14 mm below the top", "mm", gauge->y(), "from the rail axis");
      add("gauge_face_angle", "Gauge-face angle, 14 mm below the top", "deg",
          std::abs(std::atan2(gauge->d1.y(), gauge->d1.x())) * kDegrees, "from the horizontal");
    }
    add("crown_radius", "Crown radius", "mm", crown_radius(), "circle through the head within 10 mm of its axis");
    add("top_height", "Top of the head", "mm", level, "above the top when new");
    add("width", "Covered width", "mm", rightmost() - leftmost(), "");
    return std::move(out_);
  }

 private:
  void add(const char* name, const char* title, const char* unit, double value, std::string from) {
    if (std::isfinite(value)) out_.push_back({name, title, unit, value, std::move(from)});
  }

  template <class Condition>
  CurvePoint lowest(Condition wanted) const {
    CurvePoint low;
    double z = 1e300;
    for (const CurvePoint& p : samples_)
      if (wanted(p) && p.z() < z) z = (low = p).z();
    // To the level tangent beside the lowest sample.
    for (const double t : crossings(curve_, samples_, [](const CurvePoint& p) { return p.d1.y(); })) {
      const CurvePoint p = curve_.at(t);
      if (wanted(p) && p.z() < low.z()) low = p;
    }
    return low;
  }

  CurvePoint highest() const {
    CurvePoint high = samples_.front();
    for (const CurvePoint& p : samples_)
      if (p.z() > high.z()) high = p;
    for (const double t : crossings(curve_, samples_, [](const CurvePoint& p) { return p.d1.y(); }))
      if (curve_.at(t).z() > high.z()) high = curve_.at(t);
    return high;
  }

  double leftmost() const {
    double y = 1e300;
    for (const CurvePoint& p : samples_) y = std::min(y, p.y());
    return y;
  }
  double rightmost() const {
    double y = -1e300;
    for (const CurvePoint& p : samples_) y = std::max(y, p.y());
    return y;
  }
  double lowest_on(double side) const {
    double z = 1e300;
    for (const CurvePoint& p : samples_)
      if (side * p.y() > 0.0) z = std::min(z, p.z());
    return z;
  }

  std::optional<CurvePoint> at_y(double y) const {
    const auto found = crossings(curve_, samples_, [&](const CurvePoint& p) { return p.y() - y; });
    return found.empty() ? std::nullopt : std::optional(curve_.at(found.back()));
  }

  std::optional<CurvePoint> flank(double z, const CurvePoint& tip) const {
    for (const double t : crossings(curve_, samples_, [&](const CurvePoint& p) { return p.z() - z; }))
      if (t > tip.t) return curve_.at(t);
    return std::nullopt;
  }

  // The point of the head's side at a height: side -1 gauge, +1 field.
  std::optional<CurvePoint> side_at(double z, double side) const {
    std::optional<CurvePoint> found;
    for (const double t : crossings(curve_, samples_, [&](const CurvePoint& p) { return p.z() - z; })) {
      const CurvePoint p = curve_.at(t);
      if (side * p.y() > 0.0 && (!found || side * p.y() > side * found->y())) found = p;
    }
    return found;
  }

  double width_at(double z) const {
    const auto gauge = side_at(z, -1.0), field = side_at(z, 1.0);
    return gauge && field ? field->y() - gauge->y() : std::nan("");
  }

  double hollow_depth() const {
    // Of the tread from just inside the flange root outwards.
    constexpr double kTreadFrom_mm = -20.0, kTreadTo_mm = 60.0;
    double depth = 0.0, low = 1e300;
    for (auto p = samples_.rbegin(); p != samples_.rend(); ++p) {
      if (p->y() > kTreadTo_mm || p->y() < kTreadFrom_mm) continue;
      low = std::min(low, p->z());
      depth = std::max(depth, p->z() - low);
    }
    return depth;
  }

  // Least squares for the circle y^2 + z^2 = c0 + c1 y + c2 z through evenly spaced points.
  double crown_radius() const {
    const auto from = at_y(-10.0), to = at_y(10.0);
    if (!from || !to) return std::nan("");
    constexpr int kPoints = 200;
    Eigen::Matrix<double, kPoints + 1, 3> a;
    Eigen::Matrix<double, kPoints + 1, 1> b;
    for (int k = 0; k <= kPoints; ++k) {
      const CurvePoint p = curve_.at(from->t + (to->t - from->t) * k / kPoints);
      a.row(k) << 1.0, p.y(), p.z();
      b(k) = p.position.squaredNorm();
    }
    const Vec3 c = a.colPivHouseholderQr().solve(b);
    return std::sqrt(std::max(0.0, c(0) + 0.25 * (c(1) * c(1) + c(2) * c(2))));
  }

  const ProfileCurve& curve_;
  std::vector<CurvePoint> samples_;
  std::vector<Quantity> out_;
};

}  // namespace

std::vector<Quantity> describe_profile(const Profile& profile, const Profile* reference) {
  Describer describer(profile);
  std::vector<Quantity> out = profile.kind == ProfileKind::wheel ? describer.wheel() : describer.rail();
  if (profile.fit) {
    out.push_back({"noise", profile.fit->noise_estimated ? "Measurement noise, estimated" : "Measurement noise, stated",
                   "mm", profile.fit->noise_mm, "standard deviation along the normal"});
    out.push_back({"residual_rms", "Residual of the fit, root mean square", "mm", profile.fit->residual_rms_mm, ""});
    out.push_back({"residual_max", "Residual of the fit, largest", "mm", profile.fit->residual_max_mm, ""});
  }
  if (reference == nullptr) return out;
  const Curve wear = wear_against(profile, *reference);
  double deepest = 0.0, at = 0.0, area = 0.0;
  for (std::size_t i = 0; i < wear.x.size(); ++i)
    if (wear.y[i] > deepest) {
      deepest = wear.y[i];
      at = wear.x[i];
    }
  for (std::size_t i = 1; i < wear.x.size(); ++i)
    area += 0.5 * (wear.y[i] + wear.y[i - 1]) * (wear.x[i] - wear.x[i - 1]);
  out.push_back({"wear_max", "Deepest wear", "mm", deepest, "along the normal of " + reference->title});
  out.push_back({"wear_max_y", "Deepest wear, at y", "mm", at, ""});
  out.push_back({"wear_area", "Worn area", "mm2", area, "wear integrated over y"});
  return out;
}

Curve wear_against(const Profile& profile, const Profile& reference) {
  if (profile.kind != reference.kind)
    throw InputError(ErrorCode::conflicting_keys,
                     profile.origin + ": wear of a " + (profile.kind == ProfileKind::wheel ? "wheel" : "rail") +
                         " cannot be taken against " + reference.origin + ", which is not one.",
                     "give a reference of the same kind.");
  const std::vector<CurvePoint> ours = sample_curve(*profile.curve, 1e-3, 0.5);
  const std::vector<CurvePoint> theirs = sample_curve(*reference.curve, 1e-3, 0.5);
  // Material lies above a wheel's line and below a rail's.
  const double into = profile.kind == ProfileKind::wheel ? 1.0 : -1.0;
  constexpr double kFarthest_mm = 20.0;
  Curve wear{"wear", "Wear against " + reference.title, "y", "mm", "wear along the normal", "mm", {}, {}, ""};
  for (const CurvePoint& r : theirs) {
    const Vec2 tangent = r.d1.normalized(), normal(-tangent.y(), tangent.x());
    std::optional<double> nearest;
    for (std::size_t i = 1; i < ours.size(); ++i) {
      // Where the normal's line leaves one side of the other curve's chord for the other side.
      const double a = tangent.dot(ours[i - 1].position - r.position), b = tangent.dot(ours[i].position - r.position);
      if (a * b > 0.0 || a == b) continue;
      double t0 = ours[i - 1].t, t1 = ours[i].t;
      for (int step = 0; step < 40; ++step) {
        const double middle = 0.5 * (t0 + t1);
        const double side = tangent.dot(profile.curve->at(middle).position - r.position);
        ((a > 0.0 || (a == 0.0 && b < 0.0)) == (side > 0.0) ? t0 : t1) = middle;
      }
      const double distance = normal.dot(profile.curve->at(0.5 * (t0 + t1)).position - r.position);
      if (std::abs(distance) < kFarthest_mm && (!nearest || std::abs(distance) < std::abs(*nearest)))
        nearest = distance;
    }
    if (!nearest) continue;
    wear.x.push_back(r.y());
    wear.y.push_back(into * *nearest);
  }
  return wear;
}

}  // namespace runband
