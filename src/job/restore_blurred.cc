#include "job/restore_blurred.h"

#include <algorithm>

#include "core/error.h"
#include "job/class_field_step.h"
#include "job/sample_chains.h"
#include "sampler/blur_search.h"
#include "sampler/blurred_chain.h"

namespace stillfield {
namespace {

// Below this many pixels blur is none: a sharp scene averaged over pixel areas has 1 / sqrt 12.
constexpr double kNoBlur = 0.4;
constexpr double kSmallestStart = 0.5;  // of the drawn blur
constexpr int kSettlingBlocks = 80;
constexpr int kSettlingSweeps = 2;  // a block
// A blurred sweep costs tens of plain ones: the limit of sweeps is lower.
constexpr int kMaxSweeps = 1500;

void absorb_thin(const GreyLevels& grey, const Colouring& colouring, LabelChain& chain) {
  Volume<std::uint8_t> labels(colouring.extent());
  gather_labels(colouring, chain.labels, labels.view());
  absorb_thin_labels(grey, chain.model.classes, labels);
  scatter_labels(colouring, labels.view(), chain.labels);
}

double first_estimate(const GreyLevels& grey, const LabelSampling& run) {
  Volume<std::uint8_t> labels = run.counts->most_probable();
  for (int y = 0; y < labels.height(); ++y) {
    for (int x = 0; x < labels.width(); ++x) --labels.at(x, y);
  }
  const LabelModel& model = run.chains.front().model;
  absorb_thin_labels(grey, model.classes, labels);
  return search_blur(grey, model.size(), labels);
}

BlurFacts summarise_blur(std::vector<double> draws) {
  double sum = 0.0;
  for (const double b : draws) sum += b;
  std::sort(draws.begin(), draws.end());
  const auto quantile = [&](double p) {
    return draws[static_cast<std::size_t>(p * static_cast<double>(draws.size() - 1) + 0.5)];
  };
  return {sum / static_cast<double>(draws.size()), quantile(0.05), quantile(0.95), true, false};
}

}  // namespace

void restore_blurred(const SegmentSettings& settings, const Pool& pool, JobObserver& observer,
                     LabelSampling& run) {
  if (settings.blur.mode == BlurMode::kNone) return;
  const GreyLevels& grey = *run.problem.field.grey;
  const bool estimated = settings.blur.mode == BlurMode::kAuto;
  run.blur = {settings.blur.value, settings.blur.value, settings.blur.value, estimated, !estimated};
  if (estimated) {
    const double b = first_estimate(grey, run);
    run.blur = {b, b, b, true, false};
    if (b < kNoBlur) return;
  }

  const auto chains = static_cast<int>(run.chains.size());
  const BlurKernel start =
      make_blur_kernel(std::max(run.blur.value, estimated ? kSmallestStart : kSmallestBlur));
  std::vector<BlurredField> fields;
  for (int c = 0; c < chains; ++c) {
    LabelChain& chain = run.chains[static_cast<std::size_t>(c)];
    if (c % 2 == 0) absorb_thin(grey, *run.colouring, chain);
    fields.push_back(open_blurred_chain(run.problem, start, chain));
  }
  const Pool serial(1);
  const auto advance = [&](int c, int sweeps) {
    const auto i = static_cast<std::size_t>(c);
    advance_blurred_chain(run.problem, sweeps, serial, fields[i], run.chains[i]);
  };

  std::vector<double> draws;
  for (int block = 0; block < kSettlingBlocks; ++block) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    pool.for_each(chains, [&](int c) {
      const auto i = static_cast<std::size_t>(c);
      advance(c, kSettlingSweeps);
      if (estimated) draw_blur(run.problem, fields[i], run.chains[i]);
    });
    if (settings.coupling.mode == CouplingMode::kAuto) step_class_field(block, run);
    if (block < kSettlingBlocks / 2) continue;
    for (const BlurredField& field : fields) draws.push_back(field.kernel.sd);
  }
  if (estimated) run.blur = summarise_blur(draws);
  if (run.blur.value < kNoBlur) return;
  run.blur.modelled = true;
  const BlurKernel kernel = make_blur_kernel(run.blur.value);
  for (int c = 0; c < chains; ++c) {
    const auto i = static_cast<std::size_t>(c);
    set_blur(kernel, {}, fields[i]);
    refresh_blurred_field(level_classes(grey, run.chains[i].model.classes), fields[i]);
  }

  ScheduleSettings limits = settings.schedule;
  limits.max_sweeps = std::min(limits.max_sweeps, kMaxSweeps);
  Schedule schedule(limits, false);
  run.traces->clear();
  run.counts = std::make_unique<LabelCounts>(*run.colouring, settings.classes, settings.chains,
                                             schedule.first_part());
  sample_chains(
      settings,
      [&](const ChainDone& done) {
        pool.for_each(chains, [&](int c) {
          advance(c, schedule.sweeps_a_block());
          done(c);
        });
      },
      schedule, pool, observer, run);
  run.blurred = std::move(fields);
}

}  // namespace stillfield
