#include "model/patch_mixture.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "core/error.h"
#include "model/correlated_noise.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

constexpr PhiloxKey kKey{5, 6};

// Sums of side x side white noise: covariance sd^2 side^-2 max(0, side - |dx|) max(0, side -
// |dy|), plus a level, plus white noise.
Volume<float> smooth_field(int size, int side, double sd, double level, double noise,
                           std::uint32_t seed) {
  RandomStream random({seed, 1}, Purpose::kSimulation);
  Volume<float> white({size + side, size + side, 1});
  for (int y = 0; y < white.height(); ++y) {
    for (int x = 0; x < white.width(); ++x) {
      white.at(x, y) = static_cast<float>(random.normal());
    }
  }
  Volume<float> out({size, size, 1});
  for (int y = 0; y < size; ++y) {
    for (int x = 0; x < size; ++x) {
      double sum = 0.0;
      for (int i = 0; i < side * side; ++i) sum += double{white.at(x + i % side, y + i / side)};
      out.at(x, y) = static_cast<float>(level + sd * sum / side + noise * random.normal());
    }
  }
  return out;
}

double smooth_covariance(int side, double sd, int dx, int dy) {
  return sd * sd * std::max(0, side - std::abs(dx)) * std::max(0, side - std::abs(dy)) /
         (side * side);
}

PatchSettings settings(int patch, int components) {
  PatchSettings s;
  s.patch = patch;
  s.components = components;
  return s;
}

}  // namespace

TEST_CASE("one component learns the covariance of a Gaussian field under its noise") {
  // 20 000 of some 36 000 overlapping patches: some 2000 independent ones, so covariances have
  // errors near variance * sqrt(2 / 2000) = 3 %; asserted: 12 %, the level within 4 of its errors.
  constexpr int kSide = 4;
  const Volume<float> value = smooth_field(192, 4, 20.0, 100.0, 5.0, 1);
  const PatchPlane plane{&value, 5.0};
  const PatchMixture m = learn_patch_mixture({&plane, 1}, settings(kSide, 1), kKey, Pool(2));
  REQUIRE(m.size() == 1);
  CHECK(m.components[0].weight == Approx(1.0));
  CHECK(m.components[0].mean[5] == Approx(100.0).margin(4.0 * 20.0 * 4.0 / 192.0));
  for (int i = 0; i < kSide * kSide; ++i) {
    for (int j = 0; j < kSide * kSide; ++j) {
      const double expected =
          smooth_covariance(4, 20.0, i % kSide - j % kSide, i / kSide - j / kSide);
      const double got = m.components[0].covariance[static_cast<std::size_t>(i * 16 + j)];
      REQUIRE(std::abs(got - expected) < 0.12 * 400.0);
    }
  }
}

TEST_CASE("a field under correlated noise of its own size is learned without the noise") {
  // As above, noise of deviation 20 like the field: the total variance is 800, so errors are twice
  // as large; asserted: 24 %. Taken as white, the noise leaves most of its 20^2 rho(1, 0) =
  // 195 (closed form) in the neighbours' covariance; the 12 neighbours' mean is asserted to 12 %.
  constexpr double kSd = 20.0, kAverage = 0.8;
  Volume<float> value = smooth_field(192, 4, 20.0, 100.0, 0.0, 6);
  RandomStream random({7, 1}, Purpose::kSimulation);
  const Volume<float> noise = moving_average_noise(value.extent(), kAverage, random);
  for (int y = 0; y < 192; ++y) {
    for (int x = 0; x < 192; ++x) value.at(x, y) += static_cast<float>(kSd * noise.at(x, y));
  }
  const PatchPlane plane{&value, kSd};
  PatchSettings s = settings(4, 1);
  const PatchMixture white = learn_patch_mixture({&plane, 1}, s, kKey, Pool(1));
  s.noise_correlation = moving_average_model(kAverage, 2);
  const PatchMixture m = learn_patch_mixture({&plane, 1}, s, kKey, Pool(1));
  CHECK(m.components[0].mean[5] == Approx(100.0).margin(4.0 * 20.0 * 5.0 / 192.0));
  double neighbours = 0.0, neighbours_white = 0.0;
  for (int i = 0; i < 16; ++i) {
    for (int j = 0; j < 16; ++j) {
      const auto at = static_cast<std::size_t>(i * 16 + j);
      const double got = m.components[0].covariance[at];
      REQUIRE(std::abs(got - smooth_covariance(4, 20.0, i % 4 - j % 4, i / 4 - j / 4)) <
              0.24 * 400.0);
      if (i / 4 != j / 4 || j % 4 != i % 4 + 1) continue;
      neighbours += got / 12.0;
      neighbours_white += white.components[0].covariance[at] / 12.0;
    }
  }
  const double left = kSd * kSd * moving_average_rho(kAverage, 1, 0);
  const double expected = smooth_covariance(4, 20.0, 1, 0);
  CHECK(neighbours == Approx(expected).margin(0.12 * 400.0));
  CHECK(neighbours_white > expected + 0.5 * left);
}

