// Conjugate draws of class means and variances given the labels.
//
// Prior    mean_k | sd_k ~ N(m0, sd_k^2 / kappa0),  sd_k^2 ~ Inv-Gamma(nu0 / 2, nu0 s0^2 / 2),
//          restricted to mean_1 < ... < mean_K
// Draw     sd_k^2 ~ Inv-Gamma((nu0 + n_k)/2, (nu0 s0^2 + SS_k + kappa0 n_k/(kappa0+n_k)
// (ybar_k-m0)^2)/2)
//          mean_k ~ N((kappa0 m0 + n_k ybar_k)/(kappa0+n_k), sd_k^2/(kappa0+n_k))
//          with a shared variance the sums run over all classes.
//          Gelman, Carlin, Stern, Dunson, Vehtari, Rubin, Bayesian Data Analysis (3rd ed.), 3.3.
// Order    a draw whose means are out of order is rejected and the old parameters stay: an exact
//          Metropolis step for the restricted posterior.
#ifndef STILLFIELD_MODEL_GAUSSIAN_DRAW_H_
#define STILLFIELD_MODEL_GAUSSIAN_DRAW_H_

#include <cstdint>
#include <vector>

#include "model/grey_levels.h"
#include "model/label_model.h"
#include "random/stream.h"

namespace stillfield {

// Sums over the observed pixels of one class, in levels: exact integers.
struct ClassSums {
  std::uint64_t sites = 0;  // all pixels with this label, missing ones too
  std::uint64_t observed = 0;
  std::uint64_t level_sum = 0;
  std::uint64_t level_square_sum = 0;
};

struct GaussianPrior {
  double mean = 0.0;      // m0
  double kappa = 0.01;    // weight of m0, in pixels
  double variance = 1.0;  // s0^2
  double nu = 2.0;        // weight of s0^2, in pixels
};

// The pixels of one class as a regression y = g mean + noise; g is 1 under even light.
struct ClassMoments {
  double n = 0.0;        // observed pixels
  double weight = 0.0;   // sum g^2
  double mean = 0.0;     // sum g y / sum g^2
  double squares = 0.0;  // sum (y - g mean)^2
};

// Draws new means and standard deviations into `classes`; false when the order rule kept the old.
bool draw_gaussian_classes(const GreyLevels& grey, const std::vector<ClassSums>& sums,
                           const GaussianPrior& prior, RandomStream& random,
                           GaussianClasses& classes);

// The same from moments, with sum g^2 in the place of n_k where it weighs the mean.
bool draw_gaussian_classes(const std::vector<ClassMoments>& moments, const GaussianPrior& prior,
                           RandomStream& random, GaussianClasses& classes);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_GAUSSIAN_DRAW_H_
