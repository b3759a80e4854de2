#include "model/patch_shares.h"

#include <algorithm>

#include "core/elementary.h"
#include "simd/patch_density.h"

namespace stillfield {
namespace {

constexpr float kLeastLogShare = -40.0f;

}  // namespace

void component_shares(const PatchTables& tables, const float* batch, int count, float* share) {
  const int components = tables.size();
  for (int k = 0; k < components; ++k) {
    const ComponentTables& t = tables.components[static_cast<std::size_t>(k)];
    patch_log_densities(tables.elements(), batch, t.mean.data(), t.row_blocks.data(), t.constant,
                        share + k * kDensityBatch);
  }
  for (int b = 0; b < count; ++b) {
    float most = share[b];
    for (int k = 1; k < components; ++k) most = std::max(most, share[k * kDensityBatch + b]);
    double total = 0.0;
    for (int k = 0; k < components; ++k) {
      float& s = share[k * kDensityBatch + b];
      const float off = s - most;
      const double e = off < kLeastLogShare ? 0.0 : exact_exp(double{off});
      s = static_cast<float>(e);
      total += e;
    }
    const double inverse = 1.0 / total;
    for (int k = 0; k < components; ++k) {
      float& s = share[k * kDensityBatch + b];
      s = static_cast<float>(double{s} * inverse);
    }
  }
}

}  // namespace stillfield
