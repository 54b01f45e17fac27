// Pictures carry the case they were drawn from; this finds it again.
#pragma once

#include <optional>
#include <string>

namespace runband {

/// Keyword of the PNG text chunk, the SVG metadata element's id and the PDF keywords entry that hold the case.
inline constexpr const char* kCarriedCaseKey = "runband-case";

/// The case file's text if `bytes` are a PNG, SVG or PDF; nullopt if they are none of these.
/// @throws FileError (file_wrong_kind) for a picture without a case.
std::optional<std::string> carried_case(const std::string& bytes, const std::string& origin);

/// Base64, used where a format cannot carry free text.
std::string base64_encode(const std::string& bytes);
std::string base64_decode(const std::string& text);

}  // namespace runband
