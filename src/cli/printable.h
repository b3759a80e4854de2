// Text for terminals and logs: control characters, which names of files may hold, become '?'.
#ifndef STILLFIELD_CLI_PRINTABLE_H_
#define STILLFIELD_CLI_PRINTABLE_H_

#include <string>

namespace stillfield {

inline std::string printable(std::string text) {
  for (char& c : text) {
    const auto u = static_cast<unsigned char>(c);
    if (u < 0x20 || u == 0x7F) c = '?';
  }
  return text;
}

}  // namespace stillfield

#endif  // STILLFIELD_CLI_PRINTABLE_H_
