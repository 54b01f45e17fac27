#include "core/case/carried.h"

#include <array>
#include <cstdint>

#include "core/base/error.h"

namespace runband {

namespace {

constexpr char kAlphabet[] = "ABCDEFGHIJKLMNOPQRSTUVWXYZabcdefghijklmnopqrstuvwxyz0123456789+/";

std::uint32_t big_endian(const std::string& bytes, std::size_t at) {
  std::uint32_t value = 0;
  for (std::size_t i = 0; i < 4; ++i) value = value << 8 | static_cast<unsigned char>(bytes[at + i]);
  return value;
}

/// Text of the uncompressed iTXt chunk with our keyword. PNG specification (ISO/IEC 15948), 11.3.4.5.
std::optional<std::string> from_png(const std::string& bytes) {
  std::size_t at = 8;
  while (at + 12 <= bytes.size()) {
    const std::size_t length = big_endian(bytes, at);
    if (length > bytes.size() - at - 12) return std::nullopt;
    if (bytes.compare(at + 4, 4, "iTXt") == 0) {
      const std::string data = bytes.substr(at + 8, length);
      const std::string head = std::string(kCarriedCaseKey) + '\0';
      if (data.starts_with(head) && data.size() > head.size() + 3) {
        const std::size_t language = data.find('\0', head.size() + 2);
        const std::size_t translated = language == std::string::npos ? language : data.find('\0', language + 1);
        if (translated != std::string::npos && data[head.size()] == 0) return data.substr(translated + 1);
      }
    }
    at += 12 + length;
  }
  return std::nullopt;
}

/// Base64 between "runband-case:" and the first character that is not base64.
std::optional<std::string> from_text(const std::string& bytes) {
  const std::string mark = std::string(kCarriedCaseKey) + ":";
  const auto start = bytes.find(mark);
  if (start == std::string::npos) return std::nullopt;
  const auto from = start + mark.size();
  const auto to = bytes.find_first_not_of(kAlphabet, from);
  return base64_decode(bytes.substr(from, to == std::string::npos ? to : to - from));
}

}  // namespace

std::optional<std::string> carried_case(const std::string& bytes, const std::string& origin) {
  std::optional<std::string> found;
  if (bytes.starts_with("\x89PNG\r\n\x1a\n")) {
    found = from_png(bytes);
  } else if (bytes.starts_with("%PDF-") || bytes.starts_with("<?xml") || bytes.starts_with("<svg")) {
    found = from_text(bytes);
  } else {
    return std::nullopt;
  }
  if (!found || found->empty()) {
    throw FileError(ErrorCode::file_wrong_kind, origin + ": the picture carries no case.",
                    "name a case file, or a picture that `runband draw` made.");
  }
  return found;
}

std::string base64_encode(const std::string& bytes) {
  std::string text;
  std::uint32_t buffer = 0;
  int bits = 0;
  for (const char c : bytes) {
    buffer = buffer << 8 | static_cast<unsigned char>(c);
    bits += 8;
    while (bits >= 6) {
      bits -= 6;
      text += kAlphabet[buffer >> bits & 63U];
    }
  }
  if (bits > 0) text += kAlphabet[buffer << (6 - bits) & 63U];
  return text;
}

std::string base64_decode(const std::string& text) {
  std::array<int, 256> value{};
  value.fill(-1);
  for (int i = 0; i < 64; ++i) value[static_cast<unsigned char>(kAlphabet[i])] = i;
  std::string bytes;
  std::uint32_t buffer = 0;
  int bits = 0;
  for (const char c : text) {
    const int v = value[static_cast<unsigned char>(c)];
    if (v < 0) break;
    buffer = buffer << 6 | static_cast<std::uint32_t>(v);
    bits += 6;
    if (bits >= 8) {
      bits -= 8;
      bytes += static_cast<char>(buffer >> bits & 255U);
    }
  }
  return bytes;
}

}  // namespace runband
