// Warm-up and sampling of the chains of a field, up to the targets or the limit of sweeps.
#ifndef STILLFIELD_JOB_SAMPLE_CHAINS_H_
#define STILLFIELD_JOB_SAMPLE_CHAINS_H_

#include <functional>

#include "job/label_sampling.h"
#include "job/observer.h"
#include "sampler/schedule.h"

namespace stillfield {

// Moves every chain one block of sweeps further and calls done(c) for each; chains may do so at
// the same time.
using ChainDone = std::function<void(int)>;
using AdvanceChains = std::function<void(const ChainDone& done)>;

// One block of all chains and what is kept of it. Throws Error(kInterrupt) when the observer asks
// to stop.
void advance_block(const AdvanceChains& advance, Schedule& schedule, JobObserver& observer,
                   LabelSampling& run);

// From the schedule's present stage, which is past adapting, to its end. `run` comes with chains
// and empty traces and counts, and gets scalars, qualities, verdict and sweeps.
void sample_chains(const SegmentSettings& settings, const AdvanceChains& advance,
                   Schedule& schedule, const Pool& pool, JobObserver& observer, LabelSampling& run);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SAMPLE_CHAINS_H_
