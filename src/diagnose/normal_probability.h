// Distribution function of the standard normal distribution.
//
// Maths    P(Z <= x) = 1/2 + phi(x) (x + x^3/3 + x^5/(3 5) + ...)  [Marsaglia 2004, Journal of
//          Statistical Software 11(4)]; + - * / and exact_exp only: same bits on every CPU
// Errors   kNormalProbabilityMaxError, absolute; 0 below -8 and 1 above 8; NaN for NaN
// Tests    tests/diagnose/normal_probability_test.cc: erfc
#ifndef STILLFIELD_DIAGNOSE_NORMAL_PROBABILITY_H_
#define STILLFIELD_DIAGNOSE_NORMAL_PROBABILITY_H_

namespace stillfield {

inline constexpr double kNormalProbabilityMaxError = 1e-14;

double normal_probability(double x);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_NORMAL_PROBABILITY_H_
