#include "sampler/class_trial.h"

#include <algorithm>
#include <cmath>

#include "model/pseudo_likelihood.h"
#include "sampler/neighbour_sample.h"
#include "sampler/starts.h"
#include "sampler/sweep.h"

namespace stillfield {
namespace {

constexpr int kSweepsABlock = 2;
constexpr int kSampledPixels = 2048;  // for alpha, a block
constexpr int kRisingBlocks = 5;
constexpr double kInverseTwoPi = 0.15915494309189535;

GreyLevels copy_of(const GreyLevels& grey) {
  GreyLevels copy;
  copy.level = Volume<std::uint16_t>(grey.level.extent());
  copy.origin = grey.origin;
  copy.step = grey.step;
  copy.levels = grey.levels;
  copy.histogram = grey.histogram;  // says which levels occur
  const Extent e = grey.level.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      std::copy_n(grey.level.row(y, z), e.width, copy.level.row(y, z));
    }
  }
  return copy;
}

// Densities stand for the probability of a level, density * step: widened so that it stays below 1,
// else a class as narrow as one level would win over any broader one.
GaussianClasses with_rounding(GaussianClasses classes, double step) {
  for (double& sd : classes.sd) sd = std::sqrt(sd * sd + step * step * kInverseTwoPi);
  return classes;
}

}  // namespace

ClassTrial try_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                       const LabelStart& start, const TrialSettings& settings, const Pool& pool) {
  const Colouring colouring(grey.level.extent(), neighbourhood);
  GreyLevels kept = copy_of(grey);
  const auto classes = start.classes.mean.size();
  HeldOut held = hold_out(colouring, settings.parts_key, settings.part, settings.parts,
                          static_cast<int>(classes), kept);
  const ObservedField field = observe(colouring, kept);
  const GaussianPrior prior = default_prior(grey, start.classes);

  LabelChain chain;
  chain.key = settings.chain_key;
  chain.model.classes = start.classes;
  chain.model.prior.alpha.assign(classes, 0.0);
  chain.labels = guarded_labels(colouring);
  scatter_labels(colouring, start.labels.view(), chain.labels);

  ClassTrial trial;
  trial.end.classes = start.classes;
  GaussianClasses& mean = trial.end.classes;
  WeightPlanes weights;
  // One class has no labels to draw.
  const int blocks = classes == 1 ? 0 : settings.settling_blocks + settings.counting_blocks;
  for (int block = 0; block < blocks; ++block) {
    chain.model.prior.beta = settings.beta * std::min(1.0, 0.5 + 0.5 * block / kRisingBlocks);
    prepare_weights(field, chain.model, pool, weights);
    sweep_labels(colouring, weights, kSweepsABlock, Purpose::kHeldOut, pool, chain);
    total_labels(field, pool, chain);
    RandomStream random(chain.key, Purpose::kHeldOut, chain.sweeps_done);
    draw_gaussian_classes(kept, chain.totals.classes, prior, random, chain.model.classes);
    if (block < settings.settling_blocks) {
      NeighbourCounts counts;
      sample_neighbours(colouring, chain, kSampledPixels, 0.5, counts);
      climb_class_field(counts, 2.0 / (2.0 + block), chain.model.prior);
      continue;
    }
    predict_held_out(chain, held);
    const GaussianClasses& now = chain.model.classes;
    for (std::size_t k = 0; k < classes; ++k) {
      mean.mean[k] += (now.mean[k] - mean.mean[k]) / held.counted;
      mean.sd[k] += (now.sd[k] - mean.sd[k]) / held.counted;
    }
  }
  if (classes == 1) predict_held_out(chain, held);
  trial.log_density = take_log_densities(with_rounding(mean, grey.step), held);
  trial.end.labels = Volume<std::uint8_t>(grey.level.extent());
  gather_labels(colouring, chain.labels, trial.end.labels.view());
  return trial;
}

}  // namespace stillfield
