// Settings of the field of overlapping patches, and the choices made for what is left at 0.
#ifndef STILLFIELD_MODEL_PATCH_SETTINGS_H_
#define STILLFIELD_MODEL_PATCH_SETTINGS_H_

#include <cstdint>
#include <span>

#include "core/volume.h"
#include "model/patch_noise.h"

namespace stillfield {

struct PatchSettings {
  int patch = 0;       // side in pixels, 4, 6 or 8; 0: 6 and 8 (sampler/patch_field.h), and for one
                       // mixture 6 below a relative noise of 40/255, else 8
  int components = 0;  // of the mixture; 0: 30, 40 above 512^2 pixels
  int tiling_sweeps = 25;  // random tilings of the mixture field
  int group_passes = 2;    // passes of local groups; 0: mixture only
  int group_size = 40;     // similar patches a group
  bool quick = false;      // fewer iterations, one thin pass of groups
  int samples = 0;         // images to draw from the posterior

  NoiseCorrelationModel noise_correlation;  // of every plane
};

// One plane to learn from or to restore: finite values, depth 1, and its noise.
struct PatchPlane {
  const Volume<float>* value = nullptr;
  double noise_sd = 0.0;
};

inline constexpr int kMaxPatchSide = 8;

// Images with a smaller side than this have too few patches for a group.
int least_patch_side();

// `settings` with every choice made. Throws Error(kUsage) for settings out of range and
// Error(kInput) for planes that are too small or noise that is not positive.
PatchSettings resolved_settings(const PatchSettings& settings, std::span<const PatchPlane> planes);

// Noise relative to the range of the plane's 4 x 4 block means, less what noise adds to it.
double relative_noise(const PatchPlane& plane);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_SETTINGS_H_
