// Which component a noisy patch comes from.
//
// Maths    P(k | y) proportional to weight_k N(y; mean_k, covariance_k + I), patch integrated out
#ifndef STILLFIELD_MODEL_PATCH_SHARES_H_
#define STILLFIELD_MODEL_PATCH_SHARES_H_

#include "model/patch_tables.h"

namespace stillfield {

// share[k * kDensityBatch + b] = P(k | patch b) for the first `count` patches of an element-major
// batch (simd/patch_density.h) in the tables' units. Shares below e^-40 of the largest are 0.
void component_shares(const PatchTables& tables, const float* batch, int count, float* share);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_SHARES_H_
