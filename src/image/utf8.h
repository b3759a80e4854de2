// Text of a file as text that may be shown, stored as JSON and written into XML.
#ifndef STILLFIELD_IMAGE_UTF8_H_
#define STILLFIELD_IMAGE_UTF8_H_

#include <string>
#include <string_view>

namespace stillfield {

// `text` as valid UTF-8 (RFC 3629) of at most 200 characters: control characters become blanks,
// bytes that are no UTF-8, surrogates and U+FFFE and U+FFFF become "?".
std::string printable_utf8(std::string_view text);

}  // namespace stillfield

#endif  // STILLFIELD_IMAGE_UTF8_H_
