// A scene with noise, a light restoration of it, and how good the result is.
#ifndef STILLFIELD_TESTS_SAMPLER_PATCH_SCENE_H_
#define STILLFIELD_TESTS_SAMPLER_PATCH_SCENE_H_

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>

#include "model/correlated_noise.h"
#include "random/stream.h"
#include "sampler/patch_field.h"

namespace stillfield::testing {

inline constexpr PhiloxKey kSceneKey{111, 112};

// A disk and stripes, between 40 and 200.
inline Volume<float> scene(int width, int height) {
  Volume<float> v({width, height, 1});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      const double dx = x - 0.4 * width, dy = y - 0.5 * height;
      const bool disk = dx * dx + dy * dy < 0.09 * height * height;
      v.at(x, y) = static_cast<float>(disk ? 200.0 : 80.0 + 40.0 * ((x + y / 2) / 9 % 2));
    }
  }
  return v;
}

// With noise of a moving average (model/correlated_noise.h); 0: white.
inline Volume<float> noisy(const Volume<float>& clean, double sd, double average = 0.0) {
  Volume<float> v(clean.extent());
  RandomStream random({113, 1}, Purpose::kSimulation);
  if (average != 0.0) {
    const Volume<float> noise = moving_average_noise(clean.extent(), average, random);
    for (int y = 0; y < v.height(); ++y) {
      for (int x = 0; x < v.width(); ++x) {
        v.at(x, y) = static_cast<float>(double{clean.at(x, y)} + sd * double{noise.at(x, y)});
      }
    }
    return v;
  }
  for (int y = 0; y < v.height(); ++y) {
    for (int x = 0; x < v.width(); ++x) {
      v.at(x, y) = static_cast<float>(double{clean.at(x, y)} + sd * random.normal());
    }
  }
  return v;
}

inline bool same_bytes(const Volume<float>& a, const Volume<float>& b) {
  for (int y = 0; y < a.height(); ++y) {
    const auto bytes = static_cast<std::size_t>(a.width()) * sizeof(float);
    if (std::memcmp(a.row(y), b.row(y), bytes) != 0) return false;
  }
  return a.extent() == b.extent();
}

inline PatchSettings light(int patch, double average = 0.0) {
  PatchSettings s;
  s.patch = patch;
  s.components = 3;
  s.tiling_sweeps = 3;
  s.group_passes = 1;
  s.group_size = 12;
  s.samples = 1;
  if (average != 0.0) s.noise_correlation = moving_average_model(average, 2);
  return s;
}

inline PatchResult restore(const Volume<float>& value, double sd, const PatchSettings& s,
                           int threads) {
  return restore_patches(value, sd, s, kSceneKey, Pool(threads), nullptr, nullptr, nullptr);
}

inline void check_same(const PatchResult& a, const PatchResult& b) {
  CHECK(same_bytes(a.moments.mean, b.moments.mean));
  CHECK(same_bytes(a.moments.variance, b.moments.variance));
  CHECK(same_bytes(a.draws[0], b.draws[0]));
}

inline double mean_square(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0.0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) {
      const double off = double{a.at(x, y)} - double{b.at(x, y)};
      sum += off * off;
    }
  }
  return sum / static_cast<double>(a.extent().sites());
}

// Share of the pixels whose nominal 90 % interval holds the clean value.
inline double coverage(const IntensityMoments& m, const Volume<float>& clean) {
  double covered = 0.0;
  for (int y = 0; y < clean.height(); ++y) {
    for (int x = 0; x < clean.width(); ++x) {
      const double half = 1.645 * std::sqrt(double{m.variance.at(x, y)});
      covered += std::abs(double{m.mean.at(x, y)} - double{clean.at(x, y)}) <= half;
    }
  }
  return covered / static_cast<double>(clean.extent().sites());
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_SAMPLER_PATCH_SCENE_H_
