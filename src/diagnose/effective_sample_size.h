// Effective sample size (ESS): how many independent draws would estimate as well as these.
//
// Maths    On chains cut in halves (n x m, S = n m), with W and var+ as in rhat.h and c_t the mean
//          over chains of the autocovariance at lag t (autocovariance.h):
//            rho_0 = 1, rho_t = 1 - (W - c_t) / var+
//            P_k = rho_2k + rho_2k+1, up to and without the first P_k <= 0 or the last even lag
//            that averages four products, each lowered to the smallest before it (Geyer's initial
//            monotone sequence)
//            tau = -1 + 2 sum P_k + max(0, rho_2K), K the first pair left out
//            ESS = S / max(tau, 1 / log10 S)
//          [Vehtari et al. 2021 (see rank_normal.h), section 3.2 and 4; Geyer 1992]. The last term
//          of tau corrects the truncation for chains that alternate; 1 / log10 S keeps such chains
//          from claiming more than S log10 S.
// Output   NaN: fewer than 4 draws a chain, a draw that is not finite, or no half-chain moves
//          (whether they stand at the same value or not)
// Cost     O(S log S)
#ifndef STILLFIELD_DIAGNOSE_EFFECTIVE_SAMPLE_SIZE_H_
#define STILLFIELD_DIAGNOSE_EFFECTIVE_SAMPLE_SIZE_H_

#include "diagnose/draws.h"

namespace stillfield {

// For the mean of the draws.
double ess_mean(const Draws& draws);

// For location: ESS of the normal scores of the ranks.
double bulk_ess(const Draws& draws);

// For the quantile at p: ESS of the indicator x <= q_p, q_p the pooled sample quantile. Where q_p
// is the largest value, that indicator never changes and x < q_p takes its place.
double quantile_ess(const Draws& draws, double p);

// For the interval bounds: the smaller of quantile_ess at 5 % and 95 %.
double tail_ess(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_EFFECTIVE_SAMPLE_SIZE_H_
