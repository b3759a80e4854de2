#include "sampler/patch_search.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <vector>

#include "random/stream.h"

using namespace stillfield;

TEST_CASE("the nearest patches are those of an exhaustive search") {
  constexpr int kWidth = 41;
  constexpr int kHeight = 33;
  SearchImage image({kWidth, kHeight, 1});
  RandomStream random({101, 1}, Purpose::kSimulation);
  for (int y = 0; y < kHeight; ++y) {
    for (int x = 0; x < kWidth; ++x) image.row(y)[x] = static_cast<float>(random.normal());
  }
  for (const int side : {4, 6, 8}) {
    PatchSearch search(image, side);
    for (const PatchPosition at :
         {PatchPosition{0, 0}, PatchPosition{kWidth - side, kHeight - side}, PatchPosition{15, 9},
          PatchPosition{kWidth - side, 3}}) {
      std::vector<PatchPosition> nearest(20);
      search.find(at, nearest);
      struct Candidate {
        double distance;
        int x, y;
      };
      std::vector<Candidate> all;
      for (int y = 0; y + side <= kHeight; ++y) {
        for (int x = 0; x + side <= kWidth; ++x) {
          if (std::abs(x - at.x) > kSearchReach || std::abs(y - at.y) > kSearchReach) continue;
          double sum = 0.0;
          for (int i = 0; i < side * side; ++i) {
            const double off = double{image.row(y + i / side)[x + i % side]} -
                               double{image.row(at.y + i / side)[at.x + i % side]};
            sum += off * off;
          }
          all.push_back({sum, x, y});
        }
      }
      std::sort(all.begin(), all.end(),
                [](const Candidate& a, const Candidate& b) { return a.distance < b.distance; });
      CHECK((nearest[0].x == at.x && nearest[0].y == at.y));
      for (std::size_t i = 0; i < nearest.size(); ++i) {
        CAPTURE(side, at.x, at.y, i);
        CHECK((nearest[i].x == all[i].x && nearest[i].y == all[i].y));
      }
    }
  }
}

TEST_CASE("of equally near patches the earlier ones are taken") {
  const SearchImage flat({20, 18, 1});
  PatchSearch search(flat, 4);
  std::vector<PatchPosition> nearest(5);
  search.find({10, 10}, nearest);
  for (int i = 0; i < 5; ++i) {
    CHECK(nearest[static_cast<std::size_t>(i)].x == i);
    CHECK(nearest[static_cast<std::size_t>(i)].y == 0);
  }
}
