#include "study/lit_scenes.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "random/stream.h"
#include "study/shapes.h"

namespace stillfield::study {
namespace {

double mean_of(const Volume<double>& v) {
  double sum = 0;
  for (int y = 0; y < v.height(); ++y) {
    for (int x = 0; x < v.width(); ++x) sum += v.at(x, y);
  }
  return sum / static_cast<double>(v.extent().sites());
}

}  // namespace

Volume<std::uint8_t> draw_lit_scene(LitScene scene, int side, bool dark, std::uint64_t seed) {
  const bool disks = scene == LitScene::kDisks;
  Volume<std::uint8_t> labels = draw_shapes(disks ? Family::kDisks : Family::kBlobs, side, seed);
  if (scene == LitScene::kThree) {
    const Volume<std::uint8_t> over = draw_shapes(Family::kDisks, side, seed + 7000);
    for (int y = 0; y < side; ++y) {
      for (int x = 0; x < side; ++x) {
        if (over.at(x, y) == 2) labels.at(x, y) = 3;
      }
    }
  }
  const int classes = scene == LitScene::kThree ? 3 : 2;
  for (int y = 0; y < side && dark; ++y) {
    for (int x = 0; x < side; ++x) {
      labels.at(x, y) = static_cast<std::uint8_t>(classes + 1 - labels.at(x, y));
    }
  }
  return labels;
}

Volume<double> draw_light(Light light, int side, double span, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 9), Purpose::kSimulation, 3);
  const double cx = 0.3 + 0.4 * random.uniform(), cy = 0.3 + 0.4 * random.uniform();
  const double turn = 6.283185307179586 * random.uniform();
  const double width = 0.35 + 0.3 * random.uniform();
  Volume<double> g({side, side});
  double low = 1e300, high = -1e300;
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const double u = (x + 0.5) / side, v = (y + 0.5) / side;
      const double square = (u - cx) * (u - cx) + (v - cy) * (v - cy);
      const double value = light == Light::kSlope      ? u * std::cos(turn) + v * std::sin(turn)
                           : light == Light::kVignette ? -square
                                                       : std::exp(-square / (2 * width * width));
      g.at(x, y) = value;
      low = std::min(low, value);
      high = std::max(high, value);
    }
  }
  const double mean = mean_of(g);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) g.at(x, y) = 1 + span * (g.at(x, y) - mean) / (high - low);
  }
  return g;
}

Volume<float> photograph_lit(const Volume<std::uint8_t>& labels, const Volume<double>& light,
                             double sd, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 2), Purpose::kSimulation, 4);
  Volume<float> image(labels.extent());
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      const double clean = light.at(x, y) * (50 + 50 * labels.at(x, y));
      image.at(x, y) = static_cast<float>(std::floor(clean + sd * random.normal() + 0.5));
    }
  }
  return image;
}

double misclassified(const Volume<std::uint8_t>& found, const Volume<std::uint8_t>& truth) {
  std::int64_t wrong = 0;
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) wrong += found.at(x, y) != truth.at(x, y) ? 1 : 0;
  }
  return static_cast<double>(wrong) / static_cast<double>(truth.extent().sites());
}

double light_error(const Volume<float>& found, const Volume<double>& truth) {
  double mean = 0;
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) mean += double{found.at(x, y)};
  }
  mean /= static_cast<double>(truth.extent().sites());
  double sum = 0;
  for (int y = 0; y < truth.height(); ++y) {
    for (int x = 0; x < truth.width(); ++x) {
      const double d = found.at(x, y) / mean - truth.at(x, y);
      sum += d * d;
    }
  }
  return std::sqrt(sum / static_cast<double>(truth.extent().sites()));
}

}  // namespace stillfield::study
