// An image restored by a field of overlapping patches learned from the noisy image itself.
//
// Model    every patch of the clean image follows a Gaussian mixture (model/patch_mixture.h);
//          noise is Gaussian and of known deviation, white or with the correlation of the settings
//          (model/patch_noise.h)
// Method   1. random tilings: exact conditional moments of every tile's patch given its data
//             (sampler/patch_tiling.h)
//          2. local groups: similar patches found on the estimate share a mean and a covariance
//             drawn by a short Gibbs run (sampler/patch_groups.h). The search looks at the data
//             and the run is short: empirical Bayes
//          3. all overlapping patch means are pooled by precision (sampler/patch_sums.h)
//          4. tilings and groups, of patches of side 6 and of side 8 unless one is asked for, are
//             blended with the weights that restore split noise best (sampler/patch_blend.h)
// Plainly  `quick`, and correlated noise: one side (6 below a relative noise of 40/255, else 8),
//          its groups alone
// Units    those of the image throughout
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_SAMPLER_PATCH_FIELD_H_
#define STILLFIELD_SAMPLER_PATCH_FIELD_H_

#include <cstdint>
#include <functional>
#include <vector>

#include "core/volume.h"
#include "model/patch_mixture.h"
#include "model/patch_settings.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

// Called between sweeps with the steps done; true asks to stop.
using PatchProgress = std::function<bool(int step, int steps)>;

// One of the blended restorations.
struct PatchShare {
  int side = 0;
  int components = 0;   // of the mixture
  bool groups = false;  // after the passes of groups; before them otherwise
  double weight = 1;
};

struct PatchResult {
  IntensityMoments moments;
  std::vector<Volume<float>> draws;  // images drawn from the posterior, `samples` of them
  std::vector<PatchShare> shares;
};

// value: one plane, finite everywhere (missing pixels hold a guess); noise_sd > 0.
// redraw may be null, and must be when the noise is correlated: values are redrawn with white
// noise. learned: a mixture learned elsewhere, or null to learn from `value`; its side overrides
// the setting. Throws Error(kInterrupt) when `progress` asks to stop, Error(kUsage) for a redraw
// with correlated noise, otherwise as resolved_settings does.
PatchResult restore_patches(const Volume<float>& value, double noise_sd,
                            const PatchSettings& settings, PhiloxKey key, const Pool& pool,
                            PixelRedraw* redraw, const PatchMixture* learned,
                            const PatchProgress& progress);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_FIELD_H_
