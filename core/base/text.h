// Small helpers on words and numbers, used by messages and writers.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <string_view>

namespace runband {

/// Shortest decimal text that reads back as the same double ("0.1", "1e-06", "nan"); locale-independent.
std::string number_text(double value);
/// The same rounded to `digits` significant digits.
std::string number_text(double value, int digits);

/// The whole of `text` as a double, "." as decimal mark, no locale; nullopt if anything else is in it. Accepts "nan",
/// "inf".
std::optional<double> parse_number(std::string_view text);

/// The known name nearest to `word` by edit distance (with transpositions), or empty if none is near.
std::string nearest_name(std::string_view word, std::span<const std::string> known);

/// "a, b and c".
std::string join_names(std::span<const std::string> names);

}  // namespace runband
