// Quantile of Student's t distribution with a whole number of degrees of freedom.
//
// Maths    up to 200 degrees of freedom the finite sums for P(|T| <= t), Abramowitz & Stegun 1964,
//          26.7.3 and 26.7.4, solved by bisection; above, the expansion 26.7.5 in 1/dof about the
//          normal quantile. + - * / sqrt and exact_log only: same bits on every CPU
// Input    p in (0, 1), dof >= 1
// Output   t with P(T <= t) = p; relative error below kStudentTMaxRelError for p in
//          [0.0005, 0.9995]; NaN for p outside (0, 1) or dof < 1
// Tests    tests/measure/student_t_test.cc: handbook table, Boost.Math
#ifndef STILLFIELD_MEASURE_STUDENT_T_H_
#define STILLFIELD_MEASURE_STUDENT_T_H_

#include <cstdint>

namespace stillfield {

inline constexpr double kStudentTMaxRelError = 1e-10;

double student_t_quantile(double p, std::int64_t dof);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_STUDENT_T_H_
