// Labels of one field seen through the optics' blur: after restore_one, its chains go on with
// another likelihood.
//
// Why      without blur a pixel on the border of classes 1 and 3 looks like class 2: thin false
//          rims, classes wider than they are, area fractions off (docs/trust.md, "Blur")
// Steps    1  start: thin labels absorbed (sampler/blur_search.h) in every other chain, so that
//             chains with rims and chains without have to meet
//          2  settling: classes, class field (--coupling auto) and, with --blur auto, the blur
//             itself (sampler/blurred_chain.h) follow the labels; then blur and class field stay
//          3  warm-up and sampling as in restore_one
// Coupling what restore_one found; with --coupling sampled it is drawn as there
#ifndef STILLFIELD_JOB_RESTORE_BLURRED_H_
#define STILLFIELD_JOB_RESTORE_BLURRED_H_

#include "job/label_sampling.h"
#include "job/observer.h"
#include "job/settings.h"
#include "parallel/pool.h"

namespace stillfield {

// Does nothing more than say so in `run.blur` when there is no blur to model; otherwise chains,
// counts, traces and verdict of `run` become those of the blurred sampling, and run.blurred holds
// a field a chain. Throws as restore_one.
void restore_blurred(const SegmentSettings& settings, const Pool& pool, JobObserver& observer,
                     LabelSampling& run);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RESTORE_BLURRED_H_
