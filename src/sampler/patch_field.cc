#include "sampler/patch_field.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "core/error.h"
#include "model/patch_tables.h"
#include "sampler/patch_blend.h"
#include "sampler/patch_run.h"

namespace stillfield {
namespace {

constexpr int kQuickTilings = 12;
constexpr int kUpdates = 4;
constexpr int kQuickUpdates = 2;
// Runs that are only judged are cut short: the weights hardly notice.
constexpr int kJudgedTilings = 12;
constexpr int kJudgedPasses = 1;
constexpr std::array<int, 2> kSides{6, 8};

double plane_mean(const Volume<float>& v) {
  double total = 0.0;
  for (int y = 0; y < v.height(); ++y) {
    double row = 0.0;
    for (int x = 0; x < v.width(); ++x) row += double{v.at(x, y)};
    total += row;
  }
  return total / static_cast<double>(v.extent().sites());
}

Volume<float> copy(const Volume<float>& from) {
  Volume<float> to(from.extent());
  for (int y = 0; y < from.height(); ++y) std::copy_n(from.row(y), from.width(), to.row(y));
  return to;
}

// Counts the steps and passes requests to stop on.
class Steps {
 public:
  Steps(const PatchProgress& progress, int steps) : progress_(progress), steps_(steps) {}

  void next() {
    if (progress_ && progress_(done_, steps_)) {
      throw Error(ErrorKind::kInterrupt, "the restoration was interrupted: run it again");
    }
    ++done_;
  }

 private:
  const PatchProgress& progress_;
  int steps_;
  int done_ = 0;
};

struct RunLength {
  int tilings, passes;
  int steps() const { return tilings + passes; }
};

// A patch size with its settings and mixture.
struct Side {
  PatchSettings settings;
  PatchMixture own;
  const PatchMixture* mixture = nullptr;

  GroupPass group_pass() const {
    return {settings.quick ? settings.patch : settings.patch / 2, settings.group_size,
            settings.quick ? kQuickUpdates : kUpdates};
  }
};

class PatchRestoration {
 public:
  PatchRestoration(const Volume<float>& value, double noise_sd, const PatchSettings& settings,
                   PhiloxKey key, const Pool& pool, PixelRedraw* redraw,
                   const PatchMixture* learned)
      : value_(value), noise_sd_(noise_sd), key_(key), pool_(pool), redraw_(redraw) {
    const PatchPlane plane{&value, noise_sd};
    PatchSettings s = settings;
    if (learned) s.patch = learned->side;
    learned_ = learned != nullptr;
    white_ = s.noise_correlation.white();
    judged_ = white_ && !s.quick;
    if (judged_ && s.patch == 0) {
      for (const int side : kSides) {
        s.patch = side;
        sides_.push_back({resolved_settings(s, {&plane, 1}), {}, learned});
      }
    } else {
      sides_.push_back({resolved_settings(s, {&plane, 1}), {}, learned});
    }
    const PatchSettings& first = sides_.front().settings;
    tilings_ = first.quick ? std::min(first.tiling_sweeps, kQuickTilings) : first.tiling_sweeps;
    passes_ = first.quick ? std::min(first.group_passes, 1) : first.group_passes;
    judged_ = judged_ && (passes_ > 0 || sides_.size() > 1);
  }

  PatchResult run(const PatchProgress& progress) {
    const RunLength whole{tilings_, passes_};
    const RunLength judging{std::min(tilings_, kJudgedTilings), std::min(passes_, kJudgedPasses)};
    const int side_steps = 1 + whole.steps() + (judged_ ? judging.steps() : 0);
    Steps steps(progress, side_steps * static_cast<int>(sides_.size()));
    PatchResult result;
    std::vector<IntensityMoments> restorations;
    Volume<float> usable;
    for (Side& side : sides_) {
      steps.next();
      learn(value_, noise_sd_, side);
      PatchRun run(value_, tables(side, noise_sd_), key_, pool_, redraw_);
      restore(side, run, whole, steps, [&](bool groups) {
        if (!judged_ && !groups && passes_ > 0) return;
        const IntensityMoments& m = run.moments();
        restorations.push_back({copy(m.mean), copy(m.variance)});
        result.shares.push_back({side.mixture->side, side.mixture->size(), groups, 1.0});
      });
      if (usable.empty()) usable = copy(run.observed());
    }
    if (judged_) {
      const std::vector<double> weights = judge(usable, judging, steps);
      for (std::size_t i = 0; i < weights.size(); ++i) result.shares[i].weight = weights[i];
      result.moments = blend(restorations, weights, pool_);
    } else {
      result.moments = std::move(restorations.front());
    }
    steps.next();
    draw(usable, result);
    return result;
  }

