// Simulated scenes with known noise for the tests of noise models.
#ifndef STILLFIELD_TESTS_MODEL_NOISE_SCENE_H_
#define STILLFIELD_TESTS_MODEL_NOISE_SCENE_H_

#include <algorithm>
#include <cstdint>

#include "core/volume.h"
#include "random/stream.h"

namespace stillfield::testing {

inline RandomStream scene_random(std::uint64_t seed) {
  return {chain_key(seed, 0), Purpose::kSimulation, 5};
}

inline Volume<std::uint8_t> all_usable(Extent e) {
  Volume<std::uint8_t> usable(e);
  for (int z = 0; z < e.depth; ++z) {
    for (int y = 0; y < e.height; ++y) std::fill_n(usable.row(y, z), e.width, std::uint8_t{1});
  }
  return usable;
}

// Discs of other grey values on a ramp from 40 to 200: flat areas, slopes and edges.
inline Volume<float> clean_scene(int side) {
  Volume<float> image({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      const int cx = x % 48 - 24, cy = y % 48 - 24;
      const bool disc = cx * cx + cy * cy < 14 * 14;
      const float ramp = 40.0f + 160.0f * static_cast<float>(x) / static_cast<float>(side);
      image.at(x, y) = disc ? 240.0f - ramp : ramp;
    }
  }
  return image;
}

inline Volume<float> with_gaussian(const Volume<float>& clean, double sd, std::uint64_t seed) {
  RandomStream random = scene_random(seed);
  Volume<float> out(clean.extent());
  for (int y = 0; y < clean.height(); ++y) {
    for (int x = 0; x < clean.width(); ++x) {
      out.at(x, y) = static_cast<float>(clean.at(x, y) + sd * random.normal());
    }
  }
  return out;
}

// y = gain Poisson(x / gain) + sd n + offset
inline Volume<float> with_photons(const Volume<float>& clean, double gain, double sd, double offset,
                                  std::uint64_t seed) {
  RandomStream random = scene_random(seed);
  Volume<float> out(clean.extent());
  for (int y = 0; y < clean.height(); ++y) {
    for (int x = 0; x < clean.width(); ++x) {
      const double counts = static_cast<double>(random.poisson(clean.at(x, y) / gain));
      out.at(x, y) = static_cast<float>(offset + gain * counts + sd * random.normal());
    }
  }
  return out;
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_MODEL_NOISE_SCENE_H_
