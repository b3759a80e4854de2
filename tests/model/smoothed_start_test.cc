#include "model/smoothed_start.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "random/stream.h"

using namespace stillfield;

namespace {

// Left half at 0, right half at 1, normal noise; missing pixels where `hole` says so.
Volume<float> two_halves(double sigma, double missing) {
  Volume<float> image({120, 80});
  RandomStream random(chain_key(4, 0), Purpose::kSimulation);
  for (int y = 0; y < 80; ++y) {
    for (int x = 0; x < 120; ++x) {
      image.at(x, y) = static_cast<float>((x >= 60) + sigma * random.normal());
      if (random.uniform() < missing) image.at(x, y) = std::numeric_limits<float>::quiet_NaN();
    }
  }
  return image;
}

double share_right(const LabelStart& start) {
  int right = 0;
  for (int y = 0; y < 80; ++y) {
    for (int x = 0; x < 120; ++x) right += start.labels.at(x, y) == (x >= 60);
  }
  return right / (120.0 * 80.0);
}

}  // namespace

TEST_CASE("averages tell classes apart that single pixels cannot") {
  const Volume<float> image = two_halves(1.0, 0.0);
  const GreyLevels grey = make_grey_levels(image.view());
  const LabelStart pixels = smoothed_start(grey, 2, 0, false);
  const LabelStart averages = smoothed_start(grey, 2, 2, false);
  CHECK(share_right(averages) > 0.95);
  CHECK(share_right(averages) > share_right(pixels) + 0.1);
  // Means and deviations are those of the original pixels under the labels.
  CHECK(averages.classes.mean[0] == Approx(0.0).margin(0.1));
  CHECK(averages.classes.mean[1] == Approx(1.0).margin(0.1));
  CHECK(averages.classes.sd[0] == Approx(1.0).margin(0.1));
  CHECK(averages.classes.sd[1] == Approx(1.0).margin(0.1));
}

TEST_CASE("a start without averaging gives single pixels the class of their own grey value") {
  const GreyLevels grey = make_grey_levels(two_halves(0.1, 0.0).view());
  CHECK(share_right(smoothed_start(grey, 2, 0, false)) == 1.0);
}

TEST_CASE("missing pixels neither enter averages nor go without a label") {
  const GreyLevels grey = make_grey_levels(two_halves(0.3, 0.5).view());
  const LabelStart start = smoothed_start(grey, 2, 1, false);
  CHECK(share_right(start) > 0.95);
  CHECK(start.classes.mean[1] - start.classes.mean[0] == Approx(1.0).margin(0.05));
}

TEST_CASE("one shared deviation when asked for") {
  const GreyLevels grey = make_grey_levels(two_halves(0.3, 0.0).view());
  const LabelStart start = smoothed_start(grey, 2, 1, true);
  CHECK(start.classes.sd[0] == start.classes.sd[1]);
  CHECK(start.classes.shared_variance);
}

TEST_CASE("images smaller than the square are averaged as far as they go") {
  Volume<float> image({2, 1});
  image.at(1, 0) = 1.0f;
  const LabelStart start = smoothed_start(make_grey_levels(image.view()), 2, 0, false);
  CHECK(start.labels.at(0, 0) == 0);
  CHECK(start.labels.at(1, 0) == 1);
}

TEST_CASE("two pixels of two grey levels start as two classes at any radius") {
  Volume<float> pixels({2, 1});
  pixels.at(0, 0) = 10.0F;
  pixels.at(1, 0) = 20.0F;
  const GreyLevels grey = make_grey_levels(pixels.view());
  for (const int radius : {0, 1, 2}) {
    const LabelStart start = smoothed_start(grey, 2, radius, false);
    CHECK(start.labels.at(0, 0) == 0);
    CHECK(start.labels.at(1, 0) == 1);
  }
}
