#include "job/restore_shaded.h"

#include <algorithm>
#include <array>
#include <cmath>
#include <optional>

#include "core/error.h"
#include "job/class_field_step.h"
#include "job/every_chain.h"
#include "job/restore_one.h"
#include "job/sample_chains.h"
#include "model/surface_start.h"
#include "sampler/starts.h"

namespace stillfield {
namespace {

constexpr int kAutoCoefficients = 6;
constexpr int kAutoFitClasses = 3;  // of the first fit when the number of classes is still open
// Light that varies by less is left to the noise with --shading auto.
constexpr double kEvenSpan = 0.03;
constexpr int kSettlingBlocks = 40;
constexpr int kSettlingSweeps = 4;  // a block
constexpr std::array<double, 4> kDispersion{1.0, 0.7, 1.3, 0.85};
constexpr double kMovedLight = 0.01;  // from here on classes and coupling are looked for again
constexpr int kFirstMaxSweeps = 600;
constexpr ConvergenceTarget kFirstTarget{1.2, 20, 0.1};
constexpr int kSdGrid = 33;  // points a side at which posterior deviations are summarised

// Sums over draws of the coefficients.
struct LightDraws {
  explicit LightDraws(int unknowns) : sum(static_cast<std::size_t>(unknowns)), square(unknowns) {}
  void add(const std::vector<double>& c) {
    ++draws;
    for (int i = 0; i < square.d; ++i) {
      const double di = c[static_cast<std::size_t>(i)] - 1.0;
      sum[static_cast<std::size_t>(i)] += di;
      for (int j = 0; j <= i; ++j) square(i, j) += di * (c[static_cast<std::size_t>(j)] - 1.0);
    }
  }
  void add(const LightDraws& other) {
    draws += other.draws;
    for (std::size_t i = 0; i < sum.size(); ++i) sum[i] += other.sum[i];
    for (std::size_t i = 0; i < square.value.size(); ++i) square.value[i] += other.square.value[i];
  }
  std::vector<double> mean() const {
    std::vector<double> m;
    for (const double s : sum) m.push_back(1.0 + s / draws);
    return m;
  }
  double covariance(int i, int j) const {
    return square(std::max(i, j), std::min(i, j)) / draws -
           sum[static_cast<std::size_t>(i)] / draws * (sum[static_cast<std::size_t>(j)] / draws);
  }
  int draws = 0;
  std::vector<double> sum;
  SquareMatrix square;  // lower triangle
};

double variance_at(const SurfaceBasis& basis, const LightDraws& draws, std::size_t x,
                   std::size_t y) {
  std::array<int, 16> at{};
  std::array<double, 16> value{};
  for (std::size_t j = 0; j < 4; ++j) {
    for (std::size_t i = 0; i < 4; ++i) {
      at[4 * j + i] = (basis.y.first[y] + static_cast<int>(j)) * basis.side + basis.x.first[x] +
                      static_cast<int>(i);
      value[4 * j + i] = basis.y.value[y][j] * basis.x.value[x][i];
    }
  }
  double sum = 0;
  for (std::size_t a = 0; a < 16; ++a) {
    for (std::size_t b = 0; b < 16; ++b) {
      sum += value[a] * value[b] * draws.covariance(at[a], at[b]);
    }
  }
  return std::max(0.0, sum);
}

void describe_light(const SurfaceBasis& basis, const LightDraws& draws,
                    const Volume<float>& surface, ShadingFacts& facts) {
  facts.lowest = facts.highest = surface.at(0, 0);
  for (int y = 0; y < surface.height(); ++y) {
    for (int x = 0; x < surface.width(); ++x) {
      facts.lowest = std::min(facts.lowest, double{surface.at(x, y)});
      facts.highest = std::max(facts.highest, double{surface.at(x, y)});
    }
  }
  double sum = 0, largest = 0;
  for (int j = 0; j < kSdGrid; ++j) {
    for (int i = 0; i < kSdGrid; ++i) {
      const auto x = static_cast<std::size_t>(i * (surface.width() - 1) / (kSdGrid - 1));
      const auto y = static_cast<std::size_t>(j * (surface.height() - 1) / (kSdGrid - 1));
      const double v = variance_at(basis, draws, x, y);
      sum += v;
      largest = std::max(largest, v);
    }
  }
  facts.mean_sd = std::sqrt(sum / (kSdGrid * kSdGrid));
  facts.largest_sd = std::sqrt(largest);
}

// restore_one no longer than the joint sampling needs for a start.
SegmentSettings only_to_start(const SegmentSettings& settings) {
  SegmentSettings first = settings;
  first.schedule.max_sweeps = std::min(first.schedule.max_sweeps, kFirstMaxSweeps);
  first.target = kFirstTarget;
  return first;
}

// Root mean square over the frame.
double distance(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) {
      const double d = double{a.at(x, y)} - b.at(x, y);
      sum += d * d;
    }
  }
  return std::sqrt(sum / static_cast<double>(a.extent().sites()));
}

}  // namespace

