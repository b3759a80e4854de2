// exp and log in double precision from additions and multiplications alone.
//
// The C library picks fused variants of these by CPU, and one unit in the last place sooner or
// later flips a label. These versions give the same bits on every machine that rounds as IEEE 754
// asks, provided the compiler does not contract a*b+c (the build says -ffp-contract=off).
// Tests    tests/core/elementary_test.cc asserts the bounds below against long double libm
#ifndef STILLFIELD_CORE_ELEMENTARY_H_
#define STILLFIELD_CORE_ELEMENTARY_H_

namespace stillfield {

inline constexpr double kExpMaxRelError = 4e-16;  // for results in the normal range
inline constexpr double kLogMaxRelError = 4e-16;  // relative to max(|log x|, 2^-52 |x-1| terms)

// e^x. 0 below -745, +infinity above 709.78; NaN in, NaN out.
double exact_exp(double x);

// Natural logarithm. -infinity at 0, NaN below 0 and for NaN, +infinity at +infinity.
double exact_log(double x);

}  // namespace stillfield

#endif  // STILLFIELD_CORE_ELEMENTARY_H_
