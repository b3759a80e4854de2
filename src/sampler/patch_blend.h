// How much each of several restorations of one image counts: the weights that restore held-out
// noise best.
//
// Why      Tilings alone are better than groups on fine texture and on flat two-level pictures,
//          groups are better on most others; larger patches are better in strong noise and worse
//          where the contrast is low. No property of the picture tells, but its noise can be split
// Method   noise splitting: with n ~ N(0, s^2) drawn anew, u = y + a n and v = y - n / a have
//          independent noise (Rasines & Young 2023; Oliveira, Lei & Tibshirani 2021, from memory).
//          Restorations x_i of u are judged by A_ij = mean of (x_i - v)(x_j - v), whose expectation
//          is that of the errors' products plus a constant. The weights minimise w' A w over w >=
//          0, sum w = 1
// Blend    mean = sum w_i mean_i; variance = sum w_i (variance_i + (mean_i - mean)^2), that of the
//          mixture: disagreement of the restorations widens the interval
#ifndef STILLFIELD_SAMPLER_PATCH_BLEND_H_
#define STILLFIELD_SAMPLER_PATCH_BLEND_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

// u and v, and the deviation of u's noise.
struct SplitNoise {
  Volume<float> restored_from, judged_by;
  double noise_sd = 0;
};

// value: white noise of deviation noise_sd.
SplitNoise split_noise(const Volume<float>& value, double noise_sd, PhiloxKey key,
                       const Pool& pool);

// The weights for restorations of `restored_from`. Pixels where `usable` differs from `given` were
// redrawn and do not count; when none is left the weights are equal.
std::vector<double> blend_weights(const std::vector<Volume<float>>& restorations,
                                  const SplitNoise& split, const Volume<float>& given,
                                  const Volume<float>& usable);

// Minimiser of w' A w over w >= 0, sum w = 1, by enumeration of the supports. quadratic: n x n,
// symmetric, row by row; n <= 8. Equal weights if no support has a solution.
std::vector<double> simplex_minimiser(const std::vector<double>& quadratic, int n);

// weights: one a restoration, sum 1.
IntensityMoments blend(const std::vector<IntensityMoments>& restorations,
                       const std::vector<double>& weights, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_BLEND_H_
