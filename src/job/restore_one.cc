#include "job/restore_one.h"

#include <algorithm>
#include <string>

#include "core/error.h"
#include "job/every_chain.h"
#include "job/sample_chains.h"
#include "sampler/path_sampling.h"
#include "sampler/starts.h"
#include "sampler/sweep.h"

namespace stillfield {
namespace {

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
  LabelPosterior& problem = run.problem;
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
  const AdvanceChains advance = [&](const ChainDone& done) {
    every_chain.run([&](int c, WeightPlanes& planes, const Pool& inner) {
      advance_chain(problem, schedule.sweeps_a_block(), inner, planes,
                    chains[static_cast<std::size_t>(c)]);
      done(c);
    });
  };
  while (schedule.stage() == Stage::kAdapting) {
    advance_block(advance, schedule, observer, run);
    adaptation.adapt(chains, pool);
    if (adaptation.settled()) schedule.coupling_settled();
  }
  sample_chains(settings, advance, schedule, pool, observer, run);
  run.coupling_ladder = adaptation.choice().ladder;
  run.adapting_sweeps = schedule.adapting_sweeps();
  return run;
}

}  // namespace stillfield
