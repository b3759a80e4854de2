// Names as text: bytes of a file name that are not UTF-8 become U+FFFD, one each.
//
// Records and tables show names in this form, so that a table made anew from a record equals the
// one made with the image at hand. Source  Unicode Standard 15, table 3-7 (well-formed sequences)
#ifndef STILLFIELD_CORE_UTF8_H_
#define STILLFIELD_CORE_UTF8_H_

#include <string>
#include <string_view>

namespace stillfield {

// Length of the well-formed sequence at the start of `bytes`; 0 if there is none.
inline std::size_t utf8_length(std::string_view bytes) {
  const auto at = [&](std::size_t i) {
    return i < bytes.size() ? static_cast<unsigned char>(bytes[i]) : 0U;
  };
  const unsigned first = at(0);
  if (first < 0x80) return bytes.empty() ? 0 : 1;
  if (first < 0xC2 || first > 0xF4) return 0;
  const std::size_t length = first < 0xE0 ? 2 : (first < 0xF0 ? 3 : 4);
  for (std::size_t i = 1; i < length; ++i) {
    if ((at(i) & 0xC0) != 0x80) return 0;
  }
  const unsigned second = at(1);  // overlong forms, surrogates, beyond U+10FFFF
  const bool allowed = !(first == 0xE0 && second < 0xA0) && !(first == 0xED && second > 0x9F) &&
                       !(first == 0xF0 && second < 0x90) && !(first == 0xF4 && second > 0x8F);
  return allowed ? length : 0;
}

inline std::string utf8_name(std::string_view bytes) {
  std::string text;
  while (!bytes.empty()) {
    const std::size_t length = utf8_length(bytes);
    text += length > 0 ? bytes.substr(0, length) : std::string_view("\xEF\xBF\xBD");
    bytes.remove_prefix(length > 0 ? length : 1);
  }
  return text;
}

}  // namespace stillfield

#endif  // STILLFIELD_CORE_UTF8_H_
