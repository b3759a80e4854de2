// Missing pixels take the mean of the nearest usable block; usable pixels never change.
#include "model/fill_missing.h"

#include <catch2/catch.hpp>

using namespace stillfield;

TEST_CASE("a missing pixel takes the mean of its 2 x 2 square, else of the next larger one") {
  Volume<float> image({4, 4});
  Volume<std::uint8_t> usable({4, 4});
  for (int y = 0; y < 4; ++y) {
    for (int x = 0; x < 4; ++x) {
      image.at(x, y) = static_cast<float>(10 * y + x);
      usable.at(x, y) = x < 2 || y < 2 ? 1 : 0;  // the lower right square is missing
    }
  }
  usable.at(0, 0) = 0;
  fill_missing(usable.view(), image.view());
  CHECK(image.at(0, 0) == Approx((1 + 10 + 11) / 3.0));
  CHECK(image.at(1, 0) == 1);
  // 3 + 4 + 4 usable pixels: means of the squares weighted by their counts.
  const double all = (1 + 10 + 11) + (2 + 3 + 12 + 13) + (20 + 21 + 30 + 31);
  CHECK(image.at(3, 3) == Approx(all / 11));
  CHECK(image.at(2, 2) == Approx(all / 11));
}

TEST_CASE("an image without usable pixels stays as it is") {
  Volume<float> image({5, 3});
  image.at(4, 2) = 7;
  fill_missing(Volume<std::uint8_t>({5, 3}).view(), image.view());
  CHECK(image.at(4, 2) == 7);
  CHECK(image.at(0, 0) == 0);
}
