// The kernels of intensity fields against the slow twin: the same bytes, on every CPU target and
// for any number of threads.
#include "simd/intensity_rows.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <limits>
#include <utility>
#include <vector>

#include "random/stream.h"
#include "reference/intensity_field.h"
#include "sampler/intensity_chain.h"
#include "simd/forced_target.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

struct Problem {
  Extent extent;
  Connectivity connectivity;
  IntensityPrior prior;
  double spacing_z = 1.0;
  double strength = 0.02;
  bool uneven = false;  // missing pixels and unequal variances
  Offset offset{};
};

struct Image {
  Volume<float> value, variance, start;
};

Image make_image(const Problem& p) {
  Image image{Volume<float>(p.extent), Volume<float>(p.extent), Volume<float>(p.extent)};
  RandomStream random({5, static_cast<std::uint32_t>(p.extent.width)}, Purpose::kSimulation);
  for (int z = 0; z < p.extent.depth; ++z) {
    for (int y = 0; y < p.extent.height; ++y) {
      for (int x = 0; x < p.extent.width; ++x) {
        image.value.at(x, y, z) = static_cast<float>(100.0 + 30.0 * random.normal());
        image.start.at(x, y, z) = static_cast<float>(100.0 + 50.0 * random.normal());
        float& v = image.variance.at(x, y, z);
        v = 400.0f;
        if (!p.uneven || (y % 3 == 1 && p.extent.height > 3)) continue;
        v = random.uniform() < 0.2 ? std::numeric_limits<float>::infinity()
                                   : static_cast<float>(100.0 + 500.0 * random.uniform());
      }
    }
  }
  image.variance.at(0, 0, 0) = 400.0f;  // at least one pixel is observed
  return image;
}

reference::IntensityField make_twin(const Problem& p, const Image& image,
                                    const IntensityLayout& layout,
                                    const ObservedIntensity& observed,
                                    const IntensityChain& chain) {
  reference::IntensityField twin;
  twin.extent = p.extent;
  twin.offset = p.offset;
  twin.neighbourhood = layout.colouring().neighbourhood();
  twin.key = chain.key;
  twin.strength = static_cast<float>(chain.strength);
  twin.noise_precision = static_cast<float>(1.0 / chain.noise_variance);
  const auto n = static_cast<std::size_t>(p.extent.sites());
  twin.x.resize(n);
  twin.value.resize(n);
  twin.precision.resize(n);
  layout.for_each_pixel([&](std::size_t, int x, int y, int z) {
    const std::size_t s = twin.at(x, y, z);
    const float v = image.variance.at(x, y, z);
    twin.x[s] = static_cast<float>(image.start.at(x, y, z) - observed.centre);
    twin.precision[s] = std::isinf(v) ? 0.0f : 1.0f / v;
    twin.value[s] =
        std::isinf(v) ? 0.0f : static_cast<float>(image.value.at(x, y, z) - observed.centre);
  });
  twin.shift = twin.value;
  twin.sum.resize(n);
  twin.square.resize(n);
  return twin;
}

// Pixels whose bits differ.
int differences(const IntensityLayout& layout, const AlignedBuffer<float>& plane,
                const reference::IntensityField& twin, const std::vector<float>& expected) {
  int n = 0;
  layout.for_each_pixel([&](std::size_t at, int x, int y, int z) {
    n += std::memcmp(&plane[at], &expected[twin.at(x, y, z)], sizeof(float)) != 0;
  });
  return n;
}

