// How much of their contrast the pixels beside a border have lost: a sign of blur.
//
// Maths    sum over pixels at most 2 px from another class of
//            sign(F_j - F_k) (y - F_k), k the pixel's class, j the class across the border,
//          over the sum of |F_j - F_k|; F_k = mean grey value of the pixels of class k farther
//          than 2 px from its border, or of all its pixels when fewer than a tenth, or than
//          kFewPixels, are; the border pixels of such a class are left out
// Bias     labels that were fitted to the same noise make it negative without blur. So it is no
//          estimate of blur by itself, but can be compared with the same value of simulated images
//          that were analysed in the same way (indirect inference: Gourieroux, Monfort & Renault
//          1993)
// Output   0 when there is no border to look at
#ifndef STILLFIELD_MEASURE_EDGE_LEAK_H_
#define STILLFIELD_MEASURE_EDGE_LEAK_H_

#include <cstdint>

#include "core/volume.h"

namespace stillfield {

inline constexpr int kFewPixels = 30;

// Labels 1..K; `grey` NaN where nothing was observed.
double edge_leak(View<const float> grey, View<const std::uint8_t> labels, int classes);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_EDGE_LEAK_H_
