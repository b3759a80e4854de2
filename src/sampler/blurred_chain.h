// A label chain that sees its labels through the optics' blur.
//
// The chain keeps its place in the random numbers, its model and its colour-split labels; the
// blurred field beside it holds the same labels in image order. Updates are those of
// blurred_sweep.h and blurred_classes.h; the coupling stays as it is or is drawn, as in sweep.h.
#ifndef STILLFIELD_SAMPLER_BLURRED_CHAIN_H_
#define STILLFIELD_SAMPLER_BLURRED_CHAIN_H_

#include "sampler/blurred_field.h"
#include "sampler/sweep.h"

namespace stillfield {

// A field for the chain's labels and classes, ready to sweep.
BlurredField open_blurred_chain(const LabelPosterior& problem, const BlurKernel& kernel,
                                const LabelChain& chain);

// One block: `sweeps` sweeps of the labels (visits are counted when the chain has a visits plane),
// then the classes and, if the problem says so, the coupling.
void advance_blurred_chain(const LabelPosterior& problem, int sweeps, const Pool& pool,
                           BlurredField& field, LabelChain& chain);

// One Metropolis step of the blur given labels and classes, under a flat prior over
// [kSmallestBlur, kLargestBlur]; normal proposals of three scales in turn, by the chain's sweep.
// The field must be fresh; on acceptance it gets the new kernel and is refreshed.
void draw_blur(const LabelPosterior& problem, BlurredField& field, const LabelChain& chain);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_BLURRED_CHAIN_H_
