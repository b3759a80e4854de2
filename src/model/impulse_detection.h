// Pixels that are probably impulses: salt, pepper, random values, hot and dead pixels.
//
// Maths    1. d = fourth smallest |y_s - y_t| over the 24 neighbours t of a 5 x 5 window: small for
// a
//             pixel of an area, an edge or a line, large for an isolated one (rank-ordered absolute
//             differences; Garnett, Huegerich, Chui & He 2005). A pixel is found when d exceeds
//             kNoise sd + kTexture t + kOverall q, t = third quartile of d over the window, q = 80
//             % quantile of d over the image. Repeated without the pixels found, which hide others
//          2. if their share is above kLeastImpulseShare, kRounds times: g = their grey values'
//             density (impulse_density.h), rho = mean of the map,
//             value = rho g(y) / (rho g(y) + (1 - rho) f(y)), f = the mean over the window of
//             N(y; a_t, s^2 (1 + 1/n_t + kBlur^2) + m^2), a_t = average of the n_t regular pixels
//             of the 3 x 3 window around t without y itself, m = the window's median
//             of d: which values regular neighbours would explain; mixed with a share kOdd of
//             uniform values. For salt, pepper and stuck pixels at least the share of their pixels
//             that the number of pixels with nearly the same value does not account for
//          sd is taken as at least kLeastNoise of the grey range
//          An expected share, if given, is rho, and lowers the limit of step 1 until as many pixels
//          are found: strong texture hides impulses from the limit, not from the order
// Shapes   grey values as they are in the file; slices of a volume are taken one by one
// Ranges   value in [0, 1], 0 for unusable pixels; share = pixels with value > 1/2 / usable pixels
// Measured figures stand in docs/accuracy.md
#ifndef STILLFIELD_MODEL_IMPULSE_DETECTION_H_
#define STILLFIELD_MODEL_IMPULSE_DETECTION_H_

#include <cstdint>
#include <optional>

#include "core/volume.h"
#include "model/impulse_atoms.h"
#include "model/noise_model.h"
#include "parallel/pool.h"

namespace stillfield {

struct ImpulseMap {
  Volume<float> value;
  double share = 0.0;

  bool found(int x, int y, int z = 0) const { return value.at(x, y, z) > 0.5f; }
};

ImpulseMap detect_impulses(View<const float> image, View<const std::uint8_t> usable,
                           const NoiseModel& noise, const Pool& pool,
                           std::optional<double> expected_share = std::nullopt);

// The first step alone: few false alarms, for images that may hold no impulses at all.
ImpulseMap isolated_pixels(View<const float> image, View<const std::uint8_t> usable,
                           const NoiseModel& noise, const Pool& pool,
                           std::optional<double> expected_share = std::nullopt);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_IMPULSE_DETECTION_H_
