#include "simd/level_lookup.h"

namespace stillfield {
namespace {

// A fixed count lets the compiler read several levels with one load.
constexpr std::ptrdiff_t kUnroll = 16;

}  // namespace

void look_up_weights(const float* table, int planes, int levels, const std::uint16_t* level,
                     std::ptrdiff_t n, float* out, std::ptrdiff_t out_plane) {
  for (int k = 0; k < planes; ++k, table += levels, out += out_plane) {
    for (std::ptrdiff_t i = 0; i < n; i += kUnroll) {
      for (std::ptrdiff_t j = i; j < i + kUnroll; ++j) out[j] = table[level[j]];
    }
  }
}

}  // namespace stillfield
