#include "image/utf8.h"

#include <cstddef>
#include <cstdint>

namespace stillfield {
namespace {

constexpr int kMostCharacters = 200;

// Bytes of the character at the start of `text` if it is well-formed and may stand in XML; else 0.
std::size_t length_of_character(std::string_view text) {
  const auto byte = [&](std::size_t i) { return static_cast<std::uint8_t>(text[i]); };
  const std::size_t length = byte(0) < 0x80             ? 1
                             : (byte(0) & 0xe0) == 0xc0 ? 2
                             : (byte(0) & 0xf0) == 0xe0 ? 3
                             : (byte(0) & 0xf8) == 0xf0 ? 4
                                                        : 0;
  if (length == 0 || length > text.size()) return 0;
  if (length == 1) return 1;
  std::uint32_t code = byte(0) & (0x7fu >> length);
  for (std::size_t i = 1; i < length; ++i) {
    if ((byte(i) & 0xc0) != 0x80) return 0;
    code = code << 6 | (byte(i) & 0x3fu);
  }
  constexpr std::uint32_t kSmallest[] = {0, 0, 0x80, 0x800, 0x10000};
  const bool surrogate = code >= 0xd800 && code < 0xe000;
  const bool control = code < 0xa0;
  const bool no_character = code == 0xfffe || code == 0xffff || code > 0x10ffff;
  return code < kSmallest[length] || surrogate || control || no_character ? 0 : length;
}

}  // namespace

std::string printable_utf8(std::string_view text) {
  std::string out;
  for (int n = 0; n < kMostCharacters && !text.empty(); ++n) {
    const auto first = static_cast<std::uint8_t>(text.front());
    const std::size_t length = length_of_character(text);
    if (first < 0x20 || first == 0x7f) {
      out += ' ';
    } else if (length == 0) {
      out += '?';
    } else {
      out += text.substr(0, length);
    }
    text.remove_prefix(length == 0 ? 1 : length);
  }
  return out;
}

}  // namespace stillfield
