// What the traces of a running job say about convergence.
#ifndef STILLFIELD_JOB_TRACE_SUMMARIES_H_
#define STILLFIELD_JOB_TRACE_SUMMARIES_H_

#include <vector>

#include "diagnose/verdict.h"
#include "posterior/traces.h"

namespace stillfield {

std::vector<NamedSummary> summarise_traces(const std::vector<Trace>& traces);

// Warm-up is over when the chains agree about every scalar in the second half of the window:
// R-hat at most 1.1. Traces that never move agree.
bool chains_agree(const std::vector<Trace>& traces);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_TRACE_SUMMARIES_H_
