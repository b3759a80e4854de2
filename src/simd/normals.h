// Standard normal numbers (random/normal.h) in bulk: sequences, and rows of pixels.
#ifndef STILLFIELD_SIMD_NORMALS_H_
#define STILLFIELD_SIMD_NORMALS_H_

#include <cstddef>

#include "random/philox.h"
#include "simd/random_rows.h"

namespace stillfield {

// out[i] = standard_normal of word i % 4 of the Philox block at first + {i / 4, 0, 0, 0}.
// first[0] + n / 4 must stay below 2^32. `out` needs no alignment.
void standard_normals(PhiloxKey key, PhiloxCounter first, std::size_t n, float* out);

// The normals of the words of random_row_pair. Both outputs are 64-byte aligned and have room for
// round_up(columns, 16) numbers.
void normal_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns, float* even_row,
                     float* odd_row);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_NORMALS_H_
