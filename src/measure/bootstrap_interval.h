// An estimate corrected for its bias, and its interval, from the errors of a parametric bootstrap.
//
// Errors   e_gr = T(y*_gr) - m(z*_gr) of replicate r with a simulated truth of kind g: the same
//          statistic T of a simulated image, less what is known to be true of it
//          (Efron & Tibshirani 1993)
// Maths    bias b = mean over kinds of b_g = mean_r e_gr;  estimate = T(y) - c b
//          u^2 = w (1 + 1/n) mean_g var_r(e_gr) + k mean_g (b_g - b)^2 + s b^2 + q p + h f
//          n all errors, p the posterior variance, f a variance the caller knows of; the shares
//          c, w, k, s, q, h come from a calibration (measure/bootstrap_shares.h). Kinds of truth
//          that disagree on the bias (k) and the correction itself (s) are part of the uncertainty
//          bounds = estimate +- t(n - kinds) u, within [lowest, highest]; so is the estimate
#ifndef STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_
#define STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_

#include <limits>
#include <vector>

#include "measure/measurement.h"

namespace stillfield {

struct BootstrapErrors {
  double value = std::numeric_limits<double>::quiet_NaN();  // T(y)
  std::vector<std::vector<double>> errors;                  // [kind][replicate]; NaN is left out
  double posterior_variance = 0;                            // p; NaN counts as 0
  double floor_variance = 0;                                // f
  double lowest = -std::numeric_limits<double>::infinity();
  double highest = std::numeric_limits<double>::infinity();
};

struct BootstrapShares {
  double correction = 1;  // c
  double within = 1;      // w
  double between = 1;     // k
  double bias = 0;        // s
  double posterior = 1;   // q
  double floor = 1;       // h
};

// What the errors come down to; bias and within one a kind.
struct BootstrapParts {
  std::vector<double> bias;
  std::vector<double> within;
  double number = 0;  // n
};

// Empty when T(y) is not finite or a kind has fewer than two finite errors.
BootstrapParts bootstrap_parts(const BootstrapErrors& bootstrap);

// Replaces estimate, sd (u) and bounds; false, and nothing is replaced, without parts.
bool correct_measurement(const BootstrapErrors& bootstrap, const BootstrapShares& shares,
                         Measurement& measurement);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_BOOTSTRAP_INTERVAL_H_
