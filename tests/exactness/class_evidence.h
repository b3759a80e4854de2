// Probability of grey values given their labels when class means and variances are integrated out.
//
// Prior    that of model/gaussian_draw.h: mean_k | sd_k ~ N(m0, sd_k^2 / kappa0),
//          sd_k^2 ~ Inv-Gamma(nu0/2, nu0 s0^2/2), means in rising order
// Maths    without the order the evidence of a class has the closed form of Gelman et al. (BDA3),
//          section 3.3 (K. Murphy 2007, "Conjugate Bayesian analysis of the Gaussian
//          distribution"), and its mean is Student-t given y; the order multiplies by P(mean_1 <
//          ... < mean_K | z, y), a one-dimensional integral for K = 2 and 3. The t distribution is
//          Boost.Math's.
#ifndef STILLFIELD_TESTS_EXACTNESS_CLASS_EVIDENCE_H_
#define STILLFIELD_TESTS_EXACTNESS_CLASS_EVIDENCE_H_

#include <vector>

#include "exactness/gibbs_field.h"
#include "model/gaussian_draw.h"

namespace stillfield::exactness {

// Posterior of one class mean: location + scale * t(freedom).
struct MeanPosterior {
  double location = 0.0, scale = 1.0, freedom = 1.0;
};

struct Evidence {
  double log_value = 0.0;     // ln p(y | z), up to a constant, order included
  std::vector<double> below;  // P(mean_k < threshold | z, y, order), one a class
};

// `grey` has one value a pixel. Own variances, 2 or 3 classes.
Evidence own_variance_evidence(const std::vector<double>& grey, const Labels& labels, int classes,
                               const GaussianPrior& prior, double threshold);

// Shared variance, 2 classes; `below` is left empty.
Evidence shared_variance_evidence(const std::vector<double>& grey, const Labels& labels,
                                  const GaussianPrior& prior);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_CLASS_EVIDENCE_H_
