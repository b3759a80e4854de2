#include "diagnose/summary.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "diagnose/effective_sample_size.h"
#include "diagnose/rhat.h"
#include "diagnose/standard_error.h"
#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("a summary of normal draws shows the normal distribution") {
  TestRandom random(31);
  Draws draws = normal_draws(random, 10000, 4);
  for (double& x : draws.values()) x = 10 + 2 * x;
  const TraceSummary s = summarise(draws);
  // Four Monte Carlo standard errors: 2/200 for mean, 2/sqrt(80000) for sd, and for the quantile
  // at p 2 sqrt(p(1-p)/40000)/phi(z): 0.0211 at 5 %, 0.0267 at 2.5 %.
  CHECK(s.mean == Approx(10).margin(0.04));
  CHECK(s.sd == Approx(2).margin(0.0283));
  CHECK(s.lower90 == Approx(10 - 2 * 1.6449).margin(0.085));
  CHECK(s.upper90 == Approx(10 + 2 * 1.6449).margin(0.085));
  CHECK(s.lower95 == Approx(10 - 2 * 1.9600).margin(0.107));
  CHECK(s.upper95 == Approx(10 + 2 * 1.9600).margin(0.107));
  CHECK(s.mcse == mcse_mean(draws));
  CHECK(s.rhat == rank_normalised_split_rhat(draws));
  CHECK(s.ess_bulk == bulk_ess(draws));
  CHECK(s.ess_tail == tail_ess(draws));
}

TEST_CASE("a summary of equal draws is that value without error") {
  const TraceSummary s = summarise(Draws(std::vector<double>(400, 0.1), 4));
  for (const double bound : {s.mean, s.lower90, s.upper90, s.lower95, s.upper95}) {
    CHECK(bound == 0.1);
  }
  CHECK(s.sd == 0);
  CHECK(s.mcse == 0);
  CHECK(std::isnan(s.rhat));
  CHECK(std::isnan(s.ess_bulk));
  CHECK(std::isnan(s.ess_tail));
}

TEST_CASE("a summary of too few or broken draws says nothing") {
  for (const Draws& draws : {Draws({1, 2, 3}, 1), Draws({1, 2, std::nan(""), 4}, 1), Draws()}) {
    const TraceSummary s = summarise(draws);
    CHECK(std::isnan(s.mean));
    CHECK(std::isnan(s.sd));
    CHECK(std::isnan(s.upper95));
    CHECK(std::isnan(s.mcse));
    CHECK(std::isnan(s.rhat));
  }
}
