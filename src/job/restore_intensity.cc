#include "job/restore_intensity.h"

#include <algorithm>
#include <cmath>
#include <utility>

#include "core/error.h"
#include "job/trace_summaries.h"
#include "sampler/intensity_start.h"
#include "sampler/schedule.h"

namespace stillfield {
namespace {

// Below this size one image cannot keep two threads busy: whole chains run side by side instead.
constexpr std::int64_t kRowParallelPixels = 320 * 320;
constexpr int kBatch = 64;          // sweeps; looks at sampling fall on multiples of it
constexpr int kBetweenDraws = 16;   // sweeps of a chain
constexpr double kPixelMcse = 0.1;  // of a pixel's standard deviation, root mean square
constexpr double kQuickPixelMcse = 0.2;

ScheduleSettings schedule_settings(const IntensitySettings& settings) {
  ScheduleSettings s;
  s.sweeps_a_block = 1;
  s.first_part = 2 * kBatch;
  s.first_window = kBatch;
  s.max_sweeps = settings.max_sweeps;
  return s;
}

ConvergenceTarget target_of(const IntensitySettings& settings) {
  ConvergenceTarget target;
  if (settings.quick) target = {1.05, 100, target.max_probability_mcse};
  return target;
}

void check(const Volume<float>& value, const Volume<float>& variance,
           const IntensitySettings& settings) {
  if (!(value.extent() == variance.extent()) || value.empty()) {
    throw Error(ErrorKind::kUsage,
                "the image and its noise variances differ in size; give one variance a pixel");
  }
  if (settings.chains < 2 || settings.chains > 16) {
    throw Error(ErrorKind::kUsage, "the number of chains must be from 2 to 16");
  }
  if (settings.max_sweeps < 600) {
    throw Error(ErrorKind::kUsage, "the number of sweeps must be at least 600");
  }
  if (settings.samples < 0) {
    throw Error(ErrorKind::kUsage, "the number of samples must not be negative");
  }
}

class Run {
 public:
  Run(const Volume<float>& value, const Volume<float>& variance, const IntensitySettings& settings,
      const Pool& pool, PixelRedraw* redraw)
      : settings_(settings),
        pool_(pool),
        redraw_(redraw),
        layout_(value.extent(), make_neighbourhood(settings.connectivity, settings.spacing_z)),
        observed_(observe_intensity(layout_, value.view(), variance.view())),
        model_(weak_intensity_model(observed_, value.view(), variance.view(), settings.prior,
                                    settings.noise_scale_known)),
        chains_(start_intensity_chains(observed_, model_, value.view(), settings.chains,
                                       settings.seed)) {
    traces_.push_back({"prior_strength", 0, {}});
    if (!settings.noise_scale_known) traces_.push_back({"noise_scale", 0, {}});
    clear_traces();
    if (redraw_) prepare_redraws(value);
  }

  // One sweep of every chain, field and parameters.
  void advance() {
    const Pool serial(1);
    const bool side_by_side =
        !redraw_ && layout_.extent().sites() < kRowParallelPixels && pool_.threads() > 1;
    const int chains = static_cast<int>(chains_.size());
    if (side_by_side) {
      pool_.for_each(chains, [&](int c) { advance_chain(c, serial); });
    } else {
      for (int c = 0; c < chains; ++c) advance_chain(c, pool_);
    }
  }

  void clear_traces() {
    for (Trace& t : traces_) t.chains.assign(chains_.size(), {});
  }

  void count_moments() {
    for (IntensityChain& chain : chains_) {
      chain.sum = AlignedBuffer<float>(layout_.elements());
      chain.square = AlignedBuffer<float>(layout_.elements());
    }
    totals_.emplace_back(observed_, observed_.value, static_cast<int>(chains_.size()));
  }

  void take_batch() {
    pool_.for_each(static_cast<int>(chains_.size()),
                   [&](int c) { totals_.front().take(c, chains_[static_cast<std::size_t>(c)]); });
  }

  // `count` fields: those of the chains in turn, some sweeps apart.
  std::vector<Volume<float>> draw_fields(int count) {
    for (IntensityChain& chain : chains_) {
      chain.sum = AlignedBuffer<float>();
      chain.square = AlignedBuffer<float>();
    }
    std::vector<Volume<float>> draws;
    while (static_cast<int>(draws.size()) < count) {
      for (int s = 0; s < kBetweenDraws; ++s) advance();
      for (const IntensityChain& chain : chains_) {
        if (static_cast<int>(draws.size()) == count) break;
        draws.push_back(field_of(chain));
      }
    }
    return draws;
  }

