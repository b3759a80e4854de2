#include "simd/label_statistics.h"

#include <catch2/catch.hpp>
#include <vector>

#include "random/stream.h"
#include "simd/forced_target.h"
#include "simd/label_problem.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

void check_totals(const LabelProblem& p) {
  INFO("size " << p.extent.width << " x " << p.extent.height << " x " << p.extent.depth
               << ", neighbours " << static_cast<int>(p.connectivity) << ", classes " << p.classes
               << ", levels " << p.levels);
  Subject subject(p);
  const Pool pool(1);
  for (int round = 0; round < 2; ++round) {  // random labels, then labels with guards in use
    const reference::FieldTotals expected = total_field(make_twin(subject), subject.grey.missing());
    for_each_target([&](const std::string& target) {
      CAPTURE(target, round);
      total_labels(subject.field, pool, subject.chain);
      const LabelTotals& got = subject.chain.totals;
      REQUIRE(got.classes.size() == expected.sites.size());
      for (std::size_t k = 0; k < expected.sites.size(); ++k) {
        CAPTURE(k);
        REQUIRE(got.classes[k].sites == expected.sites[k]);
        REQUIRE(got.classes[k].observed == expected.observed[k]);
        REQUIRE(got.classes[k].level_sum == expected.level_sum[k]);
        REQUIRE(got.classes[k].level_square_sum == expected.level_square_sum[k]);
      }
      REQUIRE(got.equal_pairs == expected.equal_pairs);
    });
    subject.sweep(2, pool);
  }
}

}  // namespace

TEST_CASE("label sums equal the slow twin's in planes") {
  const std::vector<Extent> extents = {{1, 1, 1},   {1, 9, 1},    {9, 1, 1},    {2, 2, 1},
                                       {17, 9, 1},  {64, 5, 1},   {127, 4, 1},  {128, 5, 1},
                                       {129, 6, 1}, {257, 33, 1}, {511, 64, 1}, {3100, 6, 1}};
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const int classes : {2, 3, 4, 5, 8, 9, 17, 64}) {
      for (const Extent& e : extents) check_totals({e, connectivity, classes});
    }
  }
}

TEST_CASE("label sums equal the slow twin's in volumes") {
  for (const Connectivity connectivity : {Connectivity::kSix, Connectivity::kTwentySix}) {
    for (const double spacing : {1.0, 2.5}) {
      for (const int classes : {2, 3, 9}) {
        for (const Extent& e : {Extent{2, 2, 2}, {5, 4, 3}, {150, 9, 5}}) {
          check_totals({e, connectivity, classes, 0.3, spacing});
        }
      }
    }
  }
}

TEST_CASE("label sums do not overflow on the widest grey levels and long rows") {
  for (const int classes : {2, 3, 9}) {
    LabelProblem p{{600, 40, 1}, Connectivity::kFour, classes};
    p.levels = 65535;
    check_totals(p);
    p.extent = {70000, 3, 1};
    check_totals(p);
  }
}

TEST_CASE("totals of an image whose every pixel has the highest level") {
  for (const int classes : {2, 5}) {
    LabelProblem p{{30000, 8, 1}, Connectivity::kEight, classes, 20.0};
    p.levels = 65535;
    Subject subject(p);
    std::fill(subject.field.level.begin(), subject.field.level.end(), std::uint16_t{65534});
    Volume<std::uint8_t> ones(p.extent);
    for (int y = 0; y < 8; ++y) {
      for (int x = 0; x < 30000; ++x) ones.at(x, y) = 1;
    }
    scatter_labels(subject.colouring, ones.view(), subject.chain.labels);
    for_each_target([&](const std::string& target) {
      CAPTURE(target);
      total_labels(subject.field, Pool(1), subject.chain);
      const ClassSums& sums = subject.chain.totals.classes[1];
      CHECK(sums.sites == 240000);
      CHECK(sums.observed == 240000);
      CHECK(sums.level_sum == 240000ULL * 65534);
      CHECK(sums.level_square_sum == 240000ULL * 65534 * 65534);
      CHECK(subject.chain.totals.classes[0].sites == 0);
    });
  }
}

TEST_CASE("visits are added to 16-bit counts and emptied") {
  for_each_target([](const std::string& target) {
    CAPTURE(target);
    constexpr std::size_t kCount = 64 * 5;
    AlignedBuffer<std::uint8_t> visits(kCount);
    AlignedBuffer<std::uint16_t> count(kCount);
    std::vector<int> expected(kCount);
    RandomStream random({5, 6}, Purpose::kSimulation);
    for (int round = 0; round < 4; ++round) {
      for (std::size_t i = 0; i < kCount; ++i) {
        visits[i] = static_cast<std::uint8_t>(i < 3 ? 255 : random.word());
        expected[i] += visits[i];
      }
      empty_visits(kCount, visits.data(), count.data());
      for (std::size_t i = 0; i < kCount; ++i) {
        REQUIRE(visits[i] == 0);
        REQUIRE(count[i] == expected[i]);
      }
    }
  });
}
