// Gibbs sweeps over labels seen through the optics' blur.
//
// Maths    p(z | y) prop. to exp( sum_s alpha_{z_s} + beta sum_<s,t> w_st [z_s = z_t] ) p(y | z),
//          p(y | z) of blurred_field.h. For the pixel s with label a and candidate k, d = mu_k -
//          mu_a:
//          log-odds = alpha_k - alpha_a + beta (n_k - n_a) + d c(s) - d^2 q(s) / 2
//                     + [ log(sd_a / sd_k) - (P_s^k - P_s^a) (rho_s - h(0)^2 d)^2 / 2 ]
//          where the bracket is there for pixels that are observed. O(K) a pixel; only a change of
//          label touches the windows of rho, c and q, and changes are rare away from borders.
// Order    row by row, so each chain is the work of one thread; chains run side by side
// Exact    candidates below e^-23 of the likeliest are never taken (the uniforms have 32 bits);
//          rho, c and q gather float rounding until the next refresh
#ifndef STILLFIELD_SAMPLER_BLURRED_SWEEP_H_
#define STILLFIELD_SAMPLER_BLURRED_SWEEP_H_

#include <cstdint>

#include "model/neighbourhood.h"
#include "random/philox.h"
#include "sampler/blurred_field.h"

namespace stillfield {

// One sweep; returns the number of labels that changed. Slope and curvature must be fresh for
// model.classes.
std::int64_t sweep_blurred(const Neighbourhood& neighbourhood, const LabelModel& model,
                           PhiloxKey key, std::uint32_t sweep, BlurredField& field);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_BLURRED_SWEEP_H_
