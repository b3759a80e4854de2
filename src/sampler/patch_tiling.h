// One random tiling of the image into patches: exact conditional moments, and exact draws.
//
// Maths    a tiling with a random offset splits the image into independent patches y = x + n,
//          x ~ mixture, in noise units. Given k, x ~ N(m_k, V_k) with m_k = mean_k + G_k (y -
//          mean_k); labels are summed out with p_k = P(k | y):
//          mean m = sum p_k m_k, variance sum p_k (diag V_k + m_k^2) - m^2.
//          Draws take a label with p_k and add the Cholesky factor of V_k times normals
// Borders  patches at either end of a row or column overlap their neighbours, so that every pixel
//          is covered; they count as patches of their own
// Random   c0, c1 = first pixel of the patch, c2 = sweep; colour 0: label; colour 1: normals,
//          c0 = first pixel * 16 + block. The offset: RandomStream(kTiling, sweep, 7)
// Left out labels with p_k below kLeastTilingShare; the others are scaled to sum to 1
#ifndef STILLFIELD_SAMPLER_PATCH_TILING_H_
#define STILLFIELD_SAMPLER_PATCH_TILING_H_

#include <cstdint>

#include "core/volume.h"
#include "model/patch_tables.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/patch_sums.h"

namespace stillfield {

inline constexpr float kLeastTilingShare = 1e-3f;

// Adds the conditional moments of all patches of the sweep's tiling to the sums.
// value: noise units (tables' centre and unit).
void sweep_tiling(const Volume<float>& value, const PatchTables& tables, PhiloxKey key,
                  std::uint32_t sweep, const Pool& pool, PatchSums& sums);

// One tiling's draw of the noise-free patches less their conditional means, each pixel divided by
// its conditional deviation: standard normal, correlated inside a patch as the posterior is.
Volume<float> draw_tiling_deviation(const Volume<float>& value, const PatchTables& tables,
                                    PhiloxKey key, std::uint32_t sweep, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_TILING_H_
