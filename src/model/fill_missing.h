// A guess for pixels without a value, from the usable ones around them.
//
// Method   averages of 2 x 2 usable pixels, of their averages, and so on up to one; a missing pixel
//          takes the value of the finest average above it that holds a usable pixel. Only a start:
//          the sampler redraws these pixels (sampler/noise_redraw.h).
#ifndef STILLFIELD_MODEL_FILL_MISSING_H_
#define STILLFIELD_MODEL_FILL_MISSING_H_

#include <cstdint>

#include "core/volume.h"

namespace stillfield {

// Writes into the pixels of `image` (depth 1) whose `usable` is 0. Without any usable pixel the
// image stays as it is.
void fill_missing(View<const std::uint8_t> usable, View<float> image);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_FILL_MISSING_H_
