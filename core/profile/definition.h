// Profile definitions: TOML files that state a profile as lines, arcs and polynomials (data/standards/README.md shows
// the format).
#pragma once

#include <string>

#include "core/profile/profile.h"

namespace runband {

/// Largest gap at a joint that a definition may have without saying so, mm. The loosest published definition shipped
/// here (S1002, piece C) opens by 1.2e-4 mm because its coefficients are printed to ten digits.
constexpr double kJointGap_mm = 2e-4;
/// Largest angle between neighbouring tangents without `corner = true`, rad.
constexpr double kJointKink_rad = 1e-3;

/// @param text   the file's text; @param origin what messages call it.
/// @throws InputError: bad_syntax, unknown_key, wrong_type, missing_key, conflicting_keys, out_of_range,
///   profile_not_continuous, profile_not_covering, profile_not_a_number; each with the line.
Profile parse_definition(const std::string& text, const std::string& origin, ProfileKind kind);

}  // namespace runband
