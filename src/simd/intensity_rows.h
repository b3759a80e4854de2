// One Gibbs update of every site of a band of an intensity field.
//
// Maths    x_s = (sum_t p_st x_t + c p_s y_s) / q + z / sqrt(q),  q = sum_t p_st + c p_s
//          with p_st = lambda w_st (smooth) or omega_st (edges), c = noise_precision, p_s = the
//          row's precision, z = standard_normal of the site's word (random/normal.h)
// Order    smooth_rows  S = sum over rings of w_r (sum of the ring, in order); r = 1 / (lambda W_s
//                       + c p_s); x = (lambda r S + ((c p_s) r) y) + sqrt(r) z
//          edges_rows   S, Q = running sums of omega_st x_t and omega_st over the neighbours;
//                       Q += c p_s; r = 1 / Q; x = (S + (c p_s) y) r + sqrt(r) z
//          every product and sum rounded to float; r = 0 where q = 0
// Moments  when asked: d = x - shift, sum += d, square += d d
#ifndef STILLFIELD_SIMD_INTENSITY_ROWS_H_
#define STILLFIELD_SIMD_INTENSITY_ROWS_H_

#include "simd/intensity_band.h"

namespace stillfield {

void smooth_rows(const IntensityBand& band);
void edges_rows(const IntensityBand& band);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_INTENSITY_ROWS_H_
