#include "sampler/intensity_layout.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "sampler/intensity_moments.h"

using namespace stillfield;

namespace {

struct Case {
  Extent extent;
  Connectivity connectivity;
};

const std::vector<Case> kCases = {
    {{1, 1, 1}, Connectivity::kFour},  {{7, 5, 1}, Connectivity::kFour},
    {{8, 6, 1}, Connectivity::kEight}, {{33, 9, 1}, Connectivity::kEight},
    {{7, 5, 3}, Connectivity::kSix},   {{6, 7, 4}, Connectivity::kTwentySix},
    {{1, 9, 2}, Connectivity::kSix},   {{1, 1, 5}, Connectivity::kTwentySix}};

}  // namespace

TEST_CASE("intensity planes hold every pixel once and lead back to the image") {
  for (const Case& c : kCases) {
    CAPTURE(c.extent.width, c.extent.height, c.extent.depth);
    const IntensityLayout layout(c.extent, make_neighbourhood(c.connectivity));
    Volume<float> image(c.extent), back(c.extent);
    float next = 1.0f;
    layout.for_each_pixel([&](std::size_t, int x, int y, int z) { image.at(x, y, z) = next++; });
    CHECK(next == static_cast<float>(c.extent.sites() + 1));
    AlignedBuffer<float> plane(layout.elements());
    layout.scatter(image.view(), plane);
    layout.gather(plane, back.view());
    int wrong = 0, filled = 0;
    layout.for_each_pixel(
        [&](std::size_t, int x, int y, int z) { wrong += back.at(x, y, z) != image.at(x, y, z); });
    for (const float v : plane) filled += v != 0.0f;
    CHECK(wrong == 0);
    CHECK(filled == c.extent.sites());
  }
}

TEST_CASE("bands lead from each pixel to its neighbours and count every pair once") {
  for (const Case& c : kCases) {
    CAPTURE(c.extent.width, c.extent.height, c.extent.depth);
    const Neighbourhood neighbourhood = make_neighbourhood(c.connectivity);
    const IntensityLayout layout(c.extent, neighbourhood);
    const Colouring& colouring = layout.colouring();
    // Position of each pixel in the planes, the other way round.
    std::vector<int> pixel_at(layout.elements(), -1);
    const auto number = [&](int x, int y, int z) {
      return (z * c.extent.height + y) * c.extent.width + x;
    };
    layout.for_each_pixel(
        [&](std::size_t at, int x, int y, int z) { pixel_at[at] = number(x, y, z); });
    int wrong = 0;
    std::int64_t pairs = 0;
    for (int colour = 0; colour < colouring.colours(); ++colour) {
      for (int slice = 0; slice < colouring.slices(colour); ++slice) {
        const IntensityBand band = layout.band(colour, slice);
        for (int row = 0; row < colouring.rows(colour); ++row) {
          const auto parity = static_cast<std::size_t>(row & 1);
          for (int j = 0; j < colouring.sites(colour, slice, row); ++j) {
            const int x = colouring.first_x(colour, slice, row) + 2 * j;
            const int y = colouring.y_of(colour, row), z = colouring.z_of(colour, slice);
            std::size_t t = 0;
            for (const NeighbourRing& ring : neighbourhood.rings) {
              for (const Displacement& d : ring.neighbours) {
                const IntensityNeighbour& n = band.neighbour[t++];
                const int u = x + d.x, v = y + d.y, w = z + d.z;
                const bool inside = u >= 0 && u < c.extent.width && v >= 0 && v < c.extent.height &&
                                    w >= 0 && w < c.extent.depth;
                const bool said = j >= n.begin[parity] && j < n.end[parity] && row >= n.first_row &&
                                  row < n.last_row;
                const auto at = static_cast<std::ptrdiff_t>(layout.element(colour, slice, row)) +
                                j + n.offset[parity];
                wrong += said != inside;
                wrong += pixel_at[static_cast<std::size_t>(at)] != (inside ? number(u, v, w) : -1);
                pairs += inside && n.forward;
              }
            }
          }
        }
      }
    }
    CHECK(wrong == 0);
    CHECK(pairs == layout.pairs());
  }
}

TEST_CASE("moments of batches are those of all draws together") {
  const IntensityLayout layout({2, 1, 1}, make_neighbourhood(Connectivity::kFour));
  Volume<float> value({2, 1}), variance({2, 1});
  value.at(0, 0) = 10.0f;
  value.at(1, 0) = 20.0f;
  variance.at(0, 0) = variance.at(1, 0) = 1.0f;
  const ObservedIntensity observed =
      observe_intensity(layout, value.view(), variance.view());  // centre 15
  IntensityTotals totals(observed, observed.value, 2);
  // Draws of pixel 0 less its shift: two batches of two for each of two chains.
  const double draws[2][2][2] = {{{1.0, 2.0}, {4.0, 3.0}}, {{-1.0, 0.0}, {2.0, 5.0}}};
  const std::size_t at = layout.element(0, 0, 0);
  for (int c = 0; c < 2; ++c) {
    IntensityChain chain;
    chain.sum = AlignedBuffer<float>(layout.elements());
    chain.square = AlignedBuffer<float>(layout.elements());
    for (const auto& batch : draws[c]) {
      for (const double d : batch) {
        chain.sum[at] += static_cast<float>(d);
        chain.square[at] += static_cast<float>(d * d);
        ++chain.pending;
      }
      totals.take(c, chain);
      CHECK(chain.pending == 0);
    }
  }
  // Mean 2, sum of squared deviations 1+0+4+1+9+4+0+9 = 28 over 8 - 1.
  const IntensityMoments m = totals.moments();
  CHECK(m.mean.at(0, 0) == Approx(12.0));
  CHECK(m.variance.at(0, 0) == Approx(4.0));
  // Chain means 2.5 and 1.5, batch means 1.5, 3.5 and -0.5, 3.5: B = 4 and 16, MCSE^2 of the chains
  // 1 and 4, together 5/4; W = (5/4 + 21/4) / 2 = 13/4; pixel 1 never moves.
  const IntensityQuality q = totals.quality();
  CHECK(q.relative_mcse == Approx(std::sqrt(1.25 / 3.25 / 2.0)));
  // R-hat^2 = 1 + 0.5 / 3.25.
  CHECK(q.worst_share == Approx(0.5));
}
