#include "model/impulse_noise.h"

#include <cmath>
#include <utility>
#include <vector>

#include "model/noise_estimate.h"
#include "model/noise_quantile.h"

namespace stillfield {
namespace {

constexpr int kRounds = 3;
// The first level errs low: texture adds to the differences, and a level too high hides impulses.
constexpr double kFirstShare = 0.5;
// Median of |N(0, 2)|.
constexpr double kMedianDifference = 0.9538725524;

double first_level(View<const float> image, View<const std::uint8_t> usable) {
  std::vector<double> differences;
  for (int z = 0; z < image.depth(); ++z) {
    for (int y = 0; y < image.height(); ++y) {
      for (int x = 0; x + 1 < image.width(); ++x) {
        if (usable.at(x, y, z) == 0 || usable.at(x + 1, y, z) == 0) continue;
        differences.push_back(std::fabs(image.at(x + 1, y, z) - image.at(x, y, z)));
      }
    }
  }
  return differences.empty() ? 0.0 : sample_median(std::move(differences)) / kMedianDifference;
}

Volume<std::uint8_t> without(View<const std::uint8_t> usable, const ImpulseMap& map) {
  Volume<std::uint8_t> rest(usable.extent());
  for (int z = 0; z < usable.depth(); ++z) {
    for (int y = 0; y < usable.height(); ++y) {
      for (int x = 0; x < usable.width(); ++x) {
        rest.at(x, y, z) = usable.at(x, y, z) != 0 && !map.found(x, y, z);
      }
    }
  }
  return rest;
}

}  // namespace

NoiseWithImpulses estimate_noise_and_impulses(std::optional<NoiseKind> kind,
                                              View<const float> image,
                                              View<const std::uint8_t> usable, const Pool& pool) {
  NoiseWithImpulses result;
  result.noise.sd = kFirstShare * first_level(image, usable);
  for (int round = 0; round < kRounds; ++round) {
    result.impulses = detect_impulses(image, usable, result.noise, pool);
    if (result.impulses.share < kLeastImpulseShare) {
      result.impulses = {Volume<float>(image.extent()), 0.0};
      result.noise = estimate_noise(kind, image, usable, pool);
      return result;
    }
    const Volume<std::uint8_t> regular = without(usable, result.impulses);
    result.noise = estimate_noise(kind, image, regular.view(), pool);
  }
  result.noise.impulse_share = result.impulses.share;
  return result;
}

}  // namespace stillfield
