// Sums over an intensity field that the draws of its parameters need, one value a row.
//
// Maths    squared_differences   sum over pairs (s, t) owned by the row of w_st (x_s - x_t)^2
//          absolute_differences  the same of w_st |x_s - x_t|
//          squared_residuals     sum over the row's sites of p_s (y_s - x_s)^2
//          a pair is owned by the end that lies before the other in image order
// Output   out[r] for each row r of the band, first_row <= r < first_row + rows
// Bytes    column j is added to the j % 16-th of sixteen float sums, which are then added as
//          doubles in order: the same for any vector width
#ifndef STILLFIELD_SIMD_INTENSITY_SUMS_H_
#define STILLFIELD_SIMD_INTENSITY_SUMS_H_

#include "simd/intensity_band.h"

namespace stillfield {

void squared_differences(const IntensityBand& band, double* out);
void absolute_differences(const IntensityBand& band, double* out);
void squared_residuals(const IntensityBand& band, double* out);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_INTENSITY_SUMS_H_
