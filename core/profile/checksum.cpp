#include "core/profile/checksum.h"

#include <boost/uuid/detail/sha1.hpp>

namespace runband {

std::string checksum(std::string_view bytes) {
  boost::uuids::detail::sha1 sha;
  sha.process_bytes(bytes.data(), bytes.size());
  boost::uuids::detail::sha1::digest_type words;
  sha.get_digest(words);
  std::string text;
  for (const unsigned int word : words)
    for (int shift = 28; shift >= 0; shift -= 4) text += "0123456789abcdef"[(word >> shift) & 0xfU];
  return text;
}

}  // namespace runband
