// Mean squared differences of images whose differences are known, and what gaps get.
#include "model/variogram.h"

#include <catch2/catch.hpp>

#include "random/stream.h"

using namespace stillfield;

namespace {

Volume<std::uint8_t> all_usable(Extent e) {
  Volume<std::uint8_t> usable(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) usable.at(x, y) = 1;
  }
  return usable;
}

}  // namespace

TEST_CASE("a ramp differs by the distance, independent pixels by twice their variance") {
  const Extent e{60, 50};
  Volume<float> ramp(e), noise(e);
  RandomStream random(chain_key(1, 0), Purpose::kSimulation);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      ramp.at(x, y) = static_cast<float>(3 * (x + y));
      noise.at(x, y) = static_cast<float>(5 * random.normal());
    }
  }
  const auto usable = all_usable(e);
  const auto d = mean_squared_differences(ramp.view(), usable.view());
  REQUIRE(d.size() == kVariogramReach);
  CHECK(d[0] == Approx(9));
  CHECK(d[6] == Approx(9 * 49));
  // 2 * 25; the sample of about 6000 pairs has a standard error of 3 %: 5 of them, one in 10^6.
  CHECK(mean_squared_differences(noise.view(), usable.view())[2] == Approx(50).epsilon(0.15));
}

TEST_CASE("only unusable pixels get a variance, growing with the distance to usable ones") {
  const Extent e{40, 40};
  Volume<float> ramp(e), variance(e);
  auto usable = all_usable(e);
  for (int y = 0; y < e.height; ++y) {
    for (int x = 0; x < e.width; ++x) {
      ramp.at(x, y) = static_cast<float>(x);
      variance.at(x, y) = 1;
      if (x >= 10 && x < 15 && y >= 10 && y < 15) usable.at(x, y) = 0;
    }
  }
  add_gap_variance(ramp.view(), usable.view(), variance.view());
  CHECK(variance.at(9, 12) == 1);
  // D(h) of this ramp is h^2 across and 0 down, with nearly as many pairs each.
  CHECK(variance.at(10, 12) == Approx(1 + 0.25).epsilon(0.02));
  CHECK(variance.at(11, 12) == Approx(1 + 1.0).epsilon(0.02));
  CHECK(variance.at(12, 12) == Approx(1 + 2.25).epsilon(0.02));
}

TEST_CASE("an image without usable pixels gets no variance and no crash") {
  Volume<float> image({8, 8}), variance({8, 8});
  add_gap_variance(image.view(), Volume<std::uint8_t>({8, 8}).view(), variance.view());
  CHECK(variance.at(3, 3) == 0);
}
