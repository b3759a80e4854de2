// Data augmentation for pixels whose noise is not white: each sweep such a pixel's value is redrawn
// so that the field sees u_s = x_s + N(0, s0^2) everywhere (Tanner & Wong 1987).
//
// IntensityMoments   mean and variance of x_s given the field's current state, in grey units
// redraw             writes u_s into `value` for the pixels it owns and leaves the others alone;
//                    random words are of Purpose::kRedraw at the pixel's global position and `sweep`,
//                    so the result does not depend on the pool
#ifndef STILLFIELD_SAMPLER_PIXEL_REDRAW_H_
#define STILLFIELD_SAMPLER_PIXEL_REDRAW_H_

#include <cstdint>

#include "core/volume.h"
#include "parallel/pool.h"

namespace stillfield {

struct IntensityMoments {
  Volume<float> mean, variance;
};

class PixelRedraw {
 public:
  virtual ~PixelRedraw() = default;

  virtual void redraw(const IntensityMoments& now, std::uint32_t sweep, const Pool& pool,
                      Volume<float>& value) = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_PIXEL_REDRAW_H_
