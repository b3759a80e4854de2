// A patch mixture learned from a folder of like images (`denoise --learn-from`).
//
// Images   every page of every file, colour as luminance, up to kMostLearnedImages of them evenly
// chosen; each is prepared as it
//          would be for restoring (prepared_plane.h), so it brings its own noise and transform
// Errors   Error(kInput) naming the file for images that cannot be read or are too small
#ifndef STILLFIELD_JOB_LEARN_PATCHES_H_
#define STILLFIELD_JOB_LEARN_PATCHES_H_

#include "image/read.h"
#include "job/denoise_settings.h"
#include "job/observer.h"
#include "model/patch_mixture.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr int kMostLearnedImages = 16;

PatchMixture learn_patches(const DenoiseSettings& settings, const ReadLimits& limits,
                           const Pool& pool, const JobObserver& observer);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_LEARN_PATCHES_H_
