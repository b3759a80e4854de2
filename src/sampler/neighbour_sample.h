// Labels and neighbour counts of a sample of pixels of a chain, for pseudo-likelihood.
#ifndef STILLFIELD_SAMPLER_NEIGHBOUR_SAMPLE_H_
#define STILLFIELD_SAMPLER_NEIGHBOUR_SAMPLE_H_

#include "model/pseudo_likelihood.h"
#include "sampler/label_chain.h"

namespace stillfield {

// Appends evenly spread pixels of all colours, about `wanted` of them (all when the field is
// smaller); `phase` in [0, 1) shifts the pattern, so that successive samples see other pixels.
void sample_neighbours(const Colouring& colouring, const LabelChain& chain, int wanted,
                       double phase, NeighbourCounts& counts);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_NEIGHBOUR_SAMPLE_H_
