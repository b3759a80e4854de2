// Gaussian mixture of a grey-level histogram by expectation-maximisation.
//
// Maths    r_lk prop. to pi_k N(v_l; mu_k, s_k^2); pi, mu, s^2 from the weighted moments
//          (Dempster, Laird & Rubin 1977). Variances are kept above 1e-6 of the total variance and
//          above step^2 / 12, the variance of rounding to one level.
// Starts   means at equal quantiles and at equal distances; the better likelihood wins
// Cost     histograms longer than 1024 levels are binned first
#ifndef STILLFIELD_MODEL_MIXTURE_EM_H_
#define STILLFIELD_MODEL_MIXTURE_EM_H_

#include <cstdint>
#include <vector>

#include "model/label_model.h"

namespace stillfield {

struct GreyHistogram {
  std::vector<double> value;
  std::vector<double> weight;
  double step = 0.0;  // distance of grey levels
};

struct Mixture {
  GaussianClasses classes;  // by rising mean
  std::vector<double> proportion;
  double log_likelihood = 0.0;
};

// Throws Error(kInput) when fewer than `classes` values occur.
Mixture fit_mixture(const GreyHistogram& histogram, int classes, bool shared_variance);

// Class of the largest pi_k N(v; mu_k, s_k^2), 0-based.
int most_likely_class(const Mixture& mixture, double value);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_MIXTURE_EM_H_
