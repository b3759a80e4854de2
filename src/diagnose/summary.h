// What is reported of one scalar trace: location, spread, interval bounds and their quality.
//
// Maths    mean and sd (divisor S - 1) of all draws pooled; equal-tailed intervals between the
//          type 7 quantiles at 5 % / 95 % and 2.5 % / 97.5 % (quantile.h); mcse of the mean;
//          rank-normalised split R-hat; bulk and tail ESS
// Output   all in the unit of the draws, R-hat and ESS without unit.
//          Fewer than 4 draws a chain, or a draw that is not finite: every field NaN.
//          All draws equal: mean and bounds that value, sd and mcse exactly 0, R-hat and ESS NaN.
//          Chains standing still at different values: R-hat +infinity, ESS and mcse NaN.
#ifndef STILLFIELD_DIAGNOSE_SUMMARY_H_
#define STILLFIELD_DIAGNOSE_SUMMARY_H_

#include <limits>

#include "diagnose/draws.h"

namespace stillfield {

struct TraceSummary {
  double mean = std::numeric_limits<double>::quiet_NaN();
  double sd = std::numeric_limits<double>::quiet_NaN();
  double lower90 = std::numeric_limits<double>::quiet_NaN();
  double upper90 = std::numeric_limits<double>::quiet_NaN();
  double lower95 = std::numeric_limits<double>::quiet_NaN();
  double upper95 = std::numeric_limits<double>::quiet_NaN();
  double mcse = std::numeric_limits<double>::quiet_NaN();
  double rhat = std::numeric_limits<double>::quiet_NaN();
  double ess_bulk = std::numeric_limits<double>::quiet_NaN();
  double ess_tail = std::numeric_limits<double>::quiet_NaN();
};

TraceSummary summarise(const Draws& draws);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_SUMMARY_H_
