// Images made small for searches: levels, tiles, seams.
#include "model/search_image.h"

#include <catch2/catch.hpp>
#include <limits>
#include <numeric>

using namespace stillfield;

TEST_CASE("an image that is small already keeps its levels and pixels") {
  Volume<float> image({5, 3});
  for (int x = 0; x < 5; ++x) image.at(x, 1) = static_cast<float>(100 + x);
  image.at(2, 2) = std::numeric_limits<float>::quiet_NaN();
  const GreyLevels grey = make_grey_levels(image.view()), small = make_search_image(grey);
  CHECK(small.levels == grey.levels);
  CHECK(small.origin == grey.origin);
  CHECK(small.histogram == grey.histogram);
  CHECK(small.observed == 14);
  for (int y = 0; y < 3; ++y) {
    for (int x = 0; x < 5; ++x) CHECK(small.level.at(x, y) == grey.level.at(x, y));
  }
}

TEST_CASE("many levels become few, and every pixel keeps its value but for rounding") {
  Volume<float> image({100, 100});
  for (int i = 0; i < 10000; ++i) image.at(i % 100, i / 100) = 0.001f * static_cast<float>(i);
  const GreyLevels grey = make_grey_levels(image.view()), small = make_search_image(grey);
  CHECK(small.levels == kSearchLevels);
  CHECK(std::accumulate(small.histogram.begin(), small.histogram.end(), std::int64_t{0}) == 10000);
  for (int i = 0; i < 10000; i += 37) {
    CHECK(small.value(small.level.at(i % 100, i / 100)) ==
          Approx(0.001 * i).margin(0.5001 * small.step + grey.step));
  }
}

TEST_CASE("a few far values do not coarsen the others") {
  Volume<float> image({200, 100});
  for (int i = 0; i < 20000; ++i) image.at(i % 200, i / 200) = static_cast<float>(i % 2000);
  image.at(7, 7) = 60000.0f;
  const GreyLevels small = make_search_image(make_grey_levels(image.view()));
  CHECK(small.step < 2.0 * 2000 / kSearchLevels * 1.01);
  CHECK(small.level.at(7, 7) == kSearchLevels - 1);
}

TEST_CASE("a large image becomes tiles from all over it, with missing pixels at the seams") {
  const int width = 3000, height = 500;
  Volume<float> image({width, height});
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) image.at(x, y) = static_cast<float>(x / 12);
  }
  const GreyLevels small = make_search_image(make_grey_levels(image.view()));
  CHECK(small.level.width() == kSearchTiles * kSearchTile + kSearchTiles - 1);
  CHECK(small.level.height() == height);
  CHECK(small.level.at(kSearchTile, 3) == small.missing());
  CHECK(small.value(small.level.at(0, 3)) == 0.0);
  CHECK(small.value(small.level.at(small.level.width() - 1, 3)) == (width - 1) / 12);
  CHECK(small.observed == std::int64_t{kSearchTiles * kSearchTile} * height);
}
