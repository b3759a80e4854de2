#include "simd/patch_distance.h"

#include <catch2/catch.hpp>
#include <cstring>
#include <vector>

#include "random/stream.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("patch distances are sums of squared differences, with the same bytes on every target") {
  constexpr std::ptrdiff_t kStride = 80;
  std::vector<float> image(kStride * 20);
  RandomStream random({31, 7}, Purpose::kSimulation);
  for (float& v : image) v = static_cast<float>(10.0 * random.normal());
  for (const int side : {4, 6, 8}) {
    const float* reference = image.data() + 3 * kStride + 5;
    const float* first = image.data() + 7 * kStride + 11;
    std::vector<float> best(kDistanceRun);
    patch_distances(side, reference, first, kStride, best.data());
    for (int x = 0; x < kDistanceRun; ++x) {
      double expected = 0.0;
      for (int i = 0; i < side * side; ++i) {
        const std::ptrdiff_t at = i / side * kStride + i % side;
        const double off = double{first[x + at]} - double{reference[at]};
        expected += off * off;
      }
      CHECK(double{best[static_cast<std::size_t>(x)]} == Approx(expected).epsilon(1e-5));
    }
    for_each_target([&](const std::string& name) {
      CAPTURE(side, name);
      std::vector<float> out(kDistanceRun);
      patch_distances(side, reference, first, kStride, out.data());
      CHECK(std::memcmp(out.data(), best.data(), kDistanceRun * sizeof(float)) == 0);
    });
  }
}
