// R-hat: do the chains agree?
//
// Maths    B = n * variance of the chain means, W = mean of the chain variances (both with the
//          divisor "count - 1"), var+ = (n-1)/n W + B/n, R-hat = sqrt(var+ / W), on chains cut in
//          halves [Vehtari et al. 2021 (see rank_normal.h), equations 1 to 4]. The rank-normalised
//          form is the larger of that of the normal scores (bulk: different locations) and that of
//          the normal scores of the folded draws (different scales) [section 4.1].
// Output   about 1 when mixed, larger otherwise; rank-normalised target 1.01.
//          NaN     fewer than 4 draws a chain, a draw that is not finite, or all half-chains
//                  constant at the same value: nothing to compare (verdict.h calls constant
//                  traces that agree converged)
//          +inf    no half-chain moves, but they stand at different values
//          A folded trace that is constant (draws at equal distance from their median, as with two
//          values in equal shares) has no scale to compare: the bulk value alone counts.
// Cost     O(S log S) for S draws
#ifndef STILLFIELD_DIAGNOSE_RHAT_H_
#define STILLFIELD_DIAGNOSE_RHAT_H_

#include "diagnose/draws.h"

namespace stillfield {

double split_rhat(const Draws& draws);
double rank_normalised_split_rhat(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_RHAT_H_
