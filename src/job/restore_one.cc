#include "job/restore_one.h"

#include <algorithm>
#include <string>

#include "core/error.h"
#include "job/every_chain.h"
#include "job/trace_summaries.h"
#include "sampler/path_sampling.h"
#include "sampler/starts.h"
#include "sampler/sweep.h"

namespace stillfield {
namespace {

constexpr int kVisitsLimit = 255;  // visits are counted in bytes

void check_grey_levels(const GreyLevels& grey, int classes) {
  const int distinct = grey.distinct();
  if (distinct == 1) {
    throw Error(ErrorKind::kInput,
                "every pixel has the same grey value, so there is nothing to tell apart; leave the "
                "image out or check how it was taken");
  }
  if (distinct < classes) {
    throw Error(ErrorKind::kInput,
                "only " + std::to_string(distinct) + " grey levels occur, fewer than the " +
                    std::to_string(classes) + " classes asked for; use --classes " +
                    std::to_string(distinct) + " or fewer");
  }
}

}  // namespace

LabelSampling restore_one(const GreyLevels& grey, const SegmentSettings& settings,
                          std::uint64_t image_seed, const Pool& pool, JobObserver& observer,
                          LogPartitionMemo* memo) {
  check_grey_levels(grey, settings.classes);
  LabelSampling run;
  const Extent extent = grey.level.extent();
  run.colouring = std::make_unique<Colouring>(extent, make_neighbourhood(settings.connectivity));
  const Colouring& colouring = *run.colouring;
  LabelProblem& problem = run.problem;
  problem.field = observe(colouring, grey);

  run.chains = start_chains(
      problem.field,
      {settings.classes, settings.chains, settings.shared_variance, settings.coupling, image_seed});
  std::vector<LabelChain>& chains = run.chains;
  problem.prior = default_prior(grey, chains.front().model.classes);
  const bool sampled = settings.coupling.mode == CouplingMode::kSampled;
  if (sampled) {
    if (!memo) run.own_memo = std::make_unique<LogPartitionMemo>();
    problem.log_partition =
        &(memo ? memo : run.own_memo.get())
             ->get(extent, colouring.neighbourhood(), settings.classes, settings.seed, pool);
    run.log_partition_hysteresis = problem.log_partition->hysteresis;
  }
  CouplingAdaptation adaptation(problem.field, problem.prior);
  Schedule schedule(settings.schedule, settings.coupling.mode == CouplingMode::kAuto);
  run.traces = std::make_unique<Traces>(settings.classes, settings.chains, sampled,
                                        grey.observed == extent.sites());
  run.counts = std::make_unique<LabelCounts>(colouring, settings.classes, settings.chains,
                                             schedule.first_part());

  EveryChain every_chain(extent, settings.chains, pool);
  // One block of one chain, and what is kept of it.
  const auto advance = [&](int c, WeightPlanes& planes, const Pool& inner) {
    LabelChain& chain = chains[static_cast<std::size_t>(c)];
    advance_chain(problem, schedule.sweeps_a_block(), inner, planes, chain);
    if (schedule.stage() != Stage::kAdapting) {
      run.traces->record(c, chain, colouring.neighbourhood());
    }
    // Visits move on when their bytes might overflow, and when the first part of the chain is full.
    const int block = schedule.sweeps_a_block();
    const bool part_full = schedule.stage() == Stage::kSampling &&
                           schedule.sampling_sweeps() + block == schedule.first_part();
    if (part_full || chain.visits_pending + block > kVisitsLimit) run.counts->take(c, chain);
  };

  while (schedule.stage() != Stage::kDone) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    every_chain.run(advance);
    schedule.block_done();
    observer.swept(schedule.stage(), static_cast<int>(chains.front().sweeps_done));

    if (schedule.stage() == Stage::kAdapting) {
      adaptation.adapt(chains, pool);
      if (adaptation.settled()) schedule.coupling_settled();
    } else if (schedule.look_at_warm_up()) {
      schedule.warm_up_judged(chains_agree(run.traces->all()));
      if (schedule.stage() == Stage::kSampling) {
        run.traces->clear();
        for (LabelChain& chain : chains) {
          chain.visits = AlignedBuffer<std::uint8_t>(
              colouring.plane_elements() * static_cast<std::size_t>(settings.classes - 1));
        }
      }
    } else if (schedule.look_at_sampling()) {
      for (int c = 0; c < settings.chains; ++c) {
        run.counts->take(c, chains[static_cast<std::size_t>(c)]);
      }
      run.probability = run.counts->quality(pool, &problem.field);
      run.scalars = summarise_traces(run.traces->all());
      run.verdict = judge_convergence(run.scalars, run.probability.mcse, settings.target);
      run.counts->merge_parts();
      schedule.sampling_judged(run.verdict.converged);
    }
  }
  for (LabelChain& chain : chains) chain.visits = {};
  run.prior = chains.front().model.prior;
  run.coupling_ladder = adaptation.choice().ladder;
  run.adapting_sweeps = schedule.adapting_sweeps();
  run.warming_sweeps = schedule.warming_sweeps();
  run.sampling_sweeps = schedule.sampling_sweeps();
  run.warm_up_forced = schedule.warm_up_forced();
  run.stopped_by_limit = schedule.stopped_by_limit();
  return run;
}

}  // namespace stillfield