void check_against_twin(const Problem& p, int threads = 1) {
  INFO("size " << p.extent.width << " x " << p.extent.height << " x " << p.extent.depth
               << ", neighbours " << static_cast<int>(p.connectivity) << ", prior "
               << static_cast<int>(p.prior) << ", uneven " << p.uneven);
  constexpr std::uint32_t kSweeps = 3;
  const Image image = make_image(p);
  const IntensityLayout layout(p.extent, make_neighbourhood(p.connectivity, p.spacing_z), p.offset);
  const ObservedIntensity observed =
      observe_intensity(layout, image.value.view(), image.variance.view());
  const auto make_chain = [&] {
    return start_intensity_chain(observed, p.prior, {77, 99}, image.start.view(), p.strength, 1.3);
  };
  reference::IntensityField twin = make_twin(p, image, layout, observed, make_chain());
  for (std::uint32_t s = 0; s < kSweeps; ++s) {
    if (p.prior == IntensityPrior::kSmooth) {
      sweep_smooth(twin, s);
    } else {
      sweep_edges(twin, s);
    }
  }
  const reference::FieldSums sums = sum_field(twin);
  const double expected_differences =
      p.prior == IntensityPrior::kSmooth ? sums.squared_differences : sums.absolute_differences;
  const Pool pool(threads);
  std::vector<std::pair<double, double>> by_target;
  for_each_target([&](const std::string& target) {
    for (const bool moments : {false, true}) {
      INFO("target " << target << ", moments " << moments);
      IntensityChain chain = make_chain();
      if (moments) {
        chain.sum = AlignedBuffer<float>(layout.elements());
        chain.square = AlignedBuffer<float>(layout.elements());
      }
      for (std::uint32_t s = 0; s < kSweeps; ++s) {
        sweep_intensity(observed, p.prior, observed.value, pool, chain);
      }
      REQUIRE(differences(layout, chain.field, twin, twin.x) == 0);
      if (moments) {
        REQUIRE(chain.pending == kSweeps);
        REQUIRE(differences(layout, chain.sum, twin, twin.sum) == 0);
        REQUIRE(differences(layout, chain.square, twin, twin.square) == 0);
      } else {
        by_target.emplace_back(sum_differences(observed, p.prior, pool, chain),
                               sum_residuals(observed, p.prior, pool, chain));
      }
    }
  });
  for (const auto& [d, r] : by_target) {
    // Sums of n floats: relative error below n 2^-24 / 16, here < 1e-5.
    CHECK(d == Approx(expected_differences).epsilon(1e-5));
    CHECK(r == Approx(sums.squared_residuals).epsilon(1e-5));
    CHECK(d == by_target.front().first);
    CHECK(r == by_target.front().second);
  }
}

const std::vector<Extent> kPlanes = {{1, 1, 1},  {1, 9, 1},  {9, 1, 1},  {2, 2, 1},  {3, 5, 1},
                                     {31, 4, 1}, {32, 5, 1}, {33, 5, 1}, {65, 6, 1}, {130, 7, 1}};
const std::vector<Extent> kVolumes = {{1, 1, 1}, {2, 2, 2}, {3, 1, 7},
                                      {1, 6, 2}, {5, 4, 3}, {35, 5, 4}};

}  // namespace

TEST_CASE("kernels of intensity fields equal the slow twin in planes") {
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
      for (const bool uneven : {false, true}) {
        for (const Extent& e : kPlanes) {
          check_against_twin({e, connectivity, prior, 1.0, 0.02, uneven});
        }
      }
    }
  }
}

TEST_CASE("kernels of intensity fields equal the slow twin in volumes") {
  for (const Connectivity connectivity : {Connectivity::kSix, Connectivity::kTwentySix}) {
    for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
      for (const double spacing : {1.0, 2.5, 0.4}) {
        for (const Extent& e : kVolumes) {
          check_against_twin({e, connectivity, prior, spacing, 0.02, true});
        }
      }
    }
  }
}

TEST_CASE("kernels of intensity fields equal the slow twin on rows of several strips") {
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    for (const int width : {1024, 1060, 2100}) {
      check_against_twin({{width, 4, 1}, Connectivity::kFour, prior, 1.0, 0.02, width == 1060});
      check_against_twin({{width, 4, 1}, Connectivity::kEight, prior, 1.0, 0.02, true});
    }
  }
}

TEST_CASE("kernels of intensity fields equal the slow twin with extreme strengths") {
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    for (const double strength : {1e-8, 1e-3, 10.0, 1e4}) {
      check_against_twin({{37, 11, 1}, Connectivity::kFour, prior, 1.0, strength, true});
    }
  }
}

TEST_CASE("a tile of an intensity field draws the random numbers of its place") {
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
      Problem p{{37, 10, 1}, connectivity, prior};
      p.offset = {1236, 64, 0};
      check_against_twin(p);
    }
  }
}

TEST_CASE("intensity fields have the same bytes for any number of threads") {
  // 260 x 190 pixels make three tasks a colour.
  for (const IntensityPrior prior : {IntensityPrior::kSmooth, IntensityPrior::kEdges}) {
    for (const int threads : {2, 4}) {
      check_against_twin({{260, 190, 1}, Connectivity::kFour, prior, 1.0, 0.02, true}, threads);
    }
  }
  check_against_twin({{90, 70, 5}, Connectivity::kSix, IntensityPrior::kSmooth, 1.0, 0.02, true},
                     4);
}
