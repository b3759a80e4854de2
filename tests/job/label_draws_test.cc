// Draws after sampling: the same for any number of threads, different from one another, and of the
// same distribution as the marginal probabilities that sampling has counted.
#include "job/label_draws.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "job/restore_one.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

// A disk of grey 2 on grey 1, noise of standard deviation .7.
GreyLevels noisy_disk(int side) {
  Volume<float> image({side, side});
  RandomStream random(chain_key(11, 1), Purpose::kSimulation, 4);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const bool in = std::hypot(x - side / 2.0, y - side / 2.0) < side / 4.0;
      image.at(x, y) = static_cast<float>((in ? 2.0 : 1.0) + 0.7 * random.normal());
    }
  }
  return make_grey_levels(image.view());
}

}  // namespace

TEST_CASE("label draws continue the chains, whatever the number of threads") {
  const GreyLevels grey = noisy_disk(48);
  SegmentSettings settings;
  settings.chains = 3;
  JobObserver observer;
  constexpr int kDraws = 40;
  std::vector<std::vector<double>> share_by_threads;
  for (const int threads : {1, 3}) {
    const Pool pool(threads);
    LabelSampling sampling = restore_one(grey, settings, 5, pool, observer);
    const Volume<float> probability = sampling.counts->probability(1);
    std::vector<double> share(3 * kDraws);
    for_label_draws(settings, kDraws, pool, observer, sampling, [&](const LabelDraw& d) {
      double n = 0;
      for (int y = 0; y < 48; ++y) {
        for (int x = 0; x < 48; ++x) n += d.labels.at(x, y) == 2 ? 1 : 0;
      }
      share[static_cast<std::size_t>(d.chain * kDraws + d.draw)] = n / (48 * 48);
    });
    double mean = 0, square = 0, expected = 0;
    for (const double s : share) mean += s / static_cast<double>(share.size());
    for (const double s : share) {
      square += (s - mean) * (s - mean) / static_cast<double>(share.size() - 1);
    }
    for (int y = 0; y < 48; ++y) {
      for (int x = 0; x < 48; ++x) expected += double{probability.at(x, y)} / (48 * 48);
    }
    CHECK(square > 0);
    // 120 draws a few sweeps apart count for at least 20 independent ones: 4 standard errors, false
    // alarm below .0001; the error of `expected` is far smaller.
    CHECK(std::fabs(mean - expected) < 4 * std::sqrt(square / 20));
    share_by_threads.push_back(share);
  }
  CHECK(share_by_threads[0] == share_by_threads[1]);
}
