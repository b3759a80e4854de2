// Random input of the group sampler: Bartlett's triangle for 16 groups at once.
#ifndef STILLFIELD_SAMPLER_PATCH_WISHART_H_
#define STILLFIELD_SAMPLER_PATCH_WISHART_H_

#include <cstdint>

#include "random/philox.h"

namespace stillfield {

// Which random numbers: c0 counts blocks, the purpose's colours 0 to 2 are used (normals of the
// triangle; normals and uniforms of the diagonal).
struct WishartStream {
  PhiloxKey key{};
  std::uint32_t position = 0;  // c1
  std::uint32_t sweep = 0;     // c2
};

// Fills the triangle B of simd/patch_group.h: standard normals, and on the diagonal the root of
// chi-square(degrees - (d-1-i)); degrees > d + 1. The gamma draws are Marsaglia & Tsang's (2000).
void fill_bartlett(const WishartStream& stream, int d, int degrees, float* triangle);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_WISHART_H_
