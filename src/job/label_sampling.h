// The posterior sample of one label field, and what is known about its quality.
#ifndef STILLFIELD_JOB_LABEL_SAMPLING_H_
#define STILLFIELD_JOB_LABEL_SAMPLING_H_

#include <memory>
#include <string>
#include <vector>

#include "diagnose/verdict.h"
#include "job/settings.h"
#include "model/grey_levels.h"
#include "posterior/label_counts.h"
#include "posterior/traces.h"
#include "report/blur_facts.h"
#include "report/shading_facts.h"
#include "sampler/blurred_field.h"
#include "sampler/coupling_search.h"
#include "sampler/shaded_chain.h"
#include "sampler/sweep.h"

namespace stillfield {

struct LabelSampling {
  std::unique_ptr<Colouring> colouring;        // the others refer to it
  std::unique_ptr<LogPartitionMemo> own_memo;  // unless the run has one
  LabelPosterior problem;
  std::vector<LabelChain> chains;     // where they stopped (label_draws.h goes on)
  std::vector<BlurredField> blurred;  // one a chain when blur is modelled, else empty
  BlurFacts blur;
  std::shared_ptr<const Shading> shading;  // when uneven light is drawn with the labels
  std::unique_ptr<LabelCounts> counts;
  std::unique_ptr<Traces> traces;
  LabelPrior prior;  // of the last block; fixed while sampling unless sampled
  std::vector<CouplingScore> coupling_ladder;  // --coupling auto: what was tried
  std::vector<NamedSummary> scalars;           // in the order of the traces
  ProbabilityQuality probability;
  Verdict verdict;
  double log_partition_hysteresis = 0.0;
  int adapting_sweeps = 0;
  int warming_sweeps = 0;
  int sampling_sweeps = 0;
  bool warm_up_forced = false;
  bool stopped_by_limit = false;
};

}  // namespace stillfield

#endif  // STILLFIELD_JOB_LABEL_SAMPLING_H_
