// What overlapping patches say about each pixel, pooled by precision.
//
// Maths    with patch means m and conditional variances v of the patches over a pixel:
//          mean = sum(m / v) / sum(1 / v);  variance = n / sum(1 / v) + b, the harmonic mean of
//          the v plus b, the precision-weighted variance of the patch means (their disagreement)
// Numbers  m is taken relative to an origin near it, so that b does not cancel
// Layout   {sum (m - origin) / v, sum 1 / v, sum (m - origin)^2 / v, n} a pixel, side by side
#ifndef STILLFIELD_SAMPLER_PATCH_SUMS_H_
#define STILLFIELD_SAMPLER_PATCH_SUMS_H_

#include "core/volume.h"
#include "parallel/pool.h"

namespace stillfield {

struct PixelSums {
  float weighted_mean, precision, weighted_square, count;
};

class PatchSums {
 public:
  // origin: one plane, in noise units; must outlive the sums.
  explicit PatchSums(const Volume<float>& origin);

  void clear(const Pool& pool);

  // Adds one row of a patch: `n` pixels from (x, y), means and precisions in noise units.
  void add(int x, int y, int n, const float* mean, const float* precision) {
    const float* origin = origin_->row(y) + x;
    PixelSums* sums = sums_.row(y) + x;
    for (int i = 0; i < n; ++i) {
      const float off = mean[i] - origin[i];
      const float weighted = off * precision[i];
      sums[i].weighted_mean += weighted;
      sums[i].precision += precision[i];
      sums[i].weighted_square += off * weighted;
      sums[i].count += 1.0f;
    }
  }

  // Mean and variance in noise units; pixels without a patch keep the origin and variance 1.
  float mean(int x, int y) const;
  float variance(int x, int y) const;

 private:
  const Volume<float>* origin_;
  Volume<PixelSums> sums_;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PATCH_SUMS_H_
