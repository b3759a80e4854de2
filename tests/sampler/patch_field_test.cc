#include "sampler/patch_field.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "core/error.h"
#include "model/correlated_noise.h"
#include "sampler/patch_scene.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

void check_finite(const IntensityMoments& m) {
  for (int y = 0; y < m.mean.height(); ++y) {
    for (int x = 0; x < m.mean.width(); ++x) {
      REQUIRE(std::isfinite(m.mean.at(x, y)));
      REQUIRE(std::isfinite(m.variance.at(x, y)));
      REQUIRE(m.variance.at(x, y) > 0.0f);
    }
  }
}

// The scene with a chirp: flat parts alone are restored far better than any nominal interval.
Volume<float> chirped_scene(int side) {
  Volume<float> clean = scene(side, side);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      clean.at(x, y) += 25.0f * static_cast<float>(std::sin(0.008 * (x * x + y * y)));
    }
  }
  return clean;
}

// Counts its calls and checks what it is given.
class CountingRedraw : public PixelRedraw {
 public:
  void redraw(const IntensityMoments& now, std::uint32_t sweep, const Pool&,
              Volume<float>& value) override {
    CHECK(sweep == static_cast<std::uint32_t>(calls));
    CHECK(std::isfinite(now.mean.at(3, 3)));
    CHECK(now.variance.at(3, 3) > 0.0f);
    // A missing pixel that held a bad guess moves to the estimate.
    value.at(3, 3) = calls == 0 ? 100.0f : now.mean.at(3, 3);
    last = value.at(3, 3);
    ++calls;
  }
  int calls = 0;
  float last = 0.0f;
};

}  // namespace

TEST_CASE("a restored image has the same bytes for 1, 2 and 4 threads") {
  const double average = GENERATE(0.0, 0.8);
  for (const int patch : {4, 6, 8}) {
    CAPTURE(patch, average);
    // Several tiles of reference patches in both directions, sides that are no multiples.
    const Volume<float> clean = scene(patch == 4 ? 83 : 61, patch == 4 ? 77 : 41);
    const Volume<float> value = noisy(clean, 15.0, average);
    const PatchSettings s = light(patch, average);
    const PatchResult one = restore(value, 15.0, s, 1);
    for (const int threads : {2, 4}) check_same(one, restore(value, 15.0, s, threads));
  }
}

TEST_CASE("a restored image has the same bytes on every CPU target") {
  for (const double average : {0.0, 0.8}) {
    const Volume<float> value = noisy(scene(37, 26), 15.0, average);
    const PatchSettings s = light(6, average);
    const PatchResult best = restore(value, 15.0, s, 1);
    for_each_target([&](const std::string& name) {
      CAPTURE(name, average);
      check_same(best, restore(value, 15.0, s, 1));
    });
  }
}

TEST_CASE("most of the noise goes and the intervals cover") {
  // Bounds from the definition: the noise's own mean square is sd^2 = 400. The scene must lose
  // at least three quarters of it, in the quick mode too; a nominal 90 % interval must hold the
  // truth at .8 to .99 of these 96^2 correlated errors.
  const Volume<float> clean = chirped_scene(96);
  const Volume<float> value = noisy(clean, 20.0);
  for (const bool quick : {false, true}) {
    PatchSettings s;
    s.quick = quick;
    const PatchResult r = restore(value, 20.0, s, 2);
    CAPTURE(quick, r.shares.size());
    CHECK(mean_square(r.moments.mean, clean) < 100.0);
    CHECK(coverage(r.moments, clean) > 0.8);
    CHECK(coverage(r.moments, clean) < 0.995);
  }
}

