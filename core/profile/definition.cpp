#include "core/profile/definition.h"

#include <algorithm>
#include <cmath>
#include <set>
#include <span>
#define TOML_EXCEPTIONS 1
#include <toml++/toml.h>

#include "core/base/error.h"
#include "core/base/text.h"
#include "core/profile/checks.h"
#include "core/profile/pieces.h"

namespace runband {

namespace {

std::string place(const std::string& origin, long line) { return origin + ":" + std::to_string(line); }

long line_of(const toml::node& node) { return static_cast<long>(node.source().begin.line); }

// A table of the file with typed look-ups that answer in one sentence.
class Reader {
 public:
  Reader(const toml::table& table, std::string origin, std::string what)
      : table_(table), origin_(std::move(origin)), what_(std::move(what)) {}

  void allow_only(std::span<const std::string> known) const {
    for (const auto& [key, node] : table_) {
      const std::string name(key.str());
      if (std::find(known.begin(), known.end(), name) != known.end()) continue;
      const std::string near = nearest_name(name, known);
      throw InputError(ErrorCode::unknown_key,
                       place(origin_, line_of(node)) + ": " + what_ + " has no key '" + name + "'.",
                       near.empty() ? "its keys are " + join_names(known) + "." : "did you mean '" + near + "'?");
    }
  }

  bool has(const char* key) const { return table_.contains(key); }
  long line() const { return line_of(table_); }
  long line(const char* key) const { return has(key) ? line_of(*table_.get(key)) : line(); }
  std::string at(const char* key) const { return place(origin_, line(key)); }
  const std::string& what() const { return what_; }

  double number(const char* key) const { return number_of(required(key), key, "a number"); }
  std::string text(const char* key, std::string fallback = {}) const {
    if (!has(key)) return fallback;
    if (const auto value = table_.get(key)->value_exact<std::string>()) return *value;
    throw wrong_type(key, "a text in quotes");
  }
  bool flag(const char* key) const {
    if (!has(key)) return false;
    if (const auto value = table_.get(key)->value_exact<bool>()) return *value;
    throw wrong_type(key, "true or false");
  }
  std::vector<double> numbers(const char* key, const char* expected, std::size_t least, std::size_t most) const {
    const toml::array* array = required(key).as_array();
    if (array == nullptr || array->size() < least || array->size() > most) throw wrong_type(key, expected);
    std::vector<double> values;
    for (const toml::node& node : *array) values.push_back(number_of(node, key, expected));
    return values;
  }
  Vec2 pair(const char* key) const {
    const std::vector<double> values = numbers(key, "two numbers, [y, z] in mm", 2, 2);
    return {values[0], values[1]};
  }
  /// One of a few words.
  std::string word(const char* key, std::vector<std::string> choices, const std::string& fallback = {}) const {
    if (!has(key) && fallback.empty()) required(key);
    const std::string value = text(key, fallback);
    if (std::find(choices.begin(), choices.end(), value) != choices.end()) return value;
    const std::string near = nearest_name(value, choices);
    throw InputError(
        ErrorCode::unknown_name, at(key) + ": '" + key + "' is '" + value + "', which is not known here.",
        (near.empty() ? "" : "did you mean '" + near + "'? ") + std::string("It takes ") + join_names(choices) + ".");
  }
  double positive(const char* key) const {
    const double value = number(key);
    if (!(value > 0.0)) throw out_of_range(at(key), key, value, "mm", "greater than 0");
    return value;
  }
  InputError conflict(const std::string& happened, const std::string& cure) const {
    return {ErrorCode::conflicting_keys, place(origin_, line()) + ": " + happened, cure};
  }

