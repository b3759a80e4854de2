// Draws the auxiliary precisions of an `edges` field, one a pair of neighbours.
//
// Maths    A Laplace prior of rate k = tau w_st on d = x_s - x_t is the mixture of N(0, v) over
//          v ~ Exp(k^2 / 2); given d, omega = 1 / v is inverse Gaussian with mean k / |d| and shape
//          k^2 (Andrews & Mallows 1974; Park & Casella 2008). With g = omega / k^2 and e = k |d|,
//          g is inverse Gaussian with mean 1 / e and shape 1, drawn by Michael, Schucany & Haas
//          1976 in a form that loses no digits and allows e = 0:
//            small root  g = 2 / (2 e + chi + sqrt(chi (chi + 4 e))),  chi = z^2, z normal
//            take it when u (1 + e g) <= 1, u uniform; else the large root 1 / (e^2 g)
// Range    roots are kept below 2e12 and 1e12: both bounds are beyond what 24-bit draws reach
// Random   words of the owner's column and row, with counter_word3's slice = 32 * slice + 2 * pair
//          plane for z and + 1 for u. band.random.word3 is that of pair plane 0.
// Output   pair_precision of all rows of the band; zero where the pair does not exist
#ifndef STILLFIELD_SIMD_INTENSITY_PAIRS_H_
#define STILLFIELD_SIMD_INTENSITY_PAIRS_H_

#include "simd/intensity_band.h"

namespace stillfield {

// Difference of word3 between one slice number and the next (random/counters.h).
inline constexpr std::uint32_t kSliceStep = 1u << 8;
inline constexpr std::uint32_t kPairSlices = 32;
inline constexpr float kPairFloor = 1e-12f;

void draw_pair_precisions(const IntensityBand& band);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_INTENSITY_PAIRS_H_
