// Test pictures by formula, so that readers are checked against numbers and not against writers.
#ifndef STILLFIELD_TESTS_IMAGE_PATTERNS_H_
#define STILLFIELD_TESTS_IMAGE_PATTERNS_H_

#include <cstdint>

namespace stillfield::test {

// A value in 0 .. largest that differs between neighbours, rows and channels.
inline std::uint32_t pattern(int x, int y, int channel, std::uint32_t largest) {
  const auto mixed = static_cast<std::uint64_t>(x * 7919 + y * 104729 + channel * 1299709 + 17);
  return static_cast<std::uint32_t>(mixed * 2654435761u % (std::uint64_t{largest} + 1));
}

// Rec. ITU-R BT.601-7 luma, with exact integer weights in thousandths.
inline double luma(std::uint32_t red, std::uint32_t green, std::uint32_t blue) {
  return (299.0 * red + 587.0 * green + 114.0 * blue) / 1000.0;
}

}  // namespace stillfield::test

#endif  // STILLFIELD_TESTS_IMAGE_PATTERNS_H_
