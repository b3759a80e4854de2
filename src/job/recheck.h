// How wide the intervals of a restoration should be: restore what is known, and look.
//
// Method   noise is added anew to (a) the restored image and (b) a draw from the posterior, which
// then
//          play the truth; both are restored in the same way. The posterior mean is smoother than
//          the scene, a draw is rougher
// Maths    c = sqrt(c_a c_b), c_i = 90 % quantile over pixels of |error| / sd, over 1.645
// Result   the factor for the standard deviations: above 1, the intervals were too narrow
#ifndef STILLFIELD_JOB_RECHECK_H_
#define STILLFIELD_JOB_RECHECK_H_

#include <cstdint>
#include <functional>

#include "core/volume.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/pixel_redraw.h"

namespace stillfield {

// Restores an image with white noise; `run` numbers the restorations.
using RestoreAgain = std::function<IntensityMoments(const Volume<float>& value, std::uint32_t run)>;

double recheck_factor(const Volume<float>& mean, const Volume<float>& draw, double noise_sd,
                      PhiloxKey key, const Pool& pool, const RestoreAgain& restore);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_RECHECK_H_
