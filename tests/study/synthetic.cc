#include "study/synthetic.h"

#include "sampler/sweep.h"

namespace stillfield::study {
namespace {

void measure(TruthField& truth) {
  std::int64_t ones = 0;
  const Extent e = truth.labels.extent();
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) ones += truth.labels.at(x, y) == 1;
  }
  truth.fraction = static_cast<double>(ones) / static_cast<double>(e.sites());
}

}  // namespace

TruthField draw_disks(int side, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation);
  TruthField truth{Volume<std::uint8_t>({side, side})};
  const int count = 8 + static_cast<int>(random.uniform() * 10.0);
  for (int i = 0; i < count; ++i) {
    const double radius = 3.0 + 11.0 * random.uniform();
    const double cx = side * random.uniform(), cy = side * random.uniform();
    for (int y = 0; y < side; ++y) {
      for (int x = 0; x < side; ++x) {
        const double dx = x + 0.5 - cx, dy = y + 0.5 - cy;
        if (dx * dx + dy * dy <= radius * radius) truth.labels.at(x, y) = 1;
      }
    }
  }
  measure(truth);
  return truth;
}

TruthField draw_potts(int side, int classes, double beta, int sweeps, std::uint64_t seed) {
  const Colouring colouring({side, side}, make_neighbourhood(Connectivity::kFour));
  GreyLevels grey;
  grey.level = Volume<std::uint16_t>({side, side});
  grey.levels = 1;
  grey.histogram = {colouring.extent().sites()};
  grey.observed = colouring.extent().sites();
  const ObservedField field = observe(colouring, grey);
  LabelChain chain;
  chain.key = chain_key(seed, 0);
  chain.model.prior = {std::vector<double>(static_cast<std::size_t>(classes), 0.0), beta};
  chain.model.classes.mean.assign(static_cast<std::size_t>(classes), 0.0);
  chain.model.classes.sd.assign(static_cast<std::size_t>(classes), 1.0);
  chain.labels = guarded_labels(colouring);
  TruthField truth{Volume<std::uint8_t>({side, side})};
  RandomStream random(chain.key, Purpose::kStart);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      truth.labels.at(x, y) =
          static_cast<std::uint8_t>(random.uniform() * static_cast<double>(classes));
    }
  }
  scatter_labels(colouring, truth.labels.view(), chain.labels);
  const Pool serial(1);
  WeightPlanes weights;
  prepare_weights(field, chain.model, serial, weights);
  sweep_labels(colouring, weights, sweeps, Purpose::kSimulation, serial, chain);
  gather_labels(colouring, chain.labels, truth.labels.view());
  measure(truth);
  return truth;
}

Volume<float> add_noise(const TruthField& truth, double sigma, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 1), Purpose::kSimulation, 1);
  const Extent e = truth.labels.extent();
  Volume<float> image(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      image.at(x, y) = static_cast<float>(truth.labels.at(x, y) + sigma * random.normal());
    }
  }
  return image;
}

double dice(const TruthField& truth, const Volume<std::uint8_t>& found) {
  std::int64_t both = 0, sum = 0;
  const Extent e = truth.labels.extent();
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      const bool a = truth.labels.at(x, y) == 1, b = found.at(x, y) == 2;
      both += a && b;
      sum += a + b;
    }
  }
  return sum == 0 ? 1.0 : 2.0 * static_cast<double>(both) / static_cast<double>(sum);
}

}  // namespace stillfield::study
