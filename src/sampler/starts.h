// Over-dispersed starting points of the chains.
//
// Chain 0 starts from the image averaged over 3 x 3 pixels, chain 1 from single pixels, chain 2
// from 5 x 5 pixels, chain 3 and later from 3 x 3 pixels with means moved by up to a quarter of
// their distances, standard deviations scaled by up to 1.5 and a tenth of the labels redrawn.
#ifndef STILLFIELD_SAMPLER_STARTS_H_
#define STILLFIELD_SAMPLER_STARTS_H_

#include <cstdint>
#include <vector>

#include "sampler/coupling.h"
#include "sampler/label_chain.h"

namespace stillfield {

struct ChainSettings {
  int classes = 2;
  int chains = 4;
  bool shared_variance = false;
  CouplingSettings coupling;
  std::uint64_t seed = 0;  // of the image (random/counters.h)
};

// Weakly informative prior of the classes: centred on the image mean, with the weight of 0.01
// pixels, and on the starting variance, with the weight of 2 pixels.
GaussianPrior default_prior(const GreyLevels& grey, const GaussianClasses& start);

// Throws Error(kInput) when fewer than `classes` grey levels occur.
std::vector<LabelChain> start_chains(const ObservedField& field, const ChainSettings& settings);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_STARTS_H_
