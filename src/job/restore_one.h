// One image, from its pixels to its posterior sample: the path worth reading first.
#ifndef STILLFIELD_JOB_RESTORE_ONE_H_
#define STILLFIELD_JOB_RESTORE_ONE_H_

#include <cstdint>

#include "job/label_sampling.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"
#include "sampler/path_sampling.h"

namespace stillfield {

// Samples the labels of one field until the targets are met or the sweeps are used up.
// `image_seed` comes from random/counters.h. Throws Error(kInput) when the field has fewer grey
// levels than classes, Error(kInterrupt) when the observer asks to stop. `memo` keeps ln Z for the
// next image of the same size (--coupling sampled).
LabelSampling restore_one(const GreyLevels& grey, const SegmentSettings& settings,
                          std::uint64_t image_seed, const Pool& pool, JobObserver& observer,
                          LogPartitionMemo* memo = nullptr);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESTORE_ONE_H_
