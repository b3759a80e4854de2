#include "job/sample_chains.h"

#include "core/error.h"
#include "job/trace_summaries.h"

namespace stillfield {
namespace {

constexpr int kVisitsLimit = 255;  // visits are counted in bytes

void start_counting(LabelSampling& run) {
  run.traces->clear();
  const std::size_t planes = run.chains.front().model.classes.mean.size() - 1;
  for (LabelChain& chain : run.chains) {
    chain.visits = AlignedBuffer<std::uint8_t>(run.colouring->plane_elements() * planes);
  }
}

}  // namespace

void advance_block(const AdvanceChains& advance, Schedule& schedule, JobObserver& observer,
                   LabelSampling& run) {
  if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
  const int block = schedule.sweeps_a_block();
  advance([&](int c) {
    LabelChain& chain = run.chains[static_cast<std::size_t>(c)];
    if (schedule.stage() != Stage::kAdapting) {
      run.traces->record(c, chain, run.colouring->neighbourhood());
    }
    // Visits move on when their bytes might overflow, and when the first part of the chain is full.
    const bool part_full = schedule.stage() == Stage::kSampling &&
                           schedule.sampling_sweeps() + block == schedule.first_part();
    if (part_full || chain.visits_pending + block > kVisitsLimit) run.counts->take(c, chain);
  });
  schedule.block_done();
  observer.swept(schedule.stage(), static_cast<int>(run.chains.front().sweeps_done));
}

void sample_chains(const SegmentSettings& settings, const AdvanceChains& advance,
                   Schedule& schedule, const Pool& pool, JobObserver& observer,
                   LabelSampling& run) {
  while (schedule.stage() != Stage::kDone) {
    advance_block(advance, schedule, observer, run);
    if (schedule.look_at_warm_up()) {
      schedule.warm_up_judged(chains_agree(run.traces->all()));
      if (schedule.stage() == Stage::kSampling) start_counting(run);
    } else if (schedule.look_at_sampling()) {
      for (int c = 0; c < settings.chains; ++c) {
        run.counts->take(c, run.chains[static_cast<std::size_t>(c)]);
      }
      run.probability = run.counts->quality(pool, &run.problem.field);
      run.scalars = summarise_traces(run.traces->all());
      run.verdict = judge_convergence(run.scalars, run.probability.mcse, settings.target);
      run.counts->merge_parts();
      schedule.sampling_judged(run.verdict.converged);
    }
  }
  for (LabelChain& chain : run.chains) chain.visits = {};
  run.prior = run.chains.front().model.prior;
  run.warming_sweeps = schedule.warming_sweeps();
  run.sampling_sweeps = schedule.sampling_sweeps();
  run.warm_up_forced = schedule.warm_up_forced();
  run.stopped_by_limit = schedule.stopped_by_limit();
}

}  // namespace stillfield
