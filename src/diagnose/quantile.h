// Sample quantiles by linear interpolation of the order statistics.
//
// Maths    h = (n - 1) p, i = floor(h): x_(i) + (h - i) (x_(i+1) - x_(i)), counted from 0
//          [definition 7 of Hyndman & Fan 1996, The American Statistician 50, 361-365]
// Input    p in [0, 1]
// Output   NaN for an empty list, a value that is not finite, or p outside [0, 1]
#ifndef STILLFIELD_DIAGNOSE_QUANTILE_H_
#define STILLFIELD_DIAGNOSE_QUANTILE_H_

#include <span>
#include <vector>

namespace stillfield {

double quantile(std::span<const double> values, double p);

// The same for values already in ascending order; they must be finite.
double quantile_of_sorted(std::span<const double> sorted, double p);

std::vector<double> sorted_copy(std::span<const double> values);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_QUANTILE_H_
