#include "random/counters.h"

namespace stillfield {

std::uint64_t image_seed(std::uint64_t seed, std::span<const std::uint8_t> digest,
                         std::uint32_t page) {
  // A chain of Philox blocks: each absorbs four bytes of the digest, then the page.
  PhiloxKey key{static_cast<std::uint32_t>(seed), static_cast<std::uint32_t>(seed >> 32)};
  const auto absorb = [&key](std::uint32_t value, std::uint32_t position) {
    const PhiloxCounter x = philox4x32({value, position, 0x5f696d61u, 0x67655f73u}, key);
    key = {x[0], x[1]};
  };
  std::uint32_t position = 0;
  for (std::size_t i = 0; i < digest.size(); i += 4) {
    std::uint32_t value = 0;
    for (std::size_t j = i; j < i + 4 && j < digest.size(); ++j) {
      value |= std::uint32_t{digest[j]} << (8 * (j - i));
    }
    absorb(value, position++);
  }
  absorb(page, position);
  return std::uint64_t{key[1]} << 32 | key[0];
}

}  // namespace stillfield
