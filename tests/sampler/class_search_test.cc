// How many classes: small fields of known classes that no label model has drawn, and the rule of
// choice by hand. The study is tests/study/study_classes.cc.
#include "sampler/class_search.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "model/search_image.h"
#include "study/class_fields.h"

using namespace stillfield;

namespace {

ClassSearch search(const GreyLevels& grey, int most, int threads = 1) {
  return search_classes(make_search_image(grey), make_neighbourhood(Connectivity::kFour), false,
                        most, 77, Pool(threads));
}

GreyLevels field(const std::string& family, int classes, double contrast, std::uint64_t seed) {
  const study::ClassField truth = study::draw_classes(family, 64, classes, seed);
  return make_grey_levels(study::render_classes(truth, contrast, 0.0, seed).view());
}

}  // namespace

// Eight fields of 64^2 at a contrast-to-noise ratio of 3. If a field is missed with probability
// .01 (the study has 0 misses in 84 fields of disks and cells at 96^2 and a ratio of 2), two or
// more misses have probability .003: the false-alarm level of this test. The seeds are fixed.
TEST_CASE("the number of classes is found on shapes that no label model has drawn") {
  int missed = 0;
  for (int classes = 1; classes <= 4; ++classes) {
    for (const char* family : {"disks", "cells"}) {
      const auto seed = static_cast<std::uint64_t>(300 + classes);
      missed += search(field(family, classes, 3.0, seed), 5).choice != classes ? 1 : 0;
    }
  }
  CHECK(missed <= 1);
}

TEST_CASE("the search does not depend on the number of threads") {
  const GreyLevels grey = field("cells", 2, 2.0, 5);
  const ClassSearch one = search(grey, 3, 1), four = search(grey, 3, 4);
  REQUIRE(one.tried.size() == four.tried.size());
  for (std::size_t i = 0; i < one.tried.size(); ++i)
    CHECK(one.tried[i].score == four.tried[i].score);
}

TEST_CASE("no more classes are tried than grey levels occur, and missing pixels do not matter") {
  Volume<float> image({40, 30});
  for (int y = 0; y < 30; ++y) {
    for (int x = 0; x < 40; ++x) image.at(x, y) = x < 13 ? 10.0f : x < 27 ? 40.0f : 90.0f;
  }
  for (int x = 3; x < 40; x += 7) image.at(x, 11) = std::numeric_limits<float>::quiet_NaN();
  const ClassSearch s = search(make_grey_levels(image.view()), 8);
  CHECK(s.tried.size() == 3);
  CHECK(s.choice == 3);
  for (const TriedClasses& t : s.tried) CHECK(std::isfinite(t.score));
}

TEST_CASE("one grey value is one class") {
  Volume<float> image({20, 20});
  const ClassSearch s = search(make_grey_levels(image.view()), 8);
  CHECK(s.tried.size() == 1);
  CHECK(s.choice == 1);
}

// By hand, 4 pixels: sums -8, -4, -3.9; penalties (3 K - 1) / 2 ln 4
// = 1.386294, 3.465736, 5.545177; scores -9.386294, -7.465736, -9.445177. Differences of K = 1 to
// the best, 2 and 0 in turn: sum 4, squares 8, error sqrt(8 - 16 / 4) = 2; below_best = 1.920558 <=
// 2 errors: one class. With 1 in each pixel instead: the same sum without scatter, error 0: two
// classes.
TEST_CASE("the fewest classes within two errors of the best are chosen") {
  const std::vector<double> two = {-1, -1, -1, -1}, three = {-0.9, -1, -1, -1};
  const ClassSearch scattered = choose_by_scores({{-3, -1, -3, -1}, two, three}, false);
  CHECK(scattered.choice == 1);
  CHECK(scattered.tried.at(0).score == Approx(-9.386294).epsilon(1e-6));
  CHECK(scattered.tried.at(0).below_best == Approx(1.920558).epsilon(1e-6));
  CHECK(scattered.tried.at(0).error == Approx(2.0));
  CHECK(scattered.tried.at(2).score == Approx(-9.445177).epsilon(1e-6));
  CHECK(choose_by_scores({{-2, -2, -2, -2}, two, three}, false).choice == 2);
}
