// The diagnostics a second time, straight from the formulas of Vehtari, Gelman, Simpson, Carpenter,
// Buerkner 2021: quadratic cost, long double, ranks by counting, the normal quantile by bisection
// of erfc, all autocovariances before any decision. Chains are plain vectors.
#ifndef STILLFIELD_TESTS_DIAGNOSE_REFERENCE_H_
#define STILLFIELD_TESTS_DIAGNOSE_REFERENCE_H_

#include <vector>

namespace stillfield::testing {

using Chains = std::vector<std::vector<long double>>;

Chains reference_split(const Chains& x);
Chains reference_normal_scores(const Chains& x);
Chains reference_folded(const Chains& x);
long double reference_quantile(const Chains& x, long double p);

// Without any splitting or ranking.
long double reference_rhat(const Chains& x);
long double reference_ess(const Chains& x);

// The whole recipe.
long double reference_rank_normalised_split_rhat(const Chains& x);
long double reference_bulk_ess(const Chains& x);
long double reference_tail_ess(const Chains& x);
long double reference_mcse_mean(const Chains& x);

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_DIAGNOSE_REFERENCE_H_
