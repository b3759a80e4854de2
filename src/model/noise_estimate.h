// Noise level of a single image, with an interval, from its flattest blocks (noise_blocks.h).
//
// Maths    gaussian  sd^2 = variance of the high-frequency part of the blocks with the least
//                    low-frequency energy: a twentieth of them, or as many, up to half, as show no
//                    more of it than pure noise would (flatness, noise_flat_set.h)
//          photon    the same in kIntensityBins bins of equal count by block mean; a robust line
//                    (noise_line.h). A negative intercept within two standard errors of 0 is taken
//                    as 0, below that as an offset of the intensity scale
//          rician    in each bin the signal-to-noise ratio s with E y / sd y as measured, then
//                    sd^2 = v / Var(s) (Koay & Basser 2006); median over the bins
//          auto      photon when the slope is above kClearSlope standard errors and the variance
//                    at the 95 % grey value is above kClearRatio times that at the 5 % value;
//                    else gaussian
// Interval jackknife over tiles for the sampling error; below it, room for leftover texture that
//          grows with the flatness of the chosen blocks (1 = flat). Noise that the scene's own
//          recording left in the picture counts as noise.
// Warning  flatness above kTextured (kTexturedBins): no part of the picture is flat at the level of
// its noise Errors   Error(kInput) when too few usable pixels lie side by side
#ifndef STILLFIELD_MODEL_NOISE_ESTIMATE_H_
#define STILLFIELD_MODEL_NOISE_ESTIMATE_H_

#include <cstdint>
#include <optional>

#include "core/volume.h"
#include "model/noise_model.h"
#include "parallel/pool.h"

namespace stillfield {

inline constexpr double kFlatShare = 0.05;
inline constexpr int kIntensityBins = 20;
inline constexpr double kClearSlope = 3.0;
inline constexpr double kClearRatio = 1.3;
inline constexpr double kTextured = 2.7;
inline constexpr double kTexturedBins = 2.2;  // median over the intensity bins

// `usable` is 0 for pixels to leave out: missing, masked, saturated, impulses. No kind: auto.
// The result is the same for any pool; no random numbers are used.
NoiseModel estimate_noise(std::optional<NoiseKind> kind, View<const float> image,
                          View<const std::uint8_t> usable, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_ESTIMATE_H_
