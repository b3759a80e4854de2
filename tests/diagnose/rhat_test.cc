#include "diagnose/rhat.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("split R-hat by hand") {
  // Halves (1 2) (3 4) (3 4) (5 6): n = 2, W = 1/2, variance of the means 1.5 3.5 3.5 5.5 = 8/3,
  // R-hat^2 = 1/2 + (8/3) / (1/2) = 35/6.
  CHECK(split_rhat(Draws({1, 2, 3, 4, 3, 4, 5, 6}, 2)) == Approx(std::sqrt(35.0 / 6)));
}

TEST_CASE("R-hat of independent draws is near 1") {
  TestRandom random(11);
  for (int run = 0; run < 20; ++run) {
    const Draws draws = normal_draws(random, 1000, 4);
    CHECK(split_rhat(draws) == Approx(1.0).margin(0.006));
    CHECK(rank_normalised_split_rhat(draws) < 1.01);
  }
}

TEST_CASE("R-hat sees a shifted chain and a trend") {
  TestRandom random(12);
  Draws shifted = normal_draws(random, 1000, 4);
  for (double& x : shifted.chain(2)) x += 2;
  CHECK(split_rhat(shifted) > 1.2);
  CHECK(rank_normalised_split_rhat(shifted) > 1.2);

  // The same trend in every chain: whole chains agree, halves do not.
  Draws drifting = normal_draws(random, 1000, 4);
  for (std::size_t c = 0; c < 4; ++c) {
    for (std::size_t i = 0; i < 1000; ++i) drifting.chain(c)[i] += 0.003 * static_cast<double>(i);
  }
  CHECK(rank_normalised_split_rhat(drifting) > 1.2);
}

TEST_CASE("rank normalisation sees a shift that heavy tails hide") {
  TestRandom random(13);
  Draws draws(1000, 4);
  for (double& x : draws.values()) x = random.cauchy();
  CHECK(rank_normalised_split_rhat(draws) < 1.01);
  for (double& x : draws.chain(0)) x += 3;
  CHECK(split_rhat(draws) < 1.01);
  CHECK(rank_normalised_split_rhat(draws) > 1.1);
}

TEST_CASE("folding sees chains of different scale") {
  TestRandom random(14);
  Draws draws = normal_draws(random, 1000, 4);
  for (double& x : draws.chain(3)) x *= 4;
  CHECK(split_rhat(draws) < 1.01);
  CHECK(rank_normalised_split_rhat(draws) > 1.1);
}

TEST_CASE("R-hat does not depend on monotone transformations by rank") {
  TestRandom random(15);
  Draws draws = autoregressive_draws(random, 300, 4, 0.9);
  // Folding does change under a curved map; a linear map changes nothing but rounding.
  Draws mapped = draws;
  for (double& x : mapped.values()) x = 1024 * x;
  CHECK(rank_normalised_split_rhat(draws) == rank_normalised_split_rhat(mapped));
}

TEST_CASE("R-hat of constant, short and broken traces") {
  const double inf = std::numeric_limits<double>::infinity();
  for (const auto rhat : {split_rhat, rank_normalised_split_rhat}) {
    CHECK(std::isnan(rhat(Draws(std::vector<double>(40, 0.1), 4))));
    CHECK(std::isnan(rhat(Draws({1, 2, 3, 4, 5, 6}, 2))));
    CHECK(std::isnan(rhat(Draws())));
    CHECK(std::isnan(rhat(Draws({1, 2, 3, std::nan("")}, 1))));
    CHECK(std::isnan(rhat(Draws({1, 2, 3, inf}, 1))));
    CHECK(rhat(Draws({1, 1, 1, 1, 2, 2, 2, 2}, 2)) == inf);
    CHECK(rhat(Draws({0.1, 0.1, 0.1, 0.1, 0.3, 0.3, 0.3, 0.3, 0.3, 0.3, 0.3, 0.3}, 3)) == inf);
    // One chain stands still, the other moves: a number.
    CHECK(std::isfinite(rhat(Draws({1, 1, 1, 1, 0, 2, 1, 3}, 2))));
  }
}

TEST_CASE("two values in equal shares have no scale to compare") {
  TestRandom random(16);
  Draws coin(1000, 4);
  for (std::size_t i = 0; i < coin.size(); ++i) coin.values()[i] = i % 2 == 0 ? 0 : 1;
  CHECK(rank_normalised_split_rhat(coin) == Approx(1.0).margin(0.002));
}
