#include "core/profile/pieces.h"

#include <algorithm>
#include <array>
#include <cmath>

namespace runband {

namespace {

struct PolynomialValue {
  double value = 0, first = 0, second = 0;
};

PolynomialValue evaluate(const std::vector<double>& coefficients, double u) {
  PolynomialValue p;
  for (std::size_t k = coefficients.size(); k-- > 0;) {
    p.second = p.second * u + 2.0 * p.first;
    p.first = p.first * u + p.value;
    p.value = p.value * u + coefficients[k];
  }
  return p;
}

// Arc length of a polynomial piece: composite Gauss-Legendre, five nodes on each of 64 parts.
double polynomial_length(const Piece& piece) {
  constexpr std::array<double, 5> nodes{-0.9061798459386640, -0.5384693101056831, 0.0, 0.5384693101056831,
                                        0.9061798459386640};
  constexpr std::array<double, 5> weights{0.2369268850561891, 0.4786286704993665, 0.5688888888888889,
                                          0.4786286704993665, 0.2369268850561891};
  constexpr int parts = 64;
  const double half = (piece.y_to - piece.y_from) / (2.0 * parts);
  double sum = 0.0;
  for (int part = 0; part < parts; ++part) {
    const double middle = piece.y_from + (2.0 * part + 1.0) * half;
    for (std::size_t k = 0; k < nodes.size(); ++k) {
      const double slope = evaluate(piece.coefficients, middle + nodes[k] * half - piece.origin).first;
      sum += weights[k] * std::sqrt(1.0 + slope * slope);
    }
  }
  return std::abs(sum * half);
}

Vec2 on_circle(const Piece& piece, double angle) {
  return piece.centre + piece.radius * Vec2(std::cos(angle), std::sin(angle));
}

Vec2 arc_direction(const Piece& piece, double angle) {
  const double turn = piece.angle_to >= piece.angle_from ? 1.0 : -1.0;
  return turn * Vec2(-std::sin(angle), std::cos(angle));
}

Vec2 polynomial_point(const Piece& piece, double y) {
  return {y, evaluate(piece.coefficients, y - piece.origin).value};
}

Vec2 polynomial_direction(const Piece& piece, double y) {
  const double sense = piece.y_to >= piece.y_from ? 1.0 : -1.0;
  return sense * Vec2(1.0, evaluate(piece.coefficients, y - piece.origin).first).normalized();
}

}  // namespace

Vec2 Piece::begin() const {
  switch (kind) {
    case Kind::line:
      return line_from;
    case Kind::arc:
      return on_circle(*this, angle_from);
    case Kind::polynomial:
      return polynomial_point(*this, y_from);
  }
  return Vec2::Zero();
}

Vec2 Piece::end() const {
  switch (kind) {
    case Kind::line:
      return line_to;
    case Kind::arc:
      return on_circle(*this, angle_to);
    case Kind::polynomial:
      return polynomial_point(*this, y_to);
  }
  return Vec2::Zero();
}

Vec2 Piece::begin_direction() const {
  switch (kind) {
    case Kind::line:
      return (line_to - line_from).normalized();
    case Kind::arc:
      return arc_direction(*this, angle_from);
    case Kind::polynomial:
      return polynomial_direction(*this, y_from);
  }
  return Vec2::Zero();
}

Vec2 Piece::end_direction() const {
  switch (kind) {
    case Kind::line:
      return (line_to - line_from).normalized();
    case Kind::arc:
      return arc_direction(*this, angle_to);
    case Kind::polynomial:
      return polynomial_direction(*this, y_to);
  }
  return Vec2::Zero();
}

double Piece::length() const {
  switch (kind) {
    case Kind::line:
      return (line_to - line_from).norm();
    case Kind::arc:
      return radius * std::abs(angle_to - angle_from);
    case Kind::polynomial:
      return polynomial_length(*this);
  }
  return 0.0;
}

Piece Piece::reversed() const {
  Piece piece = *this;
  std::swap(piece.line_from, piece.line_to);
  std::swap(piece.angle_from, piece.angle_to);
  std::swap(piece.y_from, piece.y_to);
  return piece;
}

Piece Piece::mirrored_y() const {
  Piece piece = *this;
  for (Vec2* point : {&piece.line_from, &piece.line_to, &piece.centre}) point->x() = -point->x();
  piece.angle_from = M_PI - angle_from;
  piece.angle_to = M_PI - angle_to;
  piece.y_from = -y_from;
  piece.y_to = -y_to;
  piece.origin = -origin;
  for (std::size_t k = 1; k < coefficients.size(); k += 2) piece.coefficients[k] = -coefficients[k];
  return piece;
}

Piece Piece::mirrored_z() const {
  Piece piece = *this;
  for (Vec2* point : {&piece.line_from, &piece.line_to, &piece.centre}) point->y() = -point->y();
  piece.angle_from = -angle_from;
  piece.angle_to = -angle_to;
  for (double& c : piece.coefficients) c = -c;
  return piece;
}

PiecewiseCurve::PiecewiseCurve(std::vector<Piece> pieces) : pieces_(std::move(pieces)) {
  starts_.push_back(0.0);
  for (const Piece& piece : pieces_) {
    const double length = piece.length();
    starts_.push_back(starts_.back() + length);
    switch (piece.kind) {
      case Piece::Kind::line:
        stretch_.push_back(1.0);
        break;
      case Piece::Kind::arc:
        stretch_.push_back(length / (piece.angle_to - piece.angle_from));
        break;
      case Piece::Kind::polynomial:
        stretch_.push_back(length / (piece.y_to - piece.y_from));
        break;
    }
  }
}

CurvePoint PiecewiseCurve::at(double t) const {
  t = std::clamp(t, starts_.front(), starts_.back());
  const auto after = std::upper_bound(starts_.begin() + 1, starts_.end() - 1, t);
  const std::size_t i = static_cast<std::size_t>(after - starts_.begin()) - 1;
  const Piece& piece = pieces_[i];
  const double local = t - starts_[i];
  CurvePoint point;
  point.t = t;
  switch (piece.kind) {
    case Piece::Kind::line: {
      const Vec2 direction = (piece.line_to - piece.line_from) / (starts_[i + 1] - starts_[i]);
      point.position = piece.line_from + local * direction;
      point.d1 = direction;
      break;
    }
    case Piece::Kind::arc: {
      const double rate = 1.0 / stretch_[i];
      const double angle = piece.angle_from + local * rate;
      const Vec2 outward = piece.radius * Vec2(std::cos(angle), std::sin(angle));
      point.position = piece.centre + outward;
      point.d1 = rate * Vec2(-outward.y(), outward.x());
      point.d2 = -rate * rate * outward;
      break;
    }
    case Piece::Kind::polynomial: {
      const double rate = 1.0 / stretch_[i];
      const double y = piece.y_from + local * rate;
      const PolynomialValue p = evaluate(piece.coefficients, y - piece.origin);
      point.position = {y, p.value};
      point.d1 = {rate, p.first * rate};
      point.d2 = {0.0, p.second * rate * rate};
      break;
    }
  }
  return point;
}

std::vector<Joint> PiecewiseCurve::joints() const {
  std::vector<Joint> joints;
  for (std::size_t i = 1; i < pieces_.size(); ++i) {
    const Vec2 before = pieces_[i - 1].end_direction(), after = pieces_[i].begin_direction();
    joints.push_back({starts_[i], (pieces_[i].begin() - pieces_[i - 1].end()).norm(),
                      std::abs(std::atan2(before.x() * after.y() - before.y() * after.x(), before.dot(after)))});
  }
  return joints;
}

}  // namespace runband
