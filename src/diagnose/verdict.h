// Has the run converged, and if not, what misses which target?
//
// Targets  R-hat <= max_rhat, bulk and tail ESS >= min_ess for every scalar; Monte Carlo standard
//          error of the mean label probability <= max_probability_mcse
//          [Vehtari et al. 2021 (see rank_normal.h): R-hat < 1.01 and 100 effective draws a chain,
//          here 4 chains; the last target is common practice, no source]
// Input    scalars: the summaries of the reported traces (summary.h), each under the name that the
//          reader knows it by; probability_mcse: empty if the run has no label probabilities
// Output   converged: no target missed (also true of a run that reports nothing);
//          misses: worst first, one sentence each. The order is by shortfall, the factor to the
//          target: (R-hat - 1) / (max_rhat - 1), min_ess / ESS, mcse / max_probability_mcse; equal
//          shortfalls keep the order of the input.
//          A trace with all draws equal in all chains has converged. Chains that stand still at
//          different values have not, nor has a trace that cannot be judged (fewer than 4 draws a
//          chain, values that are not finite): shortfall infinite.
// Errors   Error(kUsage) unless max_rhat > 1, min_ess > 0 and max_probability_mcse > 0
#ifndef STILLFIELD_DIAGNOSE_VERDICT_H_
#define STILLFIELD_DIAGNOSE_VERDICT_H_

#include <optional>
#include <span>
#include <string>
#include <vector>

#include "diagnose/summary.h"

namespace stillfield {

struct ConvergenceTarget {
  double max_rhat = 1.01;
  double min_ess = 400;
  double max_probability_mcse = 0.01;
};

struct NamedSummary {
  std::string name;
  TraceSummary summary;
};

struct MissedTarget {
  std::string scalar;
  std::string sentence;
  double shortfall = 0;  // > 1
};

struct Verdict {
  bool converged = true;
  std::vector<MissedTarget> misses;
};

Verdict judge_convergence(std::span<const NamedSummary> scalars,
                          std::optional<double> probability_mcse,
                          const ConvergenceTarget& target = {});

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_VERDICT_H_