 private:
  void learn(const Volume<float>& value, double noise_sd, Side& side) const {
    if (side.mixture) return;
    const PatchPlane plane{&value, noise_sd};
    side.own = learn_patch_mixture({&plane, 1}, side.settings, key_, pool_);
    side.mixture = &side.own;
  }

  PatchTables tables(const Side& side, double noise_sd) const {
    const PatchNoise noise =
        white_ ? PatchNoise{} : patch_noise(side.settings.noise_correlation, side.settings.patch);
    return make_patch_tables(*side.mixture, noise_sd, plane_mean(value_), TableParts::kAll, pool_,
                             white_ ? nullptr : &noise);
  }

  // All steps of one run; `kept` is told when the tilings are done, and when the groups are.
  template <class Kept>
  void restore(const Side& side, PatchRun& run, RunLength length, Steps& steps, const Kept& kept) {
    for (int t = 0; t < length.tilings; ++t) {
      steps.next();
      run.tiling(sweep_++);
    }
    kept(false);
    for (int pass = 0; pass < length.passes; ++pass) {
      steps.next();
      run.groups(sweep_++, static_cast<std::uint32_t>(pass), side.group_pass());
    }
    if (length.passes > 0) kept(true);
  }

  std::vector<double> judge(const Volume<float>& usable, RunLength length, Steps& steps) {
    const SplitNoise split = split_noise(usable, noise_sd_, key_, pool_);
    std::vector<Volume<float>> restorations;
    for (const Side& side : sides_) {
      // Learned anew, if only quickly: a mixture learned from `value` knows the noise of both parts
      // and would speak for the tilings.
      Side anew{side.settings, {}, nullptr};
      anew.settings.quick = true;
      if (learned_) anew.mixture = side.mixture;
      learn(split.restored_from, split.noise_sd, anew);
      PatchRun run(split.restored_from, tables(anew, split.noise_sd), key_, pool_, nullptr);
      restore(side, run, length, steps,
              [&](bool) { restorations.push_back(copy(run.moments().mean)); });
    }
    return blend_weights(restorations, split, value_, usable);
  }

  void draw(const Volume<float>& usable, PatchResult& result) {
    const int samples = sides_.front().settings.samples;
    if (samples == 0) return;
    const PatchRun run(usable, tables(sides_.front(), noise_sd_), key_, pool_, nullptr);
    for (int i = 0; i < samples; ++i) result.draws.push_back(run.draw(result.moments, sweep_++));
  }

  const Volume<float>& value_;
  double noise_sd_;
  PhiloxKey key_;
  const Pool& pool_;
  PixelRedraw* redraw_;
  bool white_ = true;
  bool learned_ = false;  // elsewhere
  bool judged_ = false;   // weights come from split noise
  std::vector<Side> sides_;
  int tilings_ = 0, passes_ = 0;
  std::uint32_t sweep_ = 0;
};

}  // namespace

PatchResult restore_patches(const Volume<float>& value, double noise_sd,
                            const PatchSettings& settings, PhiloxKey key, const Pool& pool,
                            PixelRedraw* redraw, const PatchMixture* learned,
                            const PatchProgress& progress) {
  if (redraw && !settings.noise_correlation.white()) {
    throw Error(ErrorKind::kUsage,
                "values cannot be redrawn under correlated noise: fill them in, or take the noise "
                "as white");
  }
  return PatchRestoration(value, noise_sd, settings, key, pool, redraw, learned).run(progress);
}

}  // namespace stillfield
