// Weight rows from grey levels by table.
#ifndef STILLFIELD_SIMD_LEVEL_LOOKUP_H_
#define STILLFIELD_SIMD_LEVEL_LOOKUP_H_

#include <cstddef>
#include <cstdint>

namespace stillfield {

// out[k * out_plane + i] = table[k * levels + level[i]] for n sites and `planes` tables k.
// n is a multiple of 16, level[i] < levels; the levels are read once for all tables.
void look_up_weights(const float* table, int planes, int levels, const std::uint16_t* level,
                     std::ptrdiff_t n, float* out, std::ptrdiff_t out_plane);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_LEVEL_LOOKUP_H_
