// One standard normal number from one random word.
//
// Maths    z = upper quantile of p = (m + 1/2) / 2^32, m the word's lower 31 bits (inverted when
//          the top bit is set), with the top bit as sign: the inverse of the distribution function
//          by one polynomial of degree 5 a binade of p (normal_table.h)
// Range    -6.338 to 6.338, symmetric: z(~word) = -z(word); falls as the word rises
// Errors   normal distribution function: kNormalMaxCdfError, and kNormalMaxTailError relative to
//          the tail probability
// Bytes    additions and multiplications only: the same on every CPU, and in the vector version
//          (simd/normal-inl.h)
#ifndef STILLFIELD_RANDOM_NORMAL_H_
#define STILLFIELD_RANDOM_NORMAL_H_

#include <bit>
#include <cstdint>

#include "random/normal_table.h"

namespace stillfield {

inline constexpr double kNormalMaxCdfError = 1.5e-6;
inline constexpr double kNormalMaxTailError = 1.3e-5;

// m + 1/2 as a float, kept below 2^31, where rounding would take it.
inline constexpr float kNormalLargestTail = 2147483520.0f;
// The table's first binade starts at m + 1/2 = 1/2, whose biased exponent is this.
inline constexpr std::uint32_t kNormalFirstExponent = 126;

constexpr float standard_normal(std::uint32_t word) {
  const std::uint32_t sign = word & 0x80000000u;
  const std::uint32_t m = sign ? ~word : word;
  float tail = static_cast<float>(static_cast<std::int32_t>(m)) + 0.5f;
  if (tail > kNormalLargestTail) tail = kNormalLargestTail;
  const auto bits = std::bit_cast<std::uint32_t>(tail);
  const std::uint32_t binade = (bits >> 23) - kNormalFirstExponent;
  const float t = std::bit_cast<float>((bits & 0x007fffffu) | 0x3f800000u) - 1.5f;
  float z = kNormalTable[kNormalDegree][binade];
  for (int k = kNormalDegree - 1; k >= 0; --k) z = z * t + kNormalTable[k][binade];
  return std::bit_cast<float>(std::bit_cast<std::uint32_t>(z) ^ sign);
}

}  // namespace stillfield

#endif  // STILLFIELD_RANDOM_NORMAL_H_
