// Squared distances between one patch of an image and all patches at neighbouring positions.
//
// Maths    out[x] = sum over the patch's pixels, row by row, of (image(x + px, py) -
//          reference(px, py))^2: the search of non-local means (Buades, Coll & Morel 2005)
// Bytes    the same on every CPU target; tests/simd/patch_distance_test.cc
#ifndef STILLFIELD_SIMD_PATCH_DISTANCE_H_
#define STILLFIELD_SIMD_PATCH_DISTANCE_H_

#include <cstddef>

namespace stillfield {

inline constexpr int kDistanceRun = 32;

// Distances to the kDistanceRun positions that start at `first` and go along its row. Both
// pointers look into images of row stride `stride`; the candidates' rows must be readable for
// kDistanceRun + side floats.
void patch_distances(int side, const float* reference, const float* first, std::ptrdiff_t stride,
                     float* out);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_PATCH_DISTANCE_H_
