// Mean and variance of a list of numbers.
//
// Maths    variance = sum (x - mean)^2 / (n - 1), in two passes
// Output   NaN for the mean of nothing and for the variance of fewer than two values; a list of
//          equal values has exactly that mean and variance exactly 0
#ifndef STILLFIELD_DIAGNOSE_MOMENTS_H_
#define STILLFIELD_DIAGNOSE_MOMENTS_H_

#include <span>

namespace stillfield {

double mean_of(std::span<const double> values);
double variance_of(std::span<const double> values);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_MOMENTS_H_