TEST_CASE("modelling the noise's correlation restores better, and its intervals cover") {
  const Volume<float> clean = chirped_scene(96);
  const Volume<float> value = noisy(clean, 20.0, 0.8);
  PatchSettings s;
  s.quick = true;
  const PatchResult white = restore(value, 20.0, s, 2);
  s.noise_correlation = moving_average_model(0.8, 2);
  const PatchResult modelled = restore(value, 20.0, s, 2);
  CAPTURE(mean_square(white.moments.mean, clean), coverage(white.moments, clean));
  CAPTURE(mean_square(modelled.moments.mean, clean), coverage(modelled.moments, clean));
  CHECK(mean_square(modelled.moments.mean, clean) < 0.8 * mean_square(white.moments.mean, clean));
  CHECK(coverage(white.moments, clean) < coverage(modelled.moments, clean) - 0.05);
  CHECK(coverage(modelled.moments, clean) > 0.8);
  CHECK(coverage(modelled.moments, clean) < 0.995);
}

TEST_CASE("an open patch size blends both, before and after the groups") {
  const Volume<float> clean = scene(64, 64);
  const Volume<float> value = noisy(clean, 20.0);
  PatchSettings s = light(0);
  const PatchResult blended = restore(value, 20.0, s, 2);
  REQUIRE(blended.shares.size() == 4);
  double total = 0, worst = 0;
  for (const PatchShare& share : blended.shares) {
    CHECK(share.weight >= 0);
    total += share.weight;
  }
  CHECK(total == Approx(1.0));
  CHECK(blended.shares[0].side == 6);
  CHECK_FALSE(blended.shares[0].groups);
  CHECK(blended.shares[3].side == 8);
  CHECK(blended.shares[3].groups);
  // Weights that sum to 1 cannot be worse than the worst of what they blend (convexity).
  for (const int side : {6, 8}) {
    s = light(side);
    worst = std::max(worst, mean_square(restore(value, 20.0, s, 2).moments.mean, clean));
  }
  CHECK(mean_square(blended.moments.mean, clean) <= 1.05 * worst);
}

TEST_CASE("a correlation of zero is white noise up to rounding") {
  const Volume<float> value = noisy(scene(37, 26), 15.0);
  PatchSettings s = light(6);
  s.quick = true;  // correlated noise is not split, so its restorations are not blended
  const PatchResult white = restore(value, 15.0, s, 1);
  s.noise_correlation = moving_average_model(0.0, 1);
  const PatchResult zero = restore(value, 15.0, s, 1);
  for (int y = 0; y < 26; ++y) {
    for (int x = 0; x < 37; ++x) {
      REQUIRE(zero.moments.mean.at(x, y) == Approx(white.moments.mean.at(x, y)).epsilon(1e-5));
      REQUIRE(zero.moments.variance.at(x, y) ==
              Approx(white.moments.variance.at(x, y)).epsilon(1e-4));
    }
  }
}

TEST_CASE("correlated noise does not go with redrawn values") {
  const Volume<float> value = noisy(scene(30, 24), 10.0);
  CountingRedraw redraw;
  CHECK_THROWS_AS(
      restore_patches(value, 10.0, light(6, 0.8), kSceneKey, Pool(1), &redraw, nullptr, nullptr),
      Error);
  CHECK(redraw.calls == 0);
}

TEST_CASE("constant and least images stay finite") {
  Volume<float> constant({33, 20, 1});
  for (int y = 0; y < 20; ++y) {
    for (int x = 0; x < 33; ++x) constant.at(x, y) = 1234.5f;
  }
  const PatchResult flat = restore(constant, 3.0, {}, 1);
  check_finite(flat.moments);
  for (int y = 0; y < 20; ++y) {
    for (int x = 0; x < 33; ++x) REQUIRE(std::abs(flat.moments.mean.at(x, y) - 1234.5f) < 1.5f);
  }
  for (const int patch : {4, 6, 8}) {
    PatchSettings s;
    s.patch = patch;
    const Volume<float> value = noisy(scene(16, 16), 10.0);
    check_finite(restore(value, 10.0, s, 1).moments);
  }
}