 private:
  const toml::node& required(const char* key) const {
    if (const toml::node* node = table_.get(key)) return *node;
    throw InputError(ErrorCode::missing_key, place(origin_, line()) + ": " + what_ + " lacks the key '" + key + "'.",
                     std::string("add ") + key + " = ... to it.");
  }
  InputError wrong_type(const char* key, const std::string& expected) const {
    return {ErrorCode::wrong_type, at(key) + ": '" + key + "' must be " + expected + ".", "correct the value there."};
  }
  double number_of(const toml::node& node, const char* key, const char* expected) const {
    std::optional<double> value;
    if (const auto real = node.value_exact<double>()) value = *real;
    if (const auto whole = node.value_exact<std::int64_t>()) value = static_cast<double>(*whole);
    if (!value) throw wrong_type(key, expected);
    if (!std::isfinite(*value))
      throw InputError(ErrorCode::profile_not_a_number, at(key) + ": '" + key + "' is not a finite number.",
                       "write a plain decimal number.");
    if (std::abs(*value) > 1e7) throw out_of_range(at(key), key, *value, "mm", "between -1e7 and 1e7");
    return *value;
  }

  const toml::table& table_;
  std::string origin_, what_;
};

// What one piece hands to the next.
struct Pen {
  std::optional<Vec2> position;
  Vec2 direction = Vec2::Zero();
};

// Where a piece starts: at its own `from`, else where the one before ended.
Vec2 start_of(const Reader& in, const Pen& pen) {
  if (in.has("from")) return in.pair("from");
  if (pen.position) return *pen.position;
  throw InputError(ErrorCode::missing_key, in.at("kind") + ": the first segment has no 'from'.",
                   "state where the profile begins: from = [y, z].");
}

Vec2 heading_of(const Reader& in, const Pen& pen) {
  if (in.has("slope")) return Vec2(1.0, in.number("slope")).normalized();
  if (pen.position && !in.has("from")) return pen.direction;
  throw InputError(ErrorCode::missing_key, in.at("kind") + ": the segment has no direction to start in.",
                   "state it as slope = dz/dy, or give both ends.");
}

Piece read_line(const Reader& in, const Pen& pen) {
  Piece piece;
  piece.kind = Piece::Kind::line;
  piece.line_from = start_of(in, pen);
  if (in.has("to")) {
    piece.line_to = in.pair("to");
    return piece;
  }
  const Vec2 heading = heading_of(in, pen);
  if (in.has("to_y") == in.has("to_z"))
    throw in.conflict("a line needs exactly one of 'to', 'to_y' and 'to_z'.", "say where it ends, once.");
  const bool by_y = in.has("to_y");
  const double along = by_y ? (in.number("to_y") - piece.line_from.x()) / heading.x()
                            : (in.number("to_z") - piece.line_from.y()) / heading.y();
  const char* key = by_y ? "to_y" : "to_z";
  if (!(along > 0.0) || !std::isfinite(along))
    throw in.conflict(std::string("the line never reaches '") + key + "' in the direction it runs.",
                      "check the sign of the value and the order of the segments.");
  piece.line_to = piece.line_from + along * heading;
  // The stated ordinate exactly, not through a quotient.
  (by_y ? piece.line_to.x() : piece.line_to.y()) = in.number(key);
  return piece;
}

// An arc as standards print it: centre, radius, y range and which half of the circle.
Piece arc_about_centre(const Reader& in) {
  Piece piece;
  piece.kind = Piece::Kind::arc;
  piece.centre = in.pair("centre");
  piece.radius = in.positive("radius");
  const double half = in.word("branch", {"upper", "lower"}) == "upper" ? 1.0 : -1.0;
  const std::vector<double> range = in.numbers("y", "two numbers, [from, to] in mm", 2, 2);
  double angles[2];
  for (std::size_t k = 0; k < 2; ++k) {
    const double cosine = (range[k] - piece.centre.x()) / piece.radius;
    if (std::abs(cosine) > 1.0 + 1e-9)
      throw InputError(ErrorCode::out_of_range,
                       in.at("y") + ": y = " + number_text(range[k]) + " mm lies off the circle, which spans " +
                           number_text(piece.centre.x() - piece.radius, 10) + " to " +
                           number_text(piece.centre.x() + piece.radius, 10) + " mm.",
                       "correct y, the centre or the radius.");
    angles[k] = half * std::acos(std::clamp(cosine, -1.0, 1.0));
  }
  piece.angle_from = angles[0];
  piece.angle_to = angles[1];
  return piece;
}

void set_arc(Piece& piece, const Vec2& from, const Vec2& centre, double sweep) {
  piece.centre = centre;
  piece.angle_from = std::atan2(from.y() - centre.y(), from.x() - centre.x());
  piece.angle_to = piece.angle_from + sweep;
}

// An arc between two ends, the shorter way round.
Piece arc_between(const Reader& in, const Pen& pen) {
  Piece piece;
  piece.kind = Piece::Kind::arc;
  piece.radius = in.positive("radius");
  const double turn = in.word("turn", {"left", "right"}) == "left" ? 1.0 : -1.0;
  const Vec2 from = start_of(in, pen), to = in.pair("to"), chord = to - from;
  const double half = 0.5 * chord.norm();
  if (!(half > 0.0) || half > piece.radius)
    throw InputError(ErrorCode::out_of_range,
                     in.at("radius") + ": no arc of radius " + number_text(piece.radius) + " mm joins ends " +
                         number_text(2.0 * half, 10) + " mm apart.",
                     "the distance must be greater than 0 and at most twice the radius.");
  const double rise = std::sqrt(std::max(0.0, piece.radius * piece.radius - half * half));
  const Vec2 normal = Vec2(-chord.y(), chord.x()).normalized();
  set_arc(piece, from, 0.5 * (from + to) + turn * rise * normal, turn * 2.0 * std::asin(half / piece.radius));
  return piece;
}

// An arc that leaves along the tangent and turns until y, z or slope is reached, by less than half a circle.
Piece arc_onward(const Reader& in, const Pen& pen) {
  Piece piece;
  piece.kind = Piece::Kind::arc;
  piece.radius = in.positive("radius");
  const double turn = in.word("turn", {"left", "right"}) == "left" ? 1.0 : -1.0;
  const Vec2 from = start_of(in, pen), heading = heading_of(in, pen);
  const Vec2 centre = from + turn * piece.radius * Vec2(-heading.y(), heading.x());
  const int ends = int(in.has("to_y")) + int(in.has("to_z")) + int(in.has("to_slope"));
  if (ends != 1)
    throw in.conflict("an arc that leaves along the tangent needs exactly one of 'to_y', 'to_z' and 'to_slope'.",
                      "say where it ends, once.");
  std::vector<double> angles;
  const char* key = in.has("to_slope") ? "to_slope" : in.has("to_y") ? "to_y" : "to_z";
  if (in.has("to_slope")) {
    const double across = std::atan(in.number(key)) + M_PI / 2.0;  // the radius stands square to the tangent
    angles = {across, across + M_PI};
  } else {
    const bool by_y = in.has("to_y");
    const double ratio = (in.number(key) - (by_y ? centre.x() : centre.y())) / piece.radius;
    if (std::abs(ratio) <= 1.0) {
      const double angle = by_y ? std::acos(ratio) : std::asin(ratio);
      angles = {angle, by_y ? -angle : M_PI - angle};
    }
  }
  const double begin = std::atan2(from.y() - centre.y(), from.x() - centre.x());
  double sweep = M_PI;
  for (const double angle : angles) {
    const double positive = std::fmod(std::fmod(turn * (angle - begin), 2.0 * M_PI) + 2.0 * M_PI, 2.0 * M_PI);
    if (positive > 1e-12 && positive < sweep) sweep = positive;
  }
  if (!(sweep < M_PI))
    throw InputError(ErrorCode::out_of_range,
                     in.at(key) + ": the arc of radius " + number_text(piece.radius) + " mm does not reach '" + key +
                         "' within half a circle.",
                     "check the value, the radius and the side to which it turns.");
  set_arc(piece, from, centre, turn * sweep);
  return piece;
}

Piece read_arc(const Reader& in, const Pen& pen) {
  if (in.has("centre")) {
    for (const char* key : {"from", "to", "to_y", "to_z", "to_slope", "turn", "slope"})
      if (in.has(key))
        throw in.conflict(std::string("an arc with 'centre' takes 'y' and 'branch', not '") + key + "'.",
                          "state the arc in one way.");
    return arc_about_centre(in);
  }
  return in.has("to") ? arc_between(in, pen) : arc_onward(in, pen);
}

Piece read_polynomial(const Reader& in) {
  Piece piece;
  piece.kind = Piece::Kind::polynomial;
  const std::vector<double> range = in.numbers("y", "two numbers, [from, to] in mm", 2, 2);
  piece.y_from = range[0];
  piece.y_to = range[1];
  piece.origin = in.has("origin") ? in.number("origin") : 0.0;
  piece.coefficients = in.numbers("coefficients", "1 to 16 numbers, constant first", 1, 16);
  return piece;
}

Piece read_segment(const Reader& in, const Pen& pen) {
  // Longer names first: of two that are equally near a misspelt key, the first is proposed.
  static const std::vector<std::string> line_keys{"corner", "slope", "to_y", "to_z", "from", "kind", "to"};
  static const std::vector<std::string> arc_keys{"to_slope", "centre", "branch", "radius", "corner", "slope", "turn",
                                                 "to_y",     "to_z",   "from",   "kind",   "to",     "y"};
  static const std::vector<std::string> polynomial_keys{"kind", "corner", "y", "origin", "coefficients"};
  const std::string kind = in.word("kind", {"line", "arc", "polynomial"});
  in.allow_only(kind == "line" ? line_keys : kind == "arc" ? arc_keys : polynomial_keys);
  Piece piece = kind == "line" ? read_line(in, pen) : kind == "arc" ? read_arc(in, pen) : read_polynomial(in);
  piece.line = in.line("kind");
  piece.corner = in.flag("corner");
  const double length = piece.length();
  if (!std::isfinite(length) || !(length > 1e-6))
    throw InputError(ErrorCode::out_of_range, in.at("kind") + ": the segment has no length.",
                     "give it two different ends.");
  if (!piece.begin().allFinite() || !piece.end().allFinite() || length > 1e4)
    throw InputError(ErrorCode::out_of_range,
                     in.at("kind") + ": the segment is " + number_text(length, 4) + " mm long, more than a profile is.",
                     "check its numbers; lengths are in mm.");
  return piece;
}

std::vector<Piece> turned_into_profile_frame(std::vector<Piece> pieces, bool flip_y, bool flip_z) {
  for (Piece& piece : pieces) {
    if (flip_y) piece = piece.mirrored_y();
    if (flip_z) piece = piece.mirrored_z();
  }
  return pieces;
}

void reverse(std::vector<Piece>& pieces) {
  std::reverse(pieces.begin(), pieces.end());
  // `corner` speaks of a piece's beginning, which is now the beginning of the one that follows.
  for (std::size_t i = 0; i < pieces.size(); ++i) {
    pieces[i] = pieces[i].reversed();
    pieces[i].corner = i > 0 && pieces[i - 1].corner;
  }
}

void check_joints(const PiecewiseCurve& curve, const std::string& origin) {
  const std::vector<Joint> joints = curve.joints();
  for (std::size_t i = 0; i < joints.size(); ++i) {
    const Piece& piece = curve.pieces()[i + 1];
    if (joints[i].gap_mm > kJointGap_mm)
      throw InputError(ErrorCode::profile_not_continuous,
                       place(origin, piece.line) + ": the segments do not meet: a gap of " +
                           number_text(joints[i].gap_mm, 4) + " mm at y = " + number_text(piece.begin().x(), 7) +
                           " mm.",
                       "ends must agree within " + number_text(kJointGap_mm) + " mm; check the order of the segments.");
    if (joints[i].kink_rad > kJointKink_rad && !piece.corner)
      throw InputError(ErrorCode::profile_not_continuous,
                       place(origin, piece.line) + ": the tangent turns sharply by " +
                           number_text(joints[i].kink_rad * 180.0 / M_PI, 4) +
                           " degrees at y = " + number_text(piece.begin().x(), 7) + " mm.",
                       "correct the segments, or write corner = true where a sharp edge is meant.");
  }
}

std::vector<Piece> read_segments(const toml::table& file, const std::string& origin) {
  const toml::node* node = file.get("segment");
  const toml::array* array = node == nullptr ? nullptr : node->as_array();
  if (node == nullptr)
    throw InputError(ErrorCode::missing_key, place(origin, 1) + ": the definition has no [[segment]].",
                     "add the lines, arcs and polynomials that make up the profile.");
  if (array == nullptr || array->empty() || !array->is_homogeneous(toml::node_type::table))
    throw InputError(ErrorCode::wrong_type, place(origin, line_of(*node)) + ": 'segment' must be a list of tables.",
                     "write each one under its own [[segment]] heading.");
  std::vector<Piece> pieces;
  Pen pen;
  for (const toml::node& entry : *array) {
    pieces.push_back(read_segment(Reader(*entry.as_table(), origin, "[[segment]]"), pen));
    pen = {pieces.back().end(), pieces.back().end_direction()};
  }
  return pieces;
}

}  // namespace

Profile parse_definition(const std::string& text, const std::string& origin, ProfileKind kind) {
  toml::table file;
  try {
    file = toml::parse(text, origin);
  } catch (const toml::parse_error& error) {
    throw InputError(ErrorCode::bad_syntax,
                     place(origin, static_cast<long>(error.source().begin.line)) +
                         ": not valid TOML: " + std::string(error.description()) + ".",
                     "correct the line.");
  }
  const Reader in(file, origin, "a profile definition");
  static const std::vector<std::string> keys{"kind",   "title",  "source",    "provenance",
                                             "y_axis", "z_axis", "symmetric", "segment"};
  in.allow_only(keys);

  Profile profile;
  profile.kind = kind;
  profile.origin = origin;
  const std::string stated = in.word("kind", {"wheel", "rail"});
  if ((stated == "wheel") != (kind == ProfileKind::wheel))
    throw InputError(ErrorCode::conflicting_keys,
                     in.at("kind") + ": this is a " + stated + " profile, asked for as a " +
                         (kind == ProfileKind::wheel ? "wheel." : "rail."),
                     "name a file of the other kind, or correct 'kind'.");
  profile.title = in.text("title");
  profile.source = in.text("source");
  profile.provenance = in.text("provenance");
  const bool flip_y = in.word("y_axis", {"field", "gauge"}, "field") == "gauge";
  const bool flip_z = in.word("z_axis", {"up", "down"}, "up") == "down";

  std::vector<Piece> pieces = turned_into_profile_frame(read_segments(file, origin), flip_y, flip_z);
  if (pieces.back().end().x() < pieces.front().begin().x()) reverse(pieces);
  if (in.flag("symmetric")) {
    if (std::abs(pieces.front().begin().x()) > kJointGap_mm && std::abs(pieces.back().end().x()) > kJointGap_mm)
      throw in.conflict("a symmetric profile must begin at y = 0.", "list one half only, starting on the axis.");
    std::vector<Piece> other = turned_into_profile_frame(pieces, true, false);
    reverse(other);
    const bool field_half = std::abs(pieces.front().begin().x()) <= kJointGap_mm;
    std::vector<Piece>& first = field_half ? other : pieces;
    const std::vector<Piece>& second = field_half ? pieces : other;
    first.insert(first.end(), second.begin(), second.end());
    if (!field_half) pieces = first;
    if (field_half) pieces = std::move(other);
  }
  auto curve = std::make_shared<PiecewiseCurve>(std::move(pieces));
  check_joints(*curve, origin);
  profile.curve = curve;
  check_coverage(*profile.curve, kind, origin);
  return profile;
}

}  // namespace runband