UnevenLight::UnevenLight(const ShadingSettings& settings, const GreyLevels& grey,
                         View<const float> pixels, int classes)
    : grey_(&grey), pixels_(pixels) {
  if (settings.mode == ShadingMode::kNone) return;
  facts_.coefficients =
      settings.mode == ShadingMode::kGiven ? settings.coefficients : kAutoCoefficients;
  shading_ = std::make_shared<Shading>();
  shading_->basis = make_surface_basis(pixels.extent(), facts_.coefficients);
  const SurfaceStart start = start_surface(grey, shading_->basis, shading_->prior,
                                           classes == kAutoClasses ? kAutoFitClasses : classes);
  facts_.first_span = start.span;
  facts_.modelled = settings.mode == ShadingMode::kGiven || start.span > kEvenSpan;
  if (facts_.modelled) become(start.coefficients);
}

void UnevenLight::become(const std::vector<double>& coefficients) {
  coefficients_ = coefficients;
  surface_ = surface_plane(shading_->basis, coefficients);
  even_pixels_ = even_light(pixels_, shading_->basis, coefficients);
  even_grey_ = make_grey_levels(even_pixels_.view());
}

// Joint sweeps of the chains of restore_one; gives the mean light of their second half.
std::vector<double> UnevenLight::settle(const SegmentSettings& settings, const Pool& pool,
                                        JobObserver& observer, LabelSampling& run) const {
  const auto chains = static_cast<int>(run.chains.size());
  run.shading = shading_;
  run.problem.field = observe(*run.colouring, *grey_);
  run.problem.prior = default_prior(*grey_, run.chains.front().model.classes);
  for (int c = 0; c < chains; ++c) {
    LabelChain& chain = run.chains[static_cast<std::size_t>(c)];
    chain.light = coefficients_;
    const double strength = kDispersion[static_cast<std::size_t>(c) % kDispersion.size()];
    for (double& l : chain.light) l = 1.0 + strength * (l - 1.0);
  }
  LightDraws draws(shading_->basis.unknowns());
  EveryChain every_chain(run.colouring->extent(), chains, pool);
  for (int block = 0; block < kSettlingBlocks; ++block) {
    if (observer.stop_requested()) throw Error(ErrorKind::kInterrupt, "stopped on request");
    every_chain.run([&](int c, WeightPlanes& weights, const Pool& inner) {
      advance_shaded_chain(run.problem, *shading_, kSettlingSweeps, inner, weights,
                           run.chains[static_cast<std::size_t>(c)]);
    });
    if (settings.coupling.mode == CouplingMode::kAuto) step_class_field(block, run);
    if (block < kSettlingBlocks / 2) continue;
    for (const LabelChain& chain : run.chains) draws.add(chain.light);
  }
  return draws.mean();
}

LabelSampling UnevenLight::restore(const SegmentSettings& settings, std::uint64_t image_seed,
                                   const Pool& pool, JobObserver& observer,
                                   LogPartitionMemo* memo) {
  if (!modelled()) return restore_one(*grey_, settings, image_seed, pool, observer, memo);
  const SegmentSettings first = only_to_start(settings);
  LabelSampling run = restore_one(even_grey_, first, image_seed, pool, observer, memo);
  const std::vector<double> settled = settle(settings, pool, observer, run);
  if (distance(surface_, surface_plane(shading_->basis, settled)) > kMovedLight) {
    become(settled);
    run = restore_one(even_grey_, first, image_seed, pool, observer, memo);
    settle(settings, pool, observer, run);
  }
  const auto chains = static_cast<int>(run.chains.size());
  EveryChain every_chain(run.colouring->extent(), chains, pool);
  Schedule schedule(settings.schedule, false);
  run.traces->trace_light(shading_->basis);
  run.traces->clear();
  run.counts = std::make_unique<LabelCounts>(*run.colouring, settings.classes, settings.chains,
                                             schedule.first_part());
  std::vector<LightDraws> draws(run.chains.size(), LightDraws(shading_->basis.unknowns()));
  sample_chains(
      settings,
      [&](const ChainDone& done) {
        every_chain.run([&](int c, WeightPlanes& weights, const Pool& inner) {
          const auto i = static_cast<std::size_t>(c);
          advance_shaded_chain(run.problem, *shading_, schedule.sweeps_a_block(), inner, weights,
                               run.chains[i]);
          if (schedule.stage() == Stage::kSampling) draws[i].add(run.chains[i].light);
          done(c);
        });
      },
      schedule, pool, observer, run);
  LightDraws all = draws.front();
  for (std::size_t i = 1; i < draws.size(); ++i) all.add(draws[i]);
  become(all.mean());
  describe_light(shading_->basis, all, surface_, facts_);
  return run;
}

}  // namespace stillfield
