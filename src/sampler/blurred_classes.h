// Class means and deviations given labels that are seen through blur.
//
// Maths    With X_k(t) = sum_s h(t-s) 1[z_s = k] (blurred_field.h) the scaled image is linear in
// the
//          means: Y_t = sum_k mu_k X_k(t) + noise of precision P_t. Hence, exactly,
//            sd_k^2 | mu ~ Inv-Gamma( (nu0 + n_k + 1) / 2,
//                          (nu0 s0^2 + sum_{z_t=k} w_t r_t^2 + kappa0 (mu_k - m0)^2) / 2 )
//            mu | sd     ~ N(A^-1 b, A^-1), A = X'PX + diag(kappa0 / sd^2), b = X'PY + kappa0 m0 /
//            sd^2
//          for the priors of model/gaussian_draw.h, with r = rho / n the residual in grey levels; a
//          shared deviation takes the sums over all classes (Gelman et al., Bayesian Data Analysis,
//          3rd ed., 14.2)
// Order    means out of order: the old ones stay (an exact Metropolis step, as in gaussian_draw.h)
// Bytes    doubles, sums by row, rows in order
#ifndef STILLFIELD_SAMPLER_BLURRED_CLASSES_H_
#define STILLFIELD_SAMPLER_BLURRED_CLASSES_H_

#include "model/gaussian_draw.h"
#include "model/square_matrix.h"
#include "sampler/blurred_field.h"

namespace stillfield {

// X'PX, X'PY and Y'PY.
struct BlurredRegression {
  SquareMatrix square;
  std::vector<double> product;
  double target = 0.0;
  double observed = 0.0;  // pixels
};

// From the labels alone. Far from borders, where a window holds one label, X needs no sums.
BlurredRegression regress_on_classes(const std::vector<double>& precision,
                                     const BlurredField& field);

// Draws deviations, then means; the residual must belong to `classes`. Slope and curvature are
// stale afterwards: call refresh_blurred_field.
void draw_blurred_classes(const GaussianPrior& prior, RandomStream& random,
                          const BlurredField& field, GaussianClasses& classes);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_BLURRED_CLASSES_H_
