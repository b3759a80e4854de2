// A measurement from the trace of its value over the draws.
//
// Maths    posterior mean, sd and equal-tailed intervals, MCSE, rank-normalised split R-hat, the
//          smaller of bulk and tail ESS (diagnose/summary.h); plain_estimate is the posterior mean
// Input    draws in `unit`; label 0 = whole image
// Missing  a draw that is not finite has no such quantity (no particle to size, say).
//          defined_share is the share of draws that have it. From kLeastDefinedShare on, mean, sd
//          and intervals are those of all draws that have it: they hold given that it exists; MCSE,
//          R-hat and ESS come from the chains without the other draws, cut to the shortest. Below
//          that share every other number is NaN
// Output   every number NaN for fewer than 4 draws; MCSE, R-hat and ESS NaN if a chain has fewer
#ifndef STILLFIELD_MEASURE_FROM_TRACE_H_
#define STILLFIELD_MEASURE_FROM_TRACE_H_

#include <string>

#include "diagnose/draws.h"
#include "diagnose/summary.h"
#include "measure/measurement.h"

namespace stillfield {

inline constexpr double kLeastDefinedShare = 0.5;

Measurement measurement_from_trace(std::string name, int label, std::string unit,
                                   const Draws& draws);

// The same from a summary that the caller already has.
Measurement measurement_from_summary(std::string name, int label, std::string unit,
                                     const TraceSummary& summary);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_FROM_TRACE_H_
