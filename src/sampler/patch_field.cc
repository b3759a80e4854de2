#include "sampler/patch_field.h"

#include <algorithm>
#include <cmath>

#include "core/error.h"
#include "model/patch_tables.h"
#include "sampler/patch_groups.h"
#include "sampler/patch_search.h"
#include "sampler/patch_sums.h"
#include "sampler/patch_tiling.h"

namespace stillfield {
namespace {

constexpr int kQuickTilings = 12;
constexpr int kUpdates = 4;
constexpr int kQuickUpdates = 2;
constexpr int kRowsPerTask = 16;

double plane_mean(const Volume<float>& v) {
  double total = 0.0;
  for (int y = 0; y < v.height(); ++y) {
    double row = 0.0;
    for (int x = 0; x < v.width(); ++x) row += double{v.at(x, y)};
    total += row;
  }
  return total / static_cast<double>(v.extent().sites());
}

// Calls body(y) for all rows.
template <class Body>
void for_rows(const Volume<float>& v, const Pool& pool, const Body& body) {
  pool.for_bands(v.height(), kRowsPerTask, [&](int first, int last) {
    for (int y = first; y < last; ++y) body(y);
  });
}

class PatchRun {
 public:
  PatchRun(const Volume<float>& value, double noise_sd, PatchTables tables, PhiloxKey key,
           const Pool& pool, PixelRedraw* redraw)
      : pool_(pool),
        key_(key),
        redraw_(redraw),
        tables_(std::move(tables)),
        noise_sd_(noise_sd),
        scaled_(value.extent(), value.view().offset()),
        origin_(value.extent()),
        sums_(origin_),
        moments_{Volume<float>(value.extent()), Volume<float>(value.extent())} {
    if (redraw_) observed_ = Volume<float>(value.extent(), value.view().offset());
    scale(value);
    for_rows(value, pool_, [&](int y) {
      if (redraw_) std::copy_n(value.row(y), value.width(), observed_.row(y));
      std::copy_n(scaled_.row(y), scaled_.width(), origin_.row(y));
      std::copy_n(value.row(y), value.width(), moments_.mean.row(y));
      std::fill_n(moments_.variance.row(y), value.width(),
                  static_cast<float>(noise_sd_ * noise_sd_));
    });
  }

  void tiling(std::uint32_t sweep) {
    refresh(sweep, true);
    sweep_tiling(scaled_, tables_, key_, sweep, pool_, sums_);
  }

  void groups(std::uint32_t sweep, std::uint32_t pass, const GroupPass& settings) {
    if (redraw_) refresh(sweep, false);
    SearchImage estimate(scaled_.extent());
    for_rows(scaled_, pool_, [&](int y) {
      for (int x = 0; x < scaled_.width(); ++x) estimate.row(y)[x] = sums_.mean(x, y);
    });
    sums_.clear(pool_);
    pass_groups(scaled_, estimate, tables_, settings, key_, pass, pool_, sums_);
  }

  // Mean and variance from the sums, in image units.
  const IntensityMoments& moments() {
    for_rows(scaled_, pool_, [&](int y) {
      float* mean = moments_.mean.row(y);
      float* variance = moments_.variance.row(y);
      for (int x = 0; x < scaled_.width(); ++x) {
        mean[x] = static_cast<float>(double{sums_.mean(x, y)} * noise_sd_ + tables_.centre);
        variance[x] = static_cast<float>(double{sums_.variance(x, y)} * noise_sd_ * noise_sd_);
      }
    });
    return moments_;
  }

  IntensityMoments take_moments() { return std::move(moments_); }

  // The pooled mean plus a tiling's deviation, scaled to the pooled variance.
  Volume<float> draw(std::uint32_t sweep) const {
    Volume<float> out = draw_tiling_deviation(scaled_, tables_, key_, sweep, pool_);
    for_rows(out, pool_, [&](int y) {
      for (int x = 0; x < out.width(); ++x) {
        out.at(x, y) =
            moments_.mean.at(x, y) + out.at(x, y) * std::sqrt(moments_.variance.at(x, y));
      }
    });
    return out;
  }

 private:
  // Observed values anew, if they are redrawn, from the best estimate so far.
  void refresh(std::uint32_t sweep, bool first_uses_observed) {
    if (!redraw_) return;
    if (!first_uses_observed || sweep > 0) moments();
    redraw_->redraw(moments_, sweep, pool_, observed_);
    scale(observed_);
  }

  void scale(const Volume<float>& value) {
    for_rows(value, pool_, [&](int y) {
      for (int x = 0; x < value.width(); ++x) {
        scaled_.at(x, y) =
            static_cast<float>((double{value.at(x, y)} - tables_.centre) / noise_sd_);
      }
    });
  }

  const Pool& pool_;
  PhiloxKey key_;
  PixelRedraw* redraw_;
  PatchTables tables_;
  double noise_sd_;
  Volume<float> observed_;  // empty unless values are redrawn
  Volume<float> scaled_;
  Volume<float> origin_;
  PatchSums sums_;
  IntensityMoments moments_;
};

}  // namespace

PatchResult restore_patches(const Volume<float>& value, double noise_sd,
                            const PatchSettings& settings, PhiloxKey key, const Pool& pool,
                            PixelRedraw* redraw, const PatchMixture* learned,
                            const PatchProgress& progress) {
  const PatchPlane plane{&value, noise_sd};
  PatchSettings s = settings;
  if (learned) s.patch = learned->side;
  s = resolved_settings(s, {&plane, 1});
  const bool white = s.noise_correlation.white();
  if (redraw && !white) {
    throw Error(ErrorKind::kUsage,
                "values cannot be redrawn under correlated noise: fill them in, or take the noise "
                "as white");
  }
  const int tilings = s.quick ? std::min(s.tiling_sweeps, kQuickTilings) : s.tiling_sweeps;
  const int passes = s.quick ? std::min(s.group_passes, 1) : s.group_passes;
  const GroupPass group_pass{s.quick ? s.patch : s.patch / 2, s.group_size,
                             s.quick ? kQuickUpdates : kUpdates};
  const int steps = 1 + tilings + passes;
  int step = 0;
  const auto pause = [&] {
    if (progress && progress(step, steps)) {
      throw Error(ErrorKind::kInterrupt, "the restoration was interrupted: run it again");
    }
    ++step;
  };
  pause();
  PatchMixture own;
  if (!learned) own = learn_patch_mixture({&plane, 1}, s, key, pool);
  const PatchMixture& mixture = learned ? *learned : own;
  const PatchNoise noise = white ? PatchNoise{} : patch_noise(s.noise_correlation, s.patch);
  PatchRun run(value, noise_sd,
               make_patch_tables(mixture, noise_sd, plane_mean(value), TableParts::kAll, pool,
                                 white ? nullptr : &noise),
               key, pool, redraw);
  std::uint32_t sweep = 0;
  for (int t = 0; t < tilings; ++t, ++sweep) {
    pause();
    run.tiling(sweep);
  }
  for (int pass = 0; pass < passes; ++pass, ++sweep) {
    pause();
    run.groups(sweep, static_cast<std::uint32_t>(pass), group_pass);
  }
  run.moments();
  PatchResult result;
  result.patch = mixture.side;
  result.components = mixture.size();
  for (int i = 0; i < s.samples; ++i, ++sweep) result.draws.push_back(run.draw(sweep));
  result.moments = run.take_moments();
  pause();
  return result;
}

}  // namespace stillfield
