// Rank normalisation: draws replaced by the normal scores of their ranks in the pooled sample.
//
// Maths    z = Phi^-1((r - 3/8) / (S + 1/4)), r = rank among all S draws of all chains, 1..S,
//          ties share their mean rank  [Blom 1958; Vehtari, Gelman, Simpson, Carpenter, Buerkner
//          2021, Bayesian Analysis 16, 667-718, section 4.1]
//          folded draws: |x - median|  [the same paper, section 4.1], written with the two middle
//          draws l <= h as |(x - l) + (x - h)| / 2 so that l and h tie exactly
// Shape    n x m in, n x m out
// Input    finite draws
// Cost     O(S log S)
#ifndef STILLFIELD_DIAGNOSE_RANK_NORMAL_H_
#define STILLFIELD_DIAGNOSE_RANK_NORMAL_H_

#include "diagnose/draws.h"

namespace stillfield {

Draws rank_normalise(const Draws& draws);
Draws fold(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_RANK_NORMAL_H_
