// Weak priors of an intensity field's parameters, and over-dispersed starts of its chains.
//
// Scale    D = mean squared difference of horizontal and vertical neighbours that are observed.
//          On a smooth field D is about 2 sigma^2 v + 1 / (2 lambda), v the mean given variance.
// Prior    lambda ~ Gamma(1, D / 20), tau ~ Gamma(1, sqrt(D) / 10), sigma^2 ~ InvGamma(1, D / (40
// v)):
//          each weighs as much as two pixels
// Starts   chain 0 from means of 3 x 3 pixels, 1 from the image, 2 from its mean grey value, 3 from
//          the image with noise of variance D / 2 added, further ones as 3; strengths and noise
//          variances a factor of up to 5 off the scale's guess
#ifndef STILLFIELD_SAMPLER_INTENSITY_START_H_
#define STILLFIELD_SAMPLER_INTENSITY_START_H_

#include <cstdint>
#include <vector>

#include "sampler/intensity_chain.h"

namespace stillfield {

// Sweeps at the starting parameters before parameters are drawn.
inline constexpr int kSettlingSweeps = 4;

IntensityModel weak_intensity_model(const ObservedIntensity& observed, View<const float> value,
                                    View<const float> variance, IntensityPrior prior,
                                    bool noise_scale_known);

// `seed` is that of the image (random/counters.h).
std::vector<IntensityChain> start_intensity_chains(const ObservedIntensity& observed,
                                                   const IntensityModel& model,
                                                   View<const float> value, int chains,
                                                   std::uint64_t seed);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_INTENSITY_START_H_
