// Conjugate draws of the parameters of an intensity field.
//
// smooth    p(x | lambda) prop. to lambda^((n-1)/2) exp(-lambda/2 S), S = sum w_st (x_s - x_t)^2.
//           The power: the quadratic form of a connected grid of n pixels has rank n - 1 (only
//           constants are free), and substituting u = sqrt(lambda) x on the n - 1 remaining
//           dimensions pulls out lambda^(-(n-1)/2) (Rue & Held 2005, 3.2). With a Gamma(a, b) prior
//             lambda | x ~ Gamma(a + (n - 1) / 2, b + S / 2)
// edges     p(x | tau) prop. to tau^(n-1) exp(-tau S), S = sum w_st |x_s - x_t|: the same
//           substitution u = tau x on n - 1 dimensions gives tau^-(n-1), whatever the number of
//           pairs. With the pairs' scales integrated out,
//             tau | x ~ Gamma(a + n - 1, b + S)
//           The scales are then drawn given tau and x, so that both are one joint draw given x.
// noise     y_s | x_s ~ N(x_s, sigma^2 / p_s) for n_obs pixels, R = sum p_s (y_s - x_s)^2; with an
//           inverse Gamma(a, b) prior on sigma^2
//             sigma^2 | x, y ~ InvGamma(a + n_obs / 2, b + R / 2)
// Units     lambda: grey^-2, tau: grey^-1, sigma^2: grey^2 (or none when p_s = 1 / variance)
#ifndef STILLFIELD_MODEL_INTENSITY_DRAWS_H_
#define STILLFIELD_MODEL_INTENSITY_DRAWS_H_

#include <cstdint>

#include "random/stream.h"

namespace stillfield {

enum class IntensityPrior { kSmooth, kEdges };

// Gamma for a strength, inverse Gamma for a variance. Both > 0: with improper priors the
// posterior of the two together is improper at sigma = 0.
struct ShapeRate {
  double shape = 1.0;
  double rate = 1.0;
};

// lambda or tau; `sites` is n, `difference_sum` is S.
double draw_strength(IntensityPrior prior, const ShapeRate& hyper, std::int64_t sites,
                     double difference_sum, RandomStream& random);

// sigma^2; `residual_sum` is R.
double draw_noise_variance(const ShapeRate& hyper, std::int64_t observed, double residual_sum,
                           RandomStream& random);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_INTENSITY_DRAWS_H_
