#include "diagnose/draws.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "core/error.h"
#include "diagnose/moments.h"
#include "diagnose/rank_normal.h"

using namespace stillfield;

TEST_CASE("draws keep each chain together") {
  const Draws draws({1, 2, 3, 4, 5, 6}, 2);
  CHECK(draws.draws() == 3);
  CHECK(draws.chains() == 2);
  CHECK(draws.chain(0)[2] == 3);
  CHECK(draws.chain(1)[0] == 4);
  const Draws same(std::vector<std::vector<double>>{{1, 2, 3}, {4, 5, 6}});
  CHECK(std::equal(draws.values().begin(), draws.values().end(), same.values().begin()));
}

TEST_CASE("chains of unequal length are refused") {
  CHECK_THROWS_AS(Draws({1, 2, 3}, 2), Error);
  CHECK_THROWS_AS(Draws({1, 2, 3}, 0), Error);
  CHECK_THROWS_AS(Draws(std::vector<std::vector<double>>{{1, 2}, {3}}), Error);
}

TEST_CASE("splitting drops the middle draw of an odd chain") {
  const Draws split = split_chains(Draws({1, 2, 3, 4, 5, 6, 7, 8, 9, 10}, 2));
  REQUIRE(split.chains() == 4);
  REQUIRE(split.draws() == 2);
  const std::vector<double> want = {1, 2, 4, 5, 6, 7, 9, 10};
  CHECK(std::equal(want.begin(), want.end(), split.values().begin()));
}

TEST_CASE("what can be diagnosed") {
  CHECK(can_be_diagnosed(Draws({1, 2, 3, 4}, 1)));
  CHECK_FALSE(can_be_diagnosed(Draws({1, 2, 3}, 1)));
  CHECK_FALSE(can_be_diagnosed(Draws()));
  CHECK_FALSE(can_be_diagnosed(Draws({1, 2, 3, std::nan("")}, 1)));
  CHECK_FALSE(can_be_diagnosed(Draws({1, 2, 3, std::numeric_limits<double>::infinity()}, 1)));
}

TEST_CASE("the moments of equal values are exact") {
  const std::vector<double> values(1000, 0.1);
  CHECK(mean_of(values) == 0.1);
  CHECK(variance_of(values) == 0.0);
  CHECK(std::isnan(mean_of({})));
  CHECK(std::isnan(variance_of(std::vector<double>{1.0})));
  // By hand: mean 3, squares 4 + 1 + 0 + 1 + 4 = 10, 10 / 4.
  CHECK(variance_of(std::vector<double>{1, 2, 3, 4, 5}) == 2.5);
}

TEST_CASE("normal scores are symmetric, share ties and ignore the scale of the draws") {
  const Draws scores = rank_normalise(Draws({10, 1000, 20, 20, 5, 30}, 2));
  const std::span<const double> z = scores.values();
  // Ranks 2 6 3.5 3.5 1 5 of 6.
  CHECK(z[2] == z[3]);
  CHECK(z[2] == Approx(0).margin(1e-15));
  CHECK(z[4] == Approx(-z[1]));
  CHECK(z[0] == Approx(-z[5]));
  // Phi((6 - 3/8) / 6.25) from erfc.
  CHECK(0.5 * std::erfc(-z[1] / std::sqrt(2.0)) == Approx(0.9).epsilon(1e-14));
}
