// Numbers to little-endian bytes, whatever the machine, for the binary mesh files.
#pragma once

#include <bit>
#include <cstddef>
#include <string>
#include <type_traits>

namespace runband {

/// Appends the value's bytes, lowest first.
template <typename Number>
requires std::is_arithmetic_v<Number>
void put(std::string& bytes, Number value) {
  static_assert(std::endian::native == std::endian::little || std::endian::native == std::endian::big);
  const auto* raw = reinterpret_cast<const char*>(&value);
  if constexpr (std::endian::native == std::endian::little) {
    bytes.append(raw, sizeof value);
  } else {
    for (std::size_t i = sizeof value; i-- > 0;) bytes.push_back(raw[i]);
  }
}

/// RFC 4648, with padding.
std::string base64(const std::string& bytes);

}  // namespace runband
