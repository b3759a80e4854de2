// A plane of intensities made ready for sampling: which pixels carry a value, what the noise is,
// and the values after the variance-stabilising transform.
//
// Impulses  hide the noise, and the noise tells impulses apart: they are looked for, the noise is
//           estimated without them, and they are looked for again
#ifndef STILLFIELD_JOB_PREPARED_PLANE_H_
#define STILLFIELD_JOB_PREPARED_PLANE_H_

#include <cstdint>
#include <memory>

#include "core/volume.h"
#include "diagnose/residual_correlation.h"
#include "job/denoise_settings.h"
#include "model/impulse_detection.h"
#include "model/noise_model.h"
#include "model/noise_transform.h"
#include "parallel/pool.h"

namespace stillfield {

using Usable = Volume<std::uint8_t>;  // 1: carries a value, 0: does not

struct PreparedPlane {
  Usable usable;        // neither missing, masked nor saturated
  Usable clean;         // usable, and no impulse
  Usable saturated;     // 1 where the value is cut off
  ImpulseMap impulses;  // share 0 and no map when there are none
  NoiseModel noise;
  std::unique_ptr<VarianceTransform> transform;
  Volume<float> transformed;     // every pixel with a number, as it came
  Volume<float> start;           // the same with all but clean pixels filled in from around
  NoiseCorrelation correlation;  // of neighbouring clean pixels, after the transform
  std::int64_t observed = 0, missing = 0, cut_off = 0;
};

// value: NaN = missing. allowed: 0 = masked. Throws Error(kInput) if no pixel is usable, all have
// the same value, or no noise can be seen.
PreparedPlane prepare_plane(const Volume<float>& value, const Usable& allowed,
                            const DenoiseSettings& settings, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_PREPARED_PLANE_H_
