// Curves made of lines, arcs and polynomials: the exact form in which standards define profiles.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "core/profile/curve.h"

namespace runband {

/// One piece of an exact profile, in the coordinates of its file. Lines run between two points; arcs between two angles
/// about a centre; polynomials give z over y as a sum of coefficients[k] * (y - origin)^k.
struct Piece {
  enum class Kind { line, arc, polynomial };
  Kind kind = Kind::line;
  Vec2 line_from = Vec2::Zero(), line_to = Vec2::Zero();  ///< line, mm
  Vec2 centre = Vec2::Zero();                             ///< arc, mm
  double radius = 0;                                      ///< arc, mm, > 0
  double angle_from = 0, angle_to = 0;                    ///< arc, rad, from +y towards +z
  double y_from = 0, y_to = 0;                            ///< polynomial, mm
  double origin = 0;                                      ///< polynomial, mm
  std::vector<double> coefficients;                       ///< polynomial, constant first

  long line = 0;        ///< where it stands in its file
  bool corner = false;  ///< the tangent may turn sharply where this piece begins

  Vec2 begin() const;
  Vec2 end() const;
  Vec2 begin_direction() const;  ///< unit tangent along the direction of travel
  Vec2 end_direction() const;
  double length() const;

  Piece reversed() const;
  Piece mirrored_y() const;  ///< y -> -y, same direction of travel along the piece
  Piece mirrored_z() const;  ///< z -> -z
};

/// How well two neighbouring pieces of an exact curve meet.
struct Joint {
  double t = 0;
  double gap_mm = 0;    ///< distance between the end of one and the beginning of the next
  double kink_rad = 0;  ///< angle between their tangents, >= 0
};

/// A chain of pieces, exact in position and both derivatives. The parameter is arc length along lines and arcs and
/// proportional to y along a polynomial (scaled to its arc length). At a joint the piece that begins there answers.
class PiecewiseCurve final : public ProfileCurve {
 public:
  /// @param pieces from gauge to field side, at least one, each of positive length, in the profile frame.
  explicit PiecewiseCurve(std::vector<Piece> pieces);

  double t_begin() const override { return 0.0; }
  double t_end() const override { return starts_.back(); }
  CurvePoint at(double t) const override;
  std::vector<double> breaks() const override { return starts_; }

  const std::vector<Piece>& pieces() const { return pieces_; }
  std::vector<Joint> joints() const;

 private:
  std::vector<Piece> pieces_;
  std::vector<double> starts_;   ///< parameter at the beginning of each piece, and the end of the last
  std::vector<double> stretch_;  ///< dt/d(angle) with sign, or dt/dy
};

}  // namespace runband
