// Quantile of the standard normal distribution.
//
// Maths    rational approximations in three ranges  [Wichura 1988, Applied Statistics 37, 477-484,
//          algorithm AS 241, PPND16]; + - * / sqrt and exact_log only: same bits on every CPU
// Input    p in (0, 1)
// Output   z with P(Z <= z) = p, relative error about 1e-16 in exact arithmetic, below
//          kInverseNormalMaxRelError as computed (p >= 1e-300); -infinity at 0, +infinity at 1,
//          NaN elsewhere
// Tests    tests/diagnose/inverse_normal_test.cc: erfc, Boost.Math, published values
#ifndef STILLFIELD_DIAGNOSE_INVERSE_NORMAL_H_
#define STILLFIELD_DIAGNOSE_INVERSE_NORMAL_H_

namespace stillfield {

inline constexpr double kInverseNormalMaxRelError = 1e-15;

double inverse_normal(double p);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_INVERSE_NORMAL_H_
