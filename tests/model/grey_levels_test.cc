#include "model/grey_levels.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <numeric>

#include "core/error.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr float kNaN = std::numeric_limits<float>::quiet_NaN();
constexpr float kInfinity = std::numeric_limits<float>::infinity();

GreyLevels levels_of(const std::vector<float>& pixels, int width = 0) {
  const int n = static_cast<int>(pixels.size());
  const int w = width > 0 ? width : n;
  Volume<float> image({w, n / w});
  for (int i = 0; i < n; ++i) image.at(i % w, i / w) = pixels[static_cast<std::size_t>(i)];
  return make_grey_levels(image.view());
}

// Largest distance of a pixel from the value of its level.
double worst_error(const GreyLevels& g, const std::vector<float>& pixels) {
  double worst = 0.0;
  for (std::size_t i = 0; i < pixels.size(); ++i) {
    const int l = g.level.at(static_cast<int>(i), 0);
    if (std::isfinite(pixels[i])) worst = std::max(worst, std::fabs(g.value(l) - pixels[i]));
  }
  return worst;
}

}  // namespace

TEST_CASE("8-bit images keep every grey value") {
  std::vector<float> pixels;
  for (int v = 255; v >= 0; --v) pixels.push_back(static_cast<float>(v));
  const GreyLevels g = levels_of(pixels, 16);
  CHECK(g.levels == 256);
  CHECK(g.origin == 0.0);
  CHECK(g.step == 1.0);
  CHECK(g.observed == 256);
  CHECK(g.distinct() == 256);
  CHECK(g.notes.empty());
  CHECK(g.level.at(0, 0) == 255);
  CHECK(g.level.at(15, 15) == 0);
  CHECK(std::accumulate(g.histogram.begin(), g.histogram.end(), std::int64_t{0}) == 256);
}

TEST_CASE("integers start at their smallest value, negative or not") {
  const GreyLevels g = levels_of({-7.0f, 3.0f, -2.0f});
  CHECK(g.origin == -7.0);
  CHECK(g.levels == 11);
  CHECK(g.value(g.level.at(1, 0)) == 3.0);
  CHECK(g.distinct() == 3);
}

TEST_CASE("16-bit images of the full range keep every value but the brightest") {
  std::vector<float> pixels(65536);
  std::iota(pixels.begin(), pixels.end(), 0.0f);
  const GreyLevels g = levels_of(pixels);
  CHECK(g.levels == 65535);
  CHECK(g.step == 1.0);
  CHECK(g.notes.size() == 1);
  bool exact = true;
  for (int v = 0; v < 65535; ++v) exact = exact && g.level.at(v, 0) == v;
  CHECK(exact);
  CHECK(g.level.at(65535, 0) == 65534);
  CHECK(g.histogram[65534] == 2);
  CHECK(g.missing() == 65535);
}

TEST_CASE("16-bit images below the full range keep every value, with room for missing pixels") {
  std::vector<float> pixels = {1.0f, 65535.0f, kNaN};
  const GreyLevels g = levels_of(pixels);
  CHECK(g.levels == 65535);
  CHECK(worst_error(g, pixels) == 0.0);
  CHECK(g.level.at(2, 0) == g.missing());
  CHECK(g.notes.size() == 1);  // the missing pixel only
}

TEST_CASE("real numbers are rounded to the nearest of 65535 levels") {
  std::vector<float> pixels;
  RandomStream random(chain_key(1, 0), Purpose::kSimulation);
  for (int i = 0; i < 5000; ++i)
    pixels.push_back(static_cast<float>(0.25 + 3.0 * random.uniform()));
  const GreyLevels g = levels_of(pixels);
  CHECK(g.levels == 65535);
  CHECK(worst_error(g, pixels) <= g.step * (0.5 + 1e-6));
  CHECK(g.step == Approx(3.0 / 65534).epsilon(0.01));
  CHECK(g.notes.size() == 1);
}

TEST_CASE("integers of a wider range than 65535 are rounded, too") {
  std::vector<float> pixels;
  for (int i = 0; i <= 1000; ++i) pixels.push_back(static_cast<float>(i * 1000));
  const GreyLevels g = levels_of(pixels);
  CHECK(g.levels == 65535);
  CHECK(worst_error(g, pixels) <= 0.5 * g.step);
  CHECK(g.distinct() == 1001);
}

TEST_CASE("missing and infinite pixels get the level no grey value has") {
  const GreyLevels g = levels_of({1.0f, kNaN, 4.0f, kInfinity, -kInfinity, 2.0f});
  CHECK(g.levels == 4);
  CHECK(g.observed == 3);
  for (const int x : {1, 3, 4}) CHECK(g.level.at(x, 0) == g.missing());
  REQUIRE(g.notes.size() == 1);
  CHECK(g.notes[0].find("3 missing pixels") == 0);
}

TEST_CASE("an image without any value is refused with a sentence") {
  CHECK_THROWS_AS(levels_of({kNaN, kInfinity, kNaN}), Error);
}

TEST_CASE("a constant image has one level") {
  const GreyLevels integers = levels_of({17.0f, 17.0f});
  CHECK(integers.levels == 1);
  CHECK(integers.value(0) == 17.0);
  const GreyLevels reals = levels_of({0.3f, 0.3f, 0.3f});
  CHECK(reals.levels == 1);
  CHECK(reals.distinct() == 1);
  CHECK(reals.value(reals.level.at(2, 0)) == Approx(0.3f));
}

TEST_CASE("a few far outliers are clipped and do not coarsen the levels") {
  std::vector<float> pixels;
  RandomStream random(chain_key(2, 0), Purpose::kSimulation);
  for (int i = 0; i < 20000; ++i) pixels.push_back(static_cast<float>(random.uniform()));
  pixels[77] = 1e30f;
  pixels[99] = -1e30f;
  const GreyLevels g = levels_of(pixels);
  CHECK(g.step < 1e-3);
  CHECK(g.level.at(77, 0) == g.levels - 1);
  CHECK(g.level.at(99, 0) == 0);
  CHECK(g.notes.size() == 2);  // clipped, and rounded
  CHECK(std::fabs(g.value(g.level.at(1000, 0)) - pixels[1000]) <= g.step);
  CHECK(g.value(g.levels - 1) == Approx(26.0).margin(0.1));  // 0.999 + 25 spans
}

TEST_CASE("pages of a volume share one scale") {
  Volume<float> image({2, 1, 2});
  image.at(0, 0, 0) = 5.0f;
  image.at(1, 0, 0) = 6.0f;
  image.at(0, 0, 1) = 9.0f;
  image.at(1, 0, 1) = 5.0f;
  const GreyLevels g = make_grey_levels(image.view());
  CHECK(g.level.at(0, 0, 0) == 0);
  CHECK(g.level.at(0, 0, 1) == 4);
  CHECK(g.level.at(1, 0, 1) == 0);
}
