// The patches a mixture is learned from, and a first partition of them.
#ifndef STILLFIELD_MODEL_PATCH_SAMPLE_H_
#define STILLFIELD_MODEL_PATCH_SAMPLE_H_

#include <cstdint>
#include <span>
#include <vector>

#include "core/aligned_buffer.h"
#include "model/patch_settings.h"
#include "random/philox.h"

namespace stillfield {

// Patches of one plane are neighbours in the sample.
struct PatchSample {
  int elements = 0;
  std::size_t size = 0;
  AlignedBuffer<float> rows;  // patch-major (simd/patch_density.h), (value - centre) / unit
  std::vector<std::size_t> plane_start;  // first patch of each plane; one more entry at the end
  std::vector<double> plane_noise_sd;    // in units of `unit`
  double centre = 0.0;                   // mean of the sampled pixels' planes
  double unit = 1.0;                     // mean noise of the planes

  const float* row(std::size_t i) const;
};

// At most about `most` patches, spread evenly over all positions of all planes with a random one
// in each stretch.
PatchSample draw_patch_sample(std::span<const PatchPlane> planes, int side, std::size_t most,
                              PhiloxKey key);

// Labels 0 .. components - 1 by distance to seeds drawn as k-means++ does (Arthur & Vassilvitskii
// 2007), after a few Lloyd steps.
std::vector<std::uint32_t> first_partition(const PatchSample& sample, int components,
                                           PhiloxKey key);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_SAMPLE_H_
