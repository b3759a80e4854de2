#include "model/impulse_detection.h"

#include <catch2/catch.hpp>

#include "core/error.h"
#include "model/impulse_density.h"
#include "model/impulse_noise.h"
#include "model/noise_scene.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

struct Struck {
  Volume<float> image;
  Volume<std::uint8_t> hit;
};

// A share of the pixels replaced by 0 or 255, or by uniform values.
Struck strike(const Volume<float>& image, double share, bool uniform, std::uint64_t seed) {
  RandomStream random = scene_random(seed);
  Struck s{Volume<float>(image.extent()), Volume<std::uint8_t>(image.extent())};
  for (int y = 0; y < image.height(); ++y) {
    for (int x = 0; x < image.width(); ++x) {
      s.hit.at(x, y) = random.uniform() < share;
      const double u = random.uniform();
      const double value = uniform ? 255.0 * u : (u < 0.5 ? 0.0 : 255.0);
      s.image.at(x, y) = s.hit.at(x, y) != 0 ? static_cast<float>(value) : image.at(x, y);
    }
  }
  return s;
}

struct Rates {
  double detected = 0.0, false_alarms = 0.0;
};

Rates rates_of(const Struck& s, const ImpulseMap& map) {
  double hits = 0.0, found = 0.0, rest = 0.0, wrong = 0.0;
  for (int y = 0; y < s.hit.height(); ++y) {
    for (int x = 0; x < s.hit.width(); ++x) {
      (s.hit.at(x, y) != 0 ? hits : rest) += 1.0;
      if (map.found(x, y)) (s.hit.at(x, y) != 0 ? found : wrong) += 1.0;
    }
  }
  return {hits > 0.0 ? found / hits : 1.0, wrong / rest};
}

}  // namespace

// The bounds are those asked of the detector; on this scene of greys 40 to 200 the impulses are at
// least 40 grey values, 2.7 noise deviations, from their surroundings.
TEST_CASE("salt and pepper in noise are found") {
  const Pool pool(1);
  const Struck s = strike(with_gaussian(clean_scene(128), 15.0, 61), 0.1, false, 62);
  const Volume<std::uint8_t> usable = all_usable(s.image.extent());
  const ImpulseMap map =
      detect_impulses(s.image.view(), usable.view(), given_gaussian_noise(15.0), pool);
  const Rates r = rates_of(s, map);
  CAPTURE(r.detected, r.false_alarms);
  CHECK(r.detected >= 0.95);
  CHECK(r.false_alarms <= 0.01);
  CHECK(map.share == Approx(0.1).margin(0.01));
}

TEST_CASE("few pixels of images without impulses are taken for one") {
  const Pool pool(1);
  for (const double sd : {0.0, 15.0, 25.0}) {
    const Volume<float> y = with_gaussian(clean_scene(128), sd, 63);
    const Volume<std::uint8_t> usable = all_usable(y.extent());
    NoiseModel noise;
    noise.sd = sd;
    CHECK(detect_impulses(y.view(), usable.view(), noise, pool).share <= 0.002);
  }
}

TEST_CASE("random values, hot pixels and pixels out of play") {
  const Pool pool(1);
  const Struck s = strike(with_gaussian(clean_scene(128), 5.0, 64), 0.05, true, 65);
  Volume<std::uint8_t> usable = all_usable(s.image.extent());
  for (int x = 0; x < 128; ++x) usable.at(x, 7) = 0;
  const ImpulseMap map =
      detect_impulses(s.image.view(), usable.view(), given_gaussian_noise(5.0), pool);
  // A value within 3.4 sd of what the window holds is the likelier a regular one: a seventh of the
  // uniform values, twice that along edges.
  CHECK(rates_of(s, map).detected > 0.75);
  CHECK(rates_of(s, map).false_alarms < 0.01);
  for (int x = 0; x < 128; ++x) CHECK(map.value.at(x, 7) == 0.0f);
}

TEST_CASE("lines one pixel wide and single steps are no impulses") {
  const Pool pool(1);
  Volume<float> y({64, 64});
  for (int r = 0; r < 64; ++r) {
    for (int x = 0; x < 64; ++x)
      y.at(x, r) = x == 20 || r == 40 || x == r ? 200.0f : x < 32 ? 50.0f : 90.0f;
  }
  const Volume<float> noisy = with_gaussian(y, 3.0, 66);
  const ImpulseMap map =
      detect_impulses(noisy.view(), all_usable({64, 64}).view(), given_gaussian_noise(3.0), pool);
  CHECK(map.share <= 0.002);
}

TEST_CASE("noise level and impulses are found together") {
  const Pool pool(1);
  const Struck s = strike(with_gaussian(clean_scene(128), 15.0, 67), 0.1, false, 68);
  const Volume<std::uint8_t> usable = all_usable(s.image.extent());
  const NoiseWithImpulses n =
      estimate_noise_and_impulses(NoiseKind::kGaussian, s.image.view(), usable.view(), pool);
  CHECK(n.noise.sd == Approx(15.0).epsilon(0.08));
  CHECK(n.noise.impulse_share == Approx(0.1).margin(0.015));
  CHECK(rates_of(s, n.impulses).detected >= 0.9);
  const Volume<float> plain = with_gaussian(clean_scene(128), 15.0, 69);
  const NoiseWithImpulses none =
      estimate_noise_and_impulses(NoiseKind::kGaussian, plain.view(), usable.view(), pool);
  CHECK(none.noise.impulse_share == 0.0);
  CHECK(none.impulses.share == 0.0);
}

TEST_CASE("detection does not depend on the threads") {
  const Struck s = strike(with_gaussian(clean_scene(96), 15.0, 70), 0.1, false, 71);
  const Volume<std::uint8_t> usable = all_usable(s.image.extent());
  const NoiseModel noise = given_gaussian_noise(15.0);
  const ImpulseMap a = detect_impulses(s.image.view(), usable.view(), noise, Pool(1));
  const ImpulseMap b = detect_impulses(s.image.view(), usable.view(), noise, Pool(4));
  bool same = true;
  for (int y = 0; y < 96; ++y) {
    for (int x = 0; x < 96; ++x) same = same && a.value.at(x, y) == b.value.at(x, y);
  }
  CHECK(same);
}

TEST_CASE("the density of impulse values integrates to one and shows the atoms") {
  const Struck s = strike(with_gaussian(clean_scene(96), 5.0, 72), 0.1, false, 73);
  const Volume<std::uint8_t> usable = all_usable(s.image.extent());
  ImpulseMap map{Volume<float>(s.image.extent())};
  for (int y = 0; y < 96; ++y) {
    for (int x = 0; x < 96; ++x) map.value.at(x, y) = s.hit.at(x, y);
  }
  const ImpulseDensity g(s.image.view(), usable.view(), map);
  double sum = 0.0;
  for (double v = -100.0; v < 400.0; v += 0.01) sum += 0.01 * g(v);
  CHECK(sum == Approx(1.0).epsilon(1e-3));
  CHECK(g(255.0) > 10.0 * g(128.0));
  CHECK(g(128.0) > 0.0);
  CHECK(g(300.0) == 0.0);
  const Volume<std::uint8_t> none({96, 96});
  CHECK_THROWS_AS(ImpulseDensity(s.image.view(), none.view(), map), Error);
}
