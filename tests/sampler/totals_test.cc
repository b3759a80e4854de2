// Sums and samples of a chain's labels against plain loops over pixels.
#include <catch2/catch.hpp>
#include <cmath>
#include <numeric>

#include "random/stream.h"
#include "reference/label_field.h"
#include "sampler/neighbour_sample.h"
#include "sampler/sweep.h"

using namespace stillfield;

namespace {

struct Setting {
  Extent extent;
  Connectivity connectivity;
  int classes;
};

struct Random {
  explicit Random(const Setting& s) : colouring(s.extent, make_neighbourhood(s.connectivity, 1.7)) {
    grey.level = Volume<std::uint16_t>(s.extent);
    grey.levels = 300;
    grey.histogram.assign(300, 1);
    plain.extent = s.extent;
    plain.neighbourhood = colouring.neighbourhood();
    plain.classes = s.classes;
    Volume<std::uint8_t> image(s.extent);
    RandomStream random(chain_key(3, 4), Purpose::kSimulation);
    for (int z = 0; z < s.extent.depth; ++z) {
      for (int y = 0; y < s.extent.height; ++y) {
        for (int x = 0; x < s.extent.width; ++x) {
          grey.level.at(x, y, z) = static_cast<std::uint16_t>(random.word() % 301);  // 300: missing
          image.at(x, y, z) =
              static_cast<std::uint8_t>(random.word() % static_cast<std::uint32_t>(s.classes));
          plain.level.push_back(grey.level.at(x, y, z));
          plain.label.push_back(image.at(x, y, z));
        }
      }
    }
    field = observe(colouring, grey);
    chain.model.classes.mean.assign(static_cast<std::size_t>(s.classes), 0.0);
    chain.labels = guarded_labels(colouring);
    scatter_labels(colouring, image.view(), chain.labels);
  }

  GreyLevels grey;
  Colouring colouring;
  ObservedField field;
  LabelChain chain;
  reference::LabelField plain;
};

const std::vector<Setting> kSettings = {
    {{1, 1, 1}, Connectivity::kFour, 2},      {{1, 7, 1}, Connectivity::kEight, 3},
    {{7, 1, 1}, Connectivity::kFour, 3},      {{37, 22, 1}, Connectivity::kFour, 2},
    {{150, 11, 1}, Connectivity::kEight, 4},  {{12, 9, 5}, Connectivity::kSix, 3},
    {{13, 8, 4}, Connectivity::kTwentySix, 2}};

}  // namespace

TEST_CASE("totals of a chain are the sums of plain loops") {
  for (const Setting& s : kSettings) {
    CAPTURE(s.extent.width, s.extent.height, s.extent.depth, static_cast<int>(s.connectivity));
    Random r(s);
    total_labels(r.field, Pool(1), r.chain);
    const reference::FieldTotals plain = total_field(r.plain, r.grey.missing());
    const LabelTotals& totals = r.chain.totals;
    for (std::size_t k = 0; k < static_cast<std::size_t>(s.classes); ++k) {
      CHECK(totals.classes[k].sites == plain.sites[k]);
      CHECK(totals.classes[k].observed == plain.observed[k]);
      CHECK(totals.classes[k].level_sum == plain.level_sum[k]);
      CHECK(totals.classes[k].level_square_sum == plain.level_square_sum[k]);
    }
    CHECK(totals.equal_pairs == plain.equal_pairs);
    double pairs = 0.0;
    for (std::size_t i = 0; i < plain.equal_pairs.size(); ++i) {
      pairs +=
          static_cast<double>(plain.equal_pairs[i]) * r.colouring.neighbourhood().rings[i].weight;
    }
    CHECK(totals.weighted_pairs(r.colouring.neighbourhood()) == Approx(pairs));
  }
}

TEST_CASE("a full sample of neighbours holds every pixel once, with its weighted counts") {
  for (const Setting& s : kSettings) {
    CAPTURE(s.extent.width, s.extent.height, s.extent.depth, static_cast<int>(s.connectivity));
    Random r(s);
    NeighbourCounts counts;
    sample_neighbours(r.colouring, r.chain, 1 << 20, 0.0, counts);
    REQUIRE(static_cast<std::int64_t>(counts.label.size()) == s.extent.sites());
    const auto classes = static_cast<std::size_t>(s.classes);
    std::size_t i = 0;
    bool right = true;
    const Colouring& c = r.colouring;
    for (int colour = 0; colour < c.colours(); ++colour) {
      for (int slice = 0; slice < c.slices(colour); ++slice) {
        for (int row = 0; row < c.rows(colour); ++row) {
          for (int j = 0; j < c.sites(colour, slice, row); ++j, ++i) {
            const int x = c.first_x(colour, slice, row) + 2 * j;
            const int y = c.y_of(colour, row), z = c.z_of(colour, slice);
            std::vector<double> expected(classes);
            for (const NeighbourRing& ring : c.neighbourhood().rings) {
              for (const Displacement& d : ring.neighbours) {
                if (!r.plain.inside(x + d.x, y + d.y, z + d.z)) continue;
                expected[r.plain.label[r.plain.at(x + d.x, y + d.y, z + d.z)]] += ring.weight;
              }
            }
            right = right && counts.label[i] == r.plain.label[r.plain.at(x, y, z)];
            for (std::size_t k = 0; k < classes; ++k) {
              right = right && std::fabs(counts.count[i * classes + k] - expected[k]) < 1e-5;
            }
          }
        }
      }
    }
    CHECK(right);
  }
}

TEST_CASE("a thin sample has about the size asked for, and its phase moves it") {
  Random r({{150, 110, 1}, Connectivity::kFour, 3});
  NeighbourCounts first, second;
  sample_neighbours(r.colouring, r.chain, 1000, 0.0, first);
  sample_neighbours(r.colouring, r.chain, 1000, 0.5, second);
  CHECK(std::abs(static_cast<int>(first.label.size()) - 1000) <= 1);
  CHECK(std::abs(static_cast<int>(second.label.size()) - 1000) <= 1);
  CHECK(first.label != second.label);
  const std::size_t before = first.label.size();
  sample_neighbours(r.colouring, r.chain, 1000, 0.5, first);  // appends
  CHECK(first.label.size() == before + second.label.size());
}