TEST_CASE("noise far below or above the contrast does no harm") {
  const Volume<float> clean = scene(40, 32);
  for (const double sd : {0.01, 1000.0}) {
    const Volume<float> value = noisy(clean, sd);
    const PatchResult r = restore(value, sd, light(6), 1);
    check_finite(r.moments);
    CAPTURE(sd);
    // Never worse than the data themselves.
    CHECK(mean_square(r.moments.mean, clean) < 1.1 * sd * sd);
  }
}

TEST_CASE("the units of an image do not matter") {
  // Scaling by a power of two is exact in floating point, so every result scales exactly.
  const Volume<float> value = noisy(scene(30, 24), 10.0);
  Volume<float> scaled(value.extent());
  for (int y = 0; y < 24; ++y) {
    for (int x = 0; x < 30; ++x) scaled.at(x, y) = value.at(x, y) / 256.0f;
  }
  const PatchResult a = restore(value, 10.0, light(6), 1);
  const PatchResult b = restore(scaled, 10.0 / 256.0, light(6), 1);
  for (int y = 0; y < 24; ++y) {
    for (int x = 0; x < 30; ++x) {
      REQUIRE(a.moments.mean.at(x, y) == 256.0f * b.moments.mean.at(x, y));
    }
  }
}

TEST_CASE("observed values may be redrawn before each step") {
  Volume<float> value = noisy(scene(30, 24), 10.0);
  CountingRedraw redraw;
  restore_patches(value, 10.0, light(6), kSceneKey, Pool(1), &redraw, nullptr, nullptr);
  CHECK(redraw.calls == 3 + 1);
  CHECK(std::abs(redraw.last - 100.0f) < 40.0f);
}

TEST_CASE("draws spread about the mean as the variance says") {
  // 40 draws: the mean square of (draw - mean) / sd over 30 * 24 pixels is 1 up to the few
  // thousand independent numbers behind it.
  PatchSettings s = light(6);
  s.samples = 40;
  const Volume<float> value = noisy(scene(30, 24), 10.0);
  const PatchResult r = restore(value, 10.0, s, 1);
  REQUIRE(r.draws.size() == 40);
  double sum = 0.0;
  for (const Volume<float>& draw : r.draws) {
    for (int y = 0; y < 24; ++y) {
      for (int x = 0; x < 30; ++x) {
        const double off = double{draw.at(x, y)} - double{r.moments.mean.at(x, y)};
        sum += off * off / double{r.moments.variance.at(x, y)};
      }
    }
  }
  CHECK(sum / (40.0 * 30.0 * 24.0) == Approx(1.0).margin(0.1));
  CHECK_FALSE(same_bytes(r.draws[0], r.draws[1]));
}

TEST_CASE("a mixture learned elsewhere is used, and stopping is heard") {
  const Volume<float> value = noisy(scene(30, 24), 10.0);
  const PatchPlane plane{&value, 10.0};
  PatchSettings quick = light(6);
  quick.quick = true;
  const PatchMixture mixture = learn_patch_mixture({&plane, 1}, quick, kSceneKey, Pool(1));
  PatchSettings s = light(8);
  s.quick = true;
  const PatchResult r =
      restore_patches(value, 10.0, s, kSceneKey, Pool(1), nullptr, &mixture, nullptr);
  REQUIRE(r.shares.size() == 1);
  CHECK(r.shares.front().side == 6);
  CHECK(same_bytes(r.moments.mean, restore(value, 10.0, quick, 1).moments.mean));
  int last = -1;
  const auto stop_at_three = [&last](int step, int steps) {
    CHECK(step == last + 1);
    CHECK(steps == 1 + 3 + 1);
    last = step;
    return step == 3;
  };
  CHECK_THROWS_AS(
      restore_patches(value, 10.0, quick, kSceneKey, Pool(1), nullptr, nullptr, stop_at_three),
      Error);
  CHECK(last == 3);
}
