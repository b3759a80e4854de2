// Component labels of patches, drawn from their exact probabilities given the noisy patch.
#ifndef STILLFIELD_SAMPLER_PATCH_LABELS_H_
#define STILLFIELD_SAMPLER_PATCH_LABELS_H_

#include <span>

#include "core/aligned_buffer.h"
#include "core/volume.h"
#include "model/patch_tables.h"

namespace stillfield {

struct PatchPosition {
  int x = 0, y = 0;  // first pixel
};

// Copies a patch row by row.
void copy_patch(const Volume<float>& image, int side, PatchPosition at, float* out);

class PatchLabeller {
 public:
  explicit PatchLabeller(const PatchTables& tables);

  // Computes P(k | patch) of up to kDensityBatch patches of an image in noise units.
  void weigh(const Volume<float>& image, std::span<const PatchPosition> patches);

  float probability(int k, int patch) const;

  // The label at which the running sum of probabilities passes u, 0 < u < 1.
  int label(int patch, double u) const;

 private:
  const PatchTables* tables_;
  AlignedBuffer<float> batch_;
  AlignedBuffer<float> share_;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_LABELS_H_
