// Noise level and impulses of one image when neither is known.
//
// Method   a first level, half that of the median difference of horizontal neighbours, which a
// tenth of
//          impulses hardly moves, then detect_impulses and estimate_noise without the pixels found,
//          kRounds times
// Result   when the share found is below kLeastImpulseShare the map is zero and the level is that
// of
//          all usable pixels
#ifndef STILLFIELD_MODEL_IMPULSE_NOISE_H_
#define STILLFIELD_MODEL_IMPULSE_NOISE_H_

#include <cstdint>
#include <optional>

#include "core/volume.h"
#include "model/impulse_detection.h"
#include "model/noise_model.h"
#include "parallel/pool.h"

namespace stillfield {

struct NoiseWithImpulses {
  NoiseModel noise;  // impulse_share is set
  ImpulseMap impulses;
};

// Errors as estimate_noise.
NoiseWithImpulses estimate_noise_and_impulses(std::optional<NoiseKind> kind,
                                              View<const float> image,
                                              View<const std::uint8_t> usable, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_IMPULSE_NOISE_H_
