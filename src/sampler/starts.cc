#include "sampler/starts.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "model/smoothed_start.h"
#include "sampler/path_sampling.h"

namespace stillfield {
namespace {

constexpr std::array<int, 4> kRadius{1, 0, 2, 1};
// Adaptation and draws start from a coupling well below the transition.
constexpr double kStartOfTransition = 0.75;

void disperse(LabelStart& start, RandomStream& random) {
  GaussianClasses& classes = start.classes;
  const std::vector<double> mean = classes.mean;
  for (std::size_t k = 0; k < mean.size(); ++k) {
    const double below = k > 0 ? mean[k] - mean[k - 1] : mean[1] - mean[0];
    const double above = k + 1 < mean.size() ? mean[k + 1] - mean[k] : below;
    const double u = 2.0 * random.uniform() - 1.0;
    classes.mean[k] += 0.25 * u * (u < 0.0 ? below : above);
  }
  const double scale = 1.0 + 0.5 * random.uniform();
  for (double& sd : classes.sd) sd *= scale;
  const Extent e = start.labels.extent();
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      std::uint8_t* row = start.labels.row(y, z);
      for (int x = 0; x < e.width; ++x) {
        const std::uint32_t w = random.word();
        if (w < 429496730u) row[x] = static_cast<std::uint8_t>(w % mean.size());  // a tenth
      }
    }
  }
}

}  // namespace

GaussianPrior default_prior(const GreyLevels& grey, const GaussianClasses& start) {
  GaussianPrior prior;
  double sum = 0.0, count = 0.0;
  for (int l = 0; l < grey.levels; ++l) {
    const auto n = static_cast<double>(grey.histogram[static_cast<std::size_t>(l)]);
    sum += n * l;
    count += n;
  }
  prior.mean = grey.origin + grey.step * (sum / count);
  double variance = 0.0;
  for (const double sd : start.sd) variance += sd * sd;
  variance /= static_cast<double>(start.sd.size());
  prior.variance = std::max(variance, grey.step * grey.step / 12.0);
  return prior;
}

std::vector<LabelChain> start_chains(const ObservedField& field, const ChainSettings& settings) {
  const Colouring& colouring = *field.colouring;
  std::vector<LabelChain> chains(static_cast<std::size_t>(settings.chains));
  const double transition =
      transition_coupling(colouring.neighbourhood(), settings.classes) * kStartOfTransition;
  for (std::size_t c = 0; c < chains.size(); ++c) {
    LabelChain& chain = chains[c];
    LabelStart start =
        smoothed_start(*field.grey, settings.classes, kRadius[std::min(c, kRadius.size() - 1)],
                       settings.shared_variance);
    chain.key = chain_key(settings.seed, static_cast<std::uint32_t>(c));
    if (c + 1 >= kRadius.size()) {
      RandomStream random(chain.key, Purpose::kStart);
      disperse(start, random);
    }
    chain.model.classes = start.classes;
    chain.model.prior.alpha.assign(static_cast<std::size_t>(settings.classes), 0.0);
    chain.model.prior.beta =
        settings.coupling.mode == CouplingMode::kFixed ? settings.coupling.value : transition;
    chain.labels = guarded_labels(colouring);
    scatter_labels(colouring, start.labels.view(), chain.labels);
  }
  return chains;
}

}  // namespace stillfield
