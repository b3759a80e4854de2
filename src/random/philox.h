// Philox4x32 with 10 rounds: four 32-bit words as a pure function of a counter and a key.
//
// Maths    ten rounds of  x0' = hi(M1 x2) ^ x1 ^ k0,  x1' = lo(M1 x2),
//                         x2' = hi(M0 x0) ^ x3 ^ k1,  x3' = lo(M0 x0),  k += (W0, W1)
//          Salmon, Moraes, Dror, Shaw 2011, "Parallel random numbers: as easy as 1, 2, 3"
// Tests    tests/random/philox_test.cc (published known answers and Debian's librandom123-dev)
#ifndef STILLFIELD_RANDOM_PHILOX_H_
#define STILLFIELD_RANDOM_PHILOX_H_

#include <array>
#include <cstdint>

namespace stillfield {

inline constexpr int kPhiloxRounds = 10;
inline constexpr std::uint32_t kPhiloxM0 = 0xD2511F53u;
inline constexpr std::uint32_t kPhiloxM1 = 0xCD9E8D57u;
inline constexpr std::uint32_t kPhiloxW0 = 0x9E3779B9u;
inline constexpr std::uint32_t kPhiloxW1 = 0xBB67AE85u;

using PhiloxCounter = std::array<std::uint32_t, 4>;
using PhiloxKey = std::array<std::uint32_t, 2>;

constexpr PhiloxCounter philox4x32(PhiloxCounter x, PhiloxKey key) {
  for (int round = 0; round < kPhiloxRounds; ++round) {
    const std::uint64_t p0 = std::uint64_t{kPhiloxM0} * x[0];
    const std::uint64_t p1 = std::uint64_t{kPhiloxM1} * x[2];
    x = {static_cast<std::uint32_t>(p1 >> 32) ^ x[1] ^ key[0], static_cast<std::uint32_t>(p1),
         static_cast<std::uint32_t>(p0 >> 32) ^ x[3] ^ key[1], static_cast<std::uint32_t>(p0)};
    key = {key[0] + kPhiloxW0, key[1] + kPhiloxW1};
  }
  return x;
}

}  // namespace stillfield

#endif  // STILLFIELD_RANDOM_PHILOX_H_
