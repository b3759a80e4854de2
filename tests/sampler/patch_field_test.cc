#include "sampler/patch_field.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <vector>

#include "core/error.h"
#include "random/stream.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

constexpr PhiloxKey kKey{111, 112};

// A disk and stripes, between 40 and 200.
Volume<float> scene(int width, int height) {
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

Volume<float> noisy(const Volume<float>& clean, double sd) {
  Volume<float> v(clean.extent());
  RandomStream random({113, 1}, Purpose::kSimulation);
  for (int y = 0; y < v.height(); ++y) {
    for (int x = 0; x < v.width(); ++x) {
      v.at(x, y) = static_cast<float>(double{clean.at(x, y)} + sd * random.normal());
    }
  }
  return v;
}

bool same_bytes(const Volume<float>& a, const Volume<float>& b) {
  for (int y = 0; y < a.height(); ++y) {
    const auto bytes = static_cast<std::size_t>(a.width()) * sizeof(float);
    if (std::memcmp(a.row(y), b.row(y), bytes) != 0) return false;
  }
  return a.extent() == b.extent();
}

PatchSettings light(int patch) {
  PatchSettings s;
  s.patch = patch;
  s.components = 3;
  s.tiling_sweeps = 3;
  s.group_passes = 1;
  s.group_size = 12;
  s.samples = 1;
  return s;
}

PatchResult restore(const Volume<float>& value, double sd, const PatchSettings& s, int threads) {
  return restore_patches(value, sd, s, kKey, Pool(threads), nullptr, nullptr, nullptr);
}

double mean_square(const Volume<float>& a, const Volume<float>& b) {
  double sum = 0.0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) {
      const double off = double{a.at(x, y)} - double{b.at(x, y)};
      sum += off * off;
    }
  }
  return sum / static_cast<double>(a.extent().sites());
}

void check_finite(const IntensityMoments& m) {
  for (int y = 0; y < m.mean.height(); ++y) {
    for (int x = 0; x < m.mean.width(); ++x) {
      REQUIRE(std::isfinite(m.mean.at(x, y)));
      REQUIRE(std::isfinite(m.variance.at(x, y)));
      REQUIRE(m.variance.at(x, y) > 0.0f);
    }
  }
}

}  // namespace

TEST_CASE("a restored image has the same bytes for 1, 2 and 4 threads") {
  for (const int patch : {4, 6, 8}) {
    CAPTURE(patch);
    // Several tiles of reference patches in both directions, sides that are no multiples.
    const Volume<float> value = noisy(scene(patch == 4 ? 83 : 61, patch == 4 ? 77 : 41), 15.0);
    const PatchResult one = restore(value, 15.0, light(patch), 1);
    for (const int threads : {2, 4}) {
      const PatchResult more = restore(value, 15.0, light(patch), threads);
      CHECK(same_bytes(one.moments.mean, more.moments.mean));
      CHECK(same_bytes(one.moments.variance, more.moments.variance));
      CHECK(same_bytes(one.draws[0], more.draws[0]));
    }
  }
}

TEST_CASE("a restored image has the same bytes on every CPU target") {
  const Volume<float> value = noisy(scene(37, 26), 15.0);
  const PatchResult best = restore(value, 15.0, light(6), 1);
  for_each_target([&](const std::string& name) {
    CAPTURE(name);
    const PatchResult other = restore(value, 15.0, light(6), 1);
    CHECK(same_bytes(best.moments.mean, other.moments.mean));
    CHECK(same_bytes(best.moments.variance, other.moments.variance));
    CHECK(same_bytes(best.draws[0], other.draws[0]));
  });
}

TEST_CASE("most of the noise goes and the intervals cover") {
  // Bounds from the definition: the noise's own mean square is sd^2 = 400. A piecewise smooth
  // scene must lose at least three quarters of it, in the quick mode too; a nominal 90 % interval
  // must hold the truth at .8 to .99 of these 96^2 correlated errors.
  const Volume<float> clean = scene(96, 96);
  const Volume<float> value = noisy(clean, 20.0);
  for (const bool quick : {false, true}) {
    PatchSettings s;
    s.quick = quick;
    const PatchResult r = restore(value, 20.0, s, 2);
    CAPTURE(quick, r.patch, r.components);
    CHECK(mean_square(r.moments.mean, clean) < 100.0);
    double covered = 0.0;
    for (int y = 0; y < 96; ++y) {
      for (int x = 0; x < 96; ++x) {
        const double half = 1.645 * std::sqrt(double{r.moments.variance.at(x, y)});
        covered += std::abs(double{r.moments.mean.at(x, y)} - double{clean.at(x, y)}) <= half;
      }
    }
    CHECK(covered / (96.0 * 96.0) > 0.8);
    CHECK(covered / (96.0 * 96.0) < 0.995);
  }
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

namespace {

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

TEST_CASE("observed values may be redrawn before each step") {
  Volume<float> value = noisy(scene(30, 24), 10.0);
  CountingRedraw redraw;
  restore_patches(value, 10.0, light(6), kKey, Pool(1), &redraw, nullptr, nullptr);
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
  const PatchMixture mixture = learn_patch_mixture({&plane, 1}, light(6), kKey, Pool(1));
  PatchSettings s = light(8);
  const PatchResult r = restore_patches(value, 10.0, s, kKey, Pool(1), nullptr, &mixture, nullptr);
  CHECK(r.patch == 6);
  CHECK(same_bytes(r.moments.mean, restore(value, 10.0, light(6), 1).moments.mean));
  int last = -1;
  const auto stop_at_three = [&last](int step, int steps) {
    CHECK(step == last + 1);
    CHECK(steps == 1 + 3 + 1);
    last = step;
    return step == 3;
  };
  CHECK_THROWS_AS(
      restore_patches(value, 10.0, light(6), kKey, Pool(1), nullptr, nullptr, stop_at_three),
      Error);
  CHECK(last == 3);
}
