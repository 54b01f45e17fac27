// A fingerprint of bytes, so that a result can say exactly which file it came from.
#pragma once

#include <string>
#include <string_view>

namespace runband {

/// SHA-1 of the bytes as 40 hexadecimal digits. For telling files apart, not for security.
std::string checksum(std::string_view bytes);

}  // namespace runband
