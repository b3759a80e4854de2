#include "diagnose/number_text.h"

#include <array>
#include <charconv>

namespace stillfield {

std::string fixed_text(double value, int decimals) {
  std::array<char, 400> text;
  const auto end = std::to_chars(text.data(), text.data() + text.size(), value,
                                 std::chars_format::fixed, decimals);
  return {text.data(), end.ptr};
}

std::string percent_text(double share) {
  return fixed_text(100 * share, share < 0.1 ? 1 : 0) + " %";
}

}  // namespace stillfield