TEST_CASE("planes of different noise agree on one clean covariance") {
  const Volume<float> quiet = smooth_field(128, 4, 20.0, 100.0, 3.0, 2);
  const Volume<float> loud = smooth_field(128, 4, 20.0, 100.0, 12.0, 3);
  const std::vector<PatchPlane> planes = {{&quiet, 3.0}, {&loud, 12.0}};
  const PatchMixture m = learn_patch_mixture(planes, settings(4, 1), kKey, Pool(1));
  double trace = 0.0;
  for (int i = 0; i < 16; ++i)
    trace += m.components[0].covariance[static_cast<std::size_t>(17 * i)];
  // Clean trace 16 * 400; ignoring the noise of either plane would add 16 * (9 + 144) / 2 = 19 %.
  CHECK(trace == Approx(6400.0).epsilon(0.1));
}

TEST_CASE("two populations of patches become two components") {
  // Flat at 50 left and at 200 right, noise 10: two components hold the patches that lie on one
  // side, with means at the levels; each may also take a column or two of the three columns of
  // patches over the step, which moves an outer pixel of its mean by 150 / 37 a column at most.
  Volume<float> value({120, 60, 1});
  RandomStream random({4, 1}, Purpose::kSimulation);
  for (int y = 0; y < 60; ++y) {
    for (int x = 0; x < 120; ++x) {
      value.at(x, y) = static_cast<float>((x < 40 ? 50.0 : 200.0) + 10.0 * random.normal());
    }
  }
  const PatchPlane plane{&value, 10.0};
  const PatchMixture m = learn_patch_mixture({&plane, 1}, settings(4, 3), kKey, Pool(2));
  double low = 0.0, high = 0.0;
  for (const PatchComponent& c : m.components) {
    if (std::abs(c.mean[5] - 50.0) < 5.0 && std::abs(c.mean[0] - 50.0) < 5.0) low += c.weight;
    if (std::abs(c.mean[5] - 200.0) < 5.0 && std::abs(c.mean[0] - 200.0) < 5.0) high += c.weight;
  }
  // Of 117 columns of patches 37 lie left and 77 right of the step.
  CHECK(low == Approx(37.0 / 117.0).margin(0.02));
  CHECK(high == Approx(77.0 / 117.0).margin(0.02));
}

TEST_CASE("the mixture does not depend on the number of threads") {
  const Volume<float> value = smooth_field(64, 3, 30.0, 100.0, 10.0, 5);
  const PatchPlane plane{&value, 10.0};
  const PatchMixture one = learn_patch_mixture({&plane, 1}, settings(6, 5), kKey, Pool(1));
  const PatchMixture three = learn_patch_mixture({&plane, 1}, settings(6, 5), kKey, Pool(3));
  REQUIRE(one.size() == three.size());
  for (std::size_t k = 0; k < one.components.size(); ++k) {
    CHECK(one.components[k].weight == three.components[k].weight);
    CHECK(one.components[k].mean == three.components[k].mean);
    CHECK(one.components[k].covariance == three.components[k].covariance);
  }
}

TEST_CASE("settings left open follow the noise and the size") {
  Volume<float> value({64, 64, 1});
  for (int y = 0; y < 64; ++y) {
    for (int x = 0; x < 64; ++x) value.at(x, y) = x < 32 ? 0.0f : 255.0f;
  }
  const auto resolve = [&value](double sd, PatchSettings s) {
    const PatchPlane plane{&value, sd};
    return resolved_settings(s, {&plane, 1});
  };
  CHECK(resolve(0.5, {}).components == 30);
  CHECK(resolve(0.5, {}).group_size == 40);
  PatchSettings wanted;
  wanted.patch = 4;
  wanted.group_size = 43;
  CHECK(resolve(50.0, wanted).patch == 4);
  CHECK(resolve(50.0, wanted).group_size == 40);
  wanted.group_size = 200;
  wanted.patch = 8;  // 9 x 9 positions in the least image
  CHECK(resolve(50.0, wanted).group_size == 80);
}

TEST_CASE("settings and planes that cannot work are refused") {
  const Volume<float> small({15, 40, 1});
  const Volume<float> good({40, 40, 1});
  const auto refused = [](const Volume<float>& v, double sd, PatchSettings s) {
    const PatchPlane plane{&v, sd};
    CHECK_THROWS_AS(resolved_settings(s, {&plane, 1}), Error);
  };
  refused(small, 5.0, {});
  refused(good, 0.0, {});
  refused(good, -1.0, {});
  refused(good, NAN, {});
  PatchSettings odd;
  odd.patch = 5;
  refused(good, 5.0, odd);
  PatchSettings crowd;
  crowd.group_size = 2;
  refused(good, 5.0, crowd);
  CHECK(least_patch_side() == 16);
}
