// ln Z and E[S] of a Potts field without data, 4 neighbours, free boundaries, by a transfer matrix
// that adds one pixel at a time; the derivative by beta is carried along.
//
// Cost     classes^width x width x height x classes
#ifndef STILLFIELD_TESTS_EXACTNESS_STRIP_H_
#define STILLFIELD_TESTS_EXACTNESS_STRIP_H_

namespace stillfield::exactness {

struct StripSums {
  double log_z = 0.0;
  double mean_pairs = 0.0;  // E[S] = d ln Z / d beta
};

StripSums sum_strip(int width, int height, int classes, double beta);

}  // namespace stillfield::exactness

#endif  // STILLFIELD_TESTS_EXACTNESS_STRIP_H_
