// How much an image varies over a distance, and what that says about pixels without a value.
//
// Maths    D(h) = mean of (x_s - x_t)^2 over pairs of usable pixels h apart along rows and columns
//          (twice the variogram of Matheron 1963)
// Use      a pixel h away from the nearest usable one is known from its neighbours to about D(h)/2;
//          the sampler's own variance of such a pixel is too small, because it sees the value that
//          it has drawn for it
// Units    squared units of the image; distances in pixels, larger of the two directions
#ifndef STILLFIELD_MODEL_VARIOGRAM_H_
#define STILLFIELD_MODEL_VARIOGRAM_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"

namespace stillfield {

inline constexpr int kVariogramReach = 32;

// D(1) .. D(kVariogramReach) at [0] ..; distances without pairs repeat the last one known, 0 if
// there is none.
std::vector<double> mean_squared_differences(View<const float> image,
                                             View<const std::uint8_t> usable);

// Adds D(h)/2 to the variance of every pixel that is not usable; h beyond the reach counts as the
// reach.
void add_gap_variance(View<const float> image, View<const std::uint8_t> usable,
                      View<float> variance);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_VARIOGRAM_H_
