#include "sampler/patch_labels.h"

#include <algorithm>

#include "model/patch_shares.h"
#include "simd/patch_density.h"

namespace stillfield {

void copy_patch(const Volume<float>& image, int side, PatchPosition at, float* out) {
  for (int y = 0; y < side; ++y) std::copy_n(image.row(at.y + y) + at.x, side, out + y * side);
}

PatchLabeller::PatchLabeller(const PatchTables& tables)
    : tables_(&tables),
      batch_(static_cast<std::size_t>(tables.elements()) * kDensityBatch),
      share_(static_cast<std::size_t>(tables.size()) * kDensityBatch) {}

void PatchLabeller::weigh(const Volume<float>& image, std::span<const PatchPosition> patches) {
  const int side = tables_->side;
  for (std::size_t i = 0; i < patches.size(); ++i) {
    float* out = batch_.data() + i;
    for (int y = 0; y < side; ++y) {
      const float* row = image.row(patches[i].y + y) + patches[i].x;
      for (int x = 0; x < side; ++x, out += kDensityBatch) *out = row[x];
    }
  }
  component_shares(*tables_, batch_.data(), static_cast<int>(patches.size()), share_.data());
}

float PatchLabeller::probability(int k, int patch) const {
  return share_[static_cast<std::size_t>(k * kDensityBatch + patch)];
}

int PatchLabeller::label(int patch, double u) const {
  double sum = 0.0;
  for (int k = 0; k + 1 < tables_->size(); ++k) {
    sum += double{probability(k, patch)};
    if (u < sum) return k;
  }
  // Rounding may leave a remainder: it belongs to the last label that is possible at all.
  int k = tables_->size() - 1;
  while (k > 0 && probability(k, patch) == 0.0f) --k;
  return k;
}

}  // namespace stillfield
