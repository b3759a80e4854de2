// One plane of intensities, from noisy pixels to its posterior: the path worth reading first for
// `denoise`.
//
// Steps    1. pixels that carry no value: not a number, masked, saturated, impulses
//          2. noise: as given, or estimated from the pixels left
//          3. variance-stabilising transform for noise that depends on the intensity
//          4. posterior mean and variance under the field asked for; pixels without a value are
//             redrawn between sweeps
//          5. intervals (mean +- 1.645 standard deviations of the transformed intensity, mapped
//             back), draws, checks
#ifndef STILLFIELD_JOB_RESTORE_PLANE_H_
#define STILLFIELD_JOB_RESTORE_PLANE_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"
#include "job/denoise_settings.h"
#include "job/observer.h"
#include "model/patch_mixture.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "report/restoration_facts.h"

namespace stillfield {

struct PlaneRestoration {
  Volume<float> restored;          // posterior mean
  Volume<float> sd;                // posterior standard deviation
  Volume<float> lower90, upper90;  // interval of each pixel
  Volume<float> impulse;           // probability that the pixel is an impulse; empty without
  std::vector<Volume<float>> draws;
  ChannelFacts facts;
  RestorationFacts field;              // without channels
  std::vector<std::string> notes;      // what a reader should know
  std::vector<std::string> sentences;  // why the result is in doubt
  bool converged = true;
  bool correlation_modelled = false;  // of the noise, by the patch field
};

// value: NaN = missing. usable: 0 = masked. `mixture`: learned elsewhere, or null.
// Throws Error(kInput) if the plane has no usable pixel or no noise to remove, Error(kInterrupt).
PlaneRestoration restore_plane(const Volume<float>& value, const Volume<std::uint8_t>& usable,
                               const DenoiseSettings& settings, std::uint64_t seed,
                               const PatchMixture* mixture, const Pool& pool,
                               JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESTORE_PLANE_H_
