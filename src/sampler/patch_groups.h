// One pass of local groups: similar patches share a mean and a covariance of their own.
//
// Groups   for each reference patch of a grid with the given step and a random offset: the
//          `members` nearest patches on the estimate (sampler/patch_search.h)
// Start    clean patch = estimate + N(0, G_k), k a label drawn for the reference patch
// Sampler  `updates` Gibbs updates (simd/patch_group.h) with the inverse Wishart prior of
//          component k's covariance; the first is dropped, the conditional means and variances of
//          the others are averaged
// Noise    correlated noise: members are whitened (model/patch_noise.h), means m' come back as
//          L m', variances as diag L G L', G = V'V the conditional covariance of whitened patches
// Random   c1 = tile of 12 or 16 reference patches squared, c2 = pass << 16 | batch << 8 | update,
//          c0 counts blocks; colours: sampler/patch_wishart.h and below
// Threads  tiles of one of four colours reach disjoint pixels; each is worked in order
#ifndef STILLFIELD_SAMPLER_PATCH_GROUPS_H_
#define STILLFIELD_SAMPLER_PATCH_GROUPS_H_

#include <cstdint>

#include "core/volume.h"
#include "model/patch_tables.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/patch_search.h"
#include "sampler/patch_sums.h"

namespace stillfield {

struct GroupPass {
  int step = 0;     // of the grid of reference patches, in pixels: half a side to a side
  int members = 0;  // a multiple of 4
  int updates = 4;  // at least 2: the first is dropped
};

// value: noise units; estimate: the same units.
void pass_groups(const Volume<float>& value, const SearchImage& estimate, const PatchTables& tables,
                 const GroupPass& settings, PhiloxKey key, std::uint32_t pass, const Pool& pool,
                 PatchSums& sums);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_GROUPS_H_
