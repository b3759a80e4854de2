// e^x of many doubles: the bytes of exact_exp (core/elementary.h), several at a time.
//
// Maths    the same operations in the same order on every target; no table, no fused multiply-add
// Range    arguments outside [-700, 700] count as the nearest end; NaN is not allowed
#ifndef STILLFIELD_SIMD_EXPONENTIALS_H_
#define STILLFIELD_SIMD_EXPONENTIALS_H_

#include <cstddef>

namespace stillfield {

inline constexpr double kLargestExponent = 700.0;

// Replaces x[0 .. n - 1] by e^x; reads and writes up to the next multiple of kExponentialsBatch.
inline constexpr std::ptrdiff_t kExponentialsBatch = 16;
void exponentials(double* x, std::ptrdiff_t n);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_EXPONENTIALS_H_
