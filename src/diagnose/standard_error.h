// Monte Carlo standard error (MCSE) of the mean of the draws.
//
// Maths    sd of all draws pooled (divisor S - 1) / sqrt(ess_mean)
//          [Vehtari et al. 2021 (see rank_normal.h), section 4]
// Output   in the unit of the draws; 0 if all draws are equal; NaN where ess_mean is NaN otherwise
#ifndef STILLFIELD_DIAGNOSE_STANDARD_ERROR_H_
#define STILLFIELD_DIAGNOSE_STANDARD_ERROR_H_

#include "diagnose/draws.h"

namespace stillfield {

double mcse_mean(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_STANDARD_ERROR_H_