  const std::vector<Trace>& traces() const { return traces_; }
  const IntensityTotals& totals() const { return totals_.front(); }

 private:
  void prepare_redraws(const Volume<float>& value) {
    const Extent extent = layout_.extent();
    for (std::size_t c = 0; c < chains_.size(); ++c) {
      redrawn_.emplace_back(extent);
      for (int z = 0; z < extent.depth; ++z) {
        for (int y = 0; y < extent.height; ++y) {
          std::copy_n(value.row(y, z), extent.width, redrawn_.back().row(y, z));
        }
      }
      chains_[c].value = AlignedBuffer<float>(layout_.elements());
    }
    now_ = {Volume<float>(extent), Volume<float>(extent)};
  }

  void redraw_values(int c) {
    IntensityChain& chain = chains_[static_cast<std::size_t>(c)];
    Volume<float>& value = redrawn_[static_cast<std::size_t>(c)];
    now_.mean = field_of(chain);
    const auto chains = static_cast<std::uint32_t>(chains_.size());
    redraw_->redraw(now_, chain.sweeps_done * chains + static_cast<std::uint32_t>(c), pool_, value);
    centre_values(observed_, value.view(), chain.value);
  }

  void advance_chain(int c, const Pool& pool) {
    IntensityChain& chain = chains_[static_cast<std::size_t>(c)];
    if (redraw_) redraw_values(c);
    sweep_intensity(observed_, model_.prior, observed_.value, pool, chain);
    if (chain.sweeps_done > kSettlingSweeps) {
      draw_intensity_parameters(observed_, model_, pool, chain);
    }
    const auto at = static_cast<std::size_t>(c);
    traces_[0].chains[at].push_back(chain.strength);
    if (traces_.size() > 1) traces_[1].chains[at].push_back(std::sqrt(chain.noise_variance));
  }

  Volume<float> field_of(const IntensityChain& chain) const {
    Volume<float> field(layout_.extent());
    layout_.for_each_pixel([&](std::size_t at, int x, int y, int z) {
      field.at(x, y, z) =
          static_cast<float>(observed_.centre + static_cast<double>(chain.field[at]));
    });
    return field;
  }

  const IntensitySettings& settings_;
  const Pool& pool_;
  PixelRedraw* redraw_;
  const IntensityLayout layout_;
  const ObservedIntensity observed_;
  const IntensityModel model_;
  std::vector<IntensityChain> chains_;
  std::vector<Trace> traces_;
  std::vector<IntensityTotals> totals_;  // one, once sampling has begun
  std::vector<Volume<float>> redrawn_;   // values of each chain
  IntensityMoments now_;
};

}  // namespace

IntensityFieldResult sample_intensity_field(const Volume<float>& value,
                                            const Volume<float>& noise_variance,
                                            const IntensitySettings& settings, const Pool& pool,
                                            PixelRedraw* redraw,
                                            const std::function<bool(int, int)>& progress) {
  check(value, noise_variance, settings);
  Run run(value, noise_variance, settings, pool, redraw);
  Schedule schedule(schedule_settings(settings), false);
  const double pixel_mcse = settings.quick ? kQuickPixelMcse : kPixelMcse;
  IntensityFieldResult result;
  int sweeps = 0;
  while (schedule.stage() != Stage::kDone) {
    if (progress && progress(sweeps, settings.max_sweeps)) {
      throw Error(ErrorKind::kInterrupt, "stopped on request");
    }
    run.advance();
    ++sweeps;
    schedule.block_done();
    if (schedule.stage() == Stage::kSampling && schedule.sampling_sweeps() % kBatch == 0) {
      run.take_batch();
    }
    if (schedule.look_at_warm_up()) {
      schedule.warm_up_judged(chains_agree(run.traces()));
      if (schedule.stage() == Stage::kSampling) {
        run.clear_traces();
        run.count_moments();
      }
    } else if (schedule.look_at_sampling()) {
      run.take_batch();
      result.scalars = summarise_traces(run.traces());
      result.verdict = judge_convergence(result.scalars, std::nullopt, target_of(settings));
      result.pixels = run.totals().quality();
      result.converged = result.verdict.converged && result.pixels.relative_mcse <= pixel_mcse;
      schedule.sampling_judged(result.converged);
    }
  }
  IntensityMoments moments = run.totals().moments();
  result.mean = std::move(moments.mean);
  result.variance = std::move(moments.variance);
  result.warming_sweeps = schedule.warming_sweeps();
  result.sampling_sweeps = schedule.sampling_sweeps();
  result.traces = run.traces();
  result.draws = run.draw_fields(settings.samples);
  return result;
}

}  // namespace stillfield
