// An estimate corrected for its bias, and its interval, from the errors of a parametric bootstrap.
//
// Errors   e_gr = T(y*_gr) - m(z*_gr) of replicate r with a simulated truth of kind g: the same
//          statistic T of a simulated image, less what is known to be true of it
//          (Efron & Tibshirani 1993)
// Maths    bias b = mean over kinds of b_g = mean_r e_gr;  estimate = T(y) - b
//          v = mean_g var_r(e_gr) + mean_g (b_g - b)^2: kinds of truth that disagree on the bias
//          are part of its uncertainty
//          u^2 = (1 + 1/n) v + p + b^2 s + f, with n all errors, p the posterior variance, s the
//          share of the correction that is taken as its own standard uncertainty, squared, f a
//          floor given by the caller
//          bounds = estimate +- t(n - kinds) u, within [lowest, highest]; so is the estimate
// Output   all NaN when T(y) is not finite or a kind has fewer than two finite errors
#ifndef STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_
#define STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_

#include <limits>
#include <vector>

namespace stillfield {

struct BootstrapErrors {
  double value = std::numeric_limits<double>::quiet_NaN();  // T(y)
  std::vector<std::vector<double>> errors;                  // [kind][replicate]; NaN is left out
  double posterior_variance = 0;                            // p; NaN counts as 0
  double bias_share = 0;                                    // s
  double floor_variance = 0;                                // f
  double lowest = -std::numeric_limits<double>::infinity();
  double highest = std::numeric_limits<double>::infinity();
};

struct CorrectedValue {
  double estimate = std::numeric_limits<double>::quiet_NaN();
  double sd = std::numeric_limits<double>::quiet_NaN();  // u
  double lower90 = std::numeric_limits<double>::quiet_NaN();
  double upper90 = std::numeric_limits<double>::quiet_NaN();
  double lower95 = std::numeric_limits<double>::quiet_NaN();
  double upper95 = std::numeric_limits<double>::quiet_NaN();
};

CorrectedValue correct_value(const BootstrapErrors& bootstrap);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_
