#include "sampler/intensity_start.h"

#include <algorithm>
#include <array>
#include <cmath>

#include "random/stream.h"

namespace stillfield {
namespace {

constexpr double kPriorShare = 0.05;  // of D in the prior's rates

double square(double x) {
  return x * x;
}

struct Scale {
  double squared_difference = 0.0;  // D
  double variance = 0.0;            // mean over observed pixels
};

Scale scale_of(const ObservedIntensity& observed, View<const float> value,
               View<const float> variance) {
  const Extent& e = observed.layout->extent();
  const auto seen = [&](int x, int y, int z) { return std::isfinite(variance.at(x, y, z)); };
  Scale s;
  double squares = 0.0, pairs = 0.0;
  const auto add_pair = [&](double a, double b) {
    squares += (a - b) * (a - b);
    pairs += 1.0;
  };
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        if (!seen(x, y, z)) continue;
        s.variance += static_cast<double>(variance.at(x, y, z));
        const auto here = static_cast<double>(value.at(x, y, z));
        if (x + 1 < e.width && seen(x + 1, y, z)) add_pair(here, value.at(x + 1, y, z));
        if (y + 1 < e.height && seen(x, y + 1, z)) add_pair(here, value.at(x, y + 1, z));
      }
    }
  }
  s.variance /= static_cast<double>(observed.observed);
  s.squared_difference = pairs > 0.0 ? squares / pairs : 0.0;
  // A constant image has no scale of its own: rounding at its grey level gives one.
  const double least = 1e-6 * (std::fabs(observed.centre) + 1.0);
  s.squared_difference = std::max(s.squared_difference, least * least);
  return s;
}

// Mean of the observed pixels among the 3 x 3 around (x, y); the centre if there are none.
double mean_around(const ObservedIntensity& observed, View<const float> value,
                   const Volume<float>& precision, int x, int y, int z) {
  double sum = 0.0;
  int n = 0;
  const Extent& e = observed.layout->extent();
  for (int v = std::max(0, y - 1); v < std::min(e.height, y + 2); ++v) {
    for (int u = std::max(0, x - 1); u < std::min(e.width, x + 2); ++u) {
      if (precision.at(u, v, z) <= 0.0f) continue;
      sum += static_cast<double>(value.at(u, v, z));
      ++n;
    }
  }
  return n > 0 ? sum / n : observed.centre;
}

Volume<float> start_field(const ObservedIntensity& observed, View<const float> value, int chain,
                          double added_sd, PhiloxKey key) {
  const Extent& e = observed.layout->extent();
  Volume<float> precision(e), start(e);
  observed.layout->gather(observed.precision, precision.view());
  RandomStream random(key, Purpose::kStart);
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) {
      for (int x = 0; x < e.width; ++x) {
        double v = observed.centre;
        if (chain == 0) {
          v = mean_around(observed, value, precision, x, y, z);
        } else if (chain != 2 && precision.at(x, y, z) > 0.0f) {
          v = static_cast<double>(value.at(x, y, z));
        }
        if (chain >= 3) v += added_sd * random.normal();
        start.at(x, y, z) = static_cast<float>(v);
      }
    }
  }
  return start;
}

}  // namespace

IntensityModel weak_intensity_model(const ObservedIntensity& observed, View<const float> value,
                                    View<const float> variance, IntensityPrior prior,
                                    bool noise_scale_known) {
  const Scale s = scale_of(observed, value, variance);
  IntensityModel model;
  model.prior = prior;
  model.noise_scale_known = noise_scale_known;
  model.strength.rate = prior == IntensityPrior::kSmooth
                            ? kPriorShare * s.squared_difference
                            : 2.0 * kPriorShare * std::sqrt(s.squared_difference);
  model.noise.rate = 0.5 * kPriorShare * s.squared_difference / s.variance;
  return model;
}

std::vector<IntensityChain> start_intensity_chains(const ObservedIntensity& observed,
                                                   const IntensityModel& model,
                                                   View<const float> value, int chains,
                                                   std::uint64_t seed) {
  constexpr std::array<double, 4> kStrengthFactor = {1.0, 0.2, 5.0, 1.0};
  constexpr std::array<double, 4> kNoiseFactor = {1.0, 0.3, 2.0, 1.5};
  // D and D / (4 v), from the priors' rates.
  const double d = model.prior == IntensityPrior::kSmooth
                       ? model.strength.rate / kPriorShare
                       : square(model.strength.rate / (2.0 * kPriorShare));
  const double strength = model.prior == IntensityPrior::kSmooth ? 1.0 / d : 1.0 / std::sqrt(d);
  const double noise = model.noise.rate / (2.0 * kPriorShare);
  std::vector<IntensityChain> result;
  for (int c = 0; c < chains; ++c) {
    const auto kind = static_cast<std::size_t>(c % 4);
    const PhiloxKey key = chain_key(seed, static_cast<std::uint32_t>(c));
    const Volume<float> start = start_field(observed, value, c, std::sqrt(0.5 * d), key);
    result.push_back(start_intensity_chain(
        observed, model.prior, key, start.view(), strength * kStrengthFactor[kind],
        model.noise_scale_known ? 1.0 : noise * kNoiseFactor[kind]));
  }
  return result;
}

}  // namespace stillfield
