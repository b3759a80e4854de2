#include "diagnose/effective_sample_size.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <vector>

#include "diagnose/moments.h"
#include "diagnose/standard_error.h"
#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("independent draws are all effective") {
  TestRandom random(21);
  std::vector<double> mean_share;
  std::vector<double> bulk_share;
  std::vector<double> tail_share;
  for (int run = 0; run < 20; ++run) {
    const Draws draws = normal_draws(random, 1000, 4);
    mean_share.push_back(ess_mean(draws) / 4000);
    bulk_share.push_back(bulk_ess(draws) / 4000);
    tail_share.push_back(tail_ess(draws) / 4000);
    CHECK(bulk_share.back() == Approx(1).margin(0.25));
  }
  CHECK(mean_of(mean_share) == Approx(1).margin(0.05));
  CHECK(mean_of(bulk_share) == Approx(1).margin(0.05));
  CHECK(mean_of(tail_share) == Approx(1).margin(0.10));  // the smaller of two, hence low
}

TEST_CASE("AR(1) chains have (1 - rho) / (1 + rho) effective draws each") {
  // Closed form: the autocorrelations are rho^t, their sum a geometric series.
  TestRandom random(22);
  const double rho = GENERATE(-0.3, 0.0, 0.3, 0.6, 0.9);
  std::vector<double> share;
  for (int run = 0; run < 10; ++run) {
    share.push_back(ess_mean(autoregressive_draws(random, 5000, 4, rho)) / 20000);
  }
  CAPTURE(rho);
  CHECK(mean_of(share) == Approx((1 - rho) / (1 + rho)).epsilon(0.05));
}

TEST_CASE("AR(1) theory holds at a stated false-alarm level") {
  // 200 runs. ESS: its mean lies within 3.29 of its standard errors of n m (1 - rho) / (1 + rho),
  // give or take 2 % for the bias of a finite chain: false alarm below .001. MCSE: the true mean is
  // 0, so mean / MCSE is standard normal, and the runs with |mean / MCSE| > 1.96 are
  // Binomial(200, .05): outside 1..22 with probability .0002 (binomial sums).
  TestRandom random(27);
  const double rho = GENERATE(0.5, 0.9);
  const double n = 2000, m = 4, runs = 200;
  std::vector<double> share;
  int far = 0;
  for (int run = 0; run < runs; ++run) {
    const Draws draws = autoregressive_draws(random, 2000, 4, rho);
    share.push_back(ess_mean(draws) / (n * m * (1 - rho) / (1 + rho)));
    far += std::fabs(mean_of(draws.values())) > 1.96 * mcse_mean(draws) ? 1 : 0;
  }
  CAPTURE(rho, mean_of(share), far);
  CHECK(std::fabs(mean_of(share) - 1) < 0.02 + 3.29 * std::sqrt(variance_of(share) / runs));
  CHECK(far >= 1);
  CHECK(far <= 22);
}

TEST_CASE("the standard error of the mean is the scatter of the mean") {
  // Closed form: m chains of n draws of AR(1) with unit innovations have
  // Var(mean) = sigma^2 / (m n^2) (n + 2 sum_{k<n} (n - k) rho^k), sigma^2 = 1 / (1 - rho^2).
  const double rho = 0.8;
  const double n = 500;
  double sum = n;
  for (double k = 1; k < n; ++k) sum += 2 * (n - k) * std::pow(rho, k);
  const double want = std::sqrt(sum / (4 * n * n) / (1 - rho * rho));
  TestRandom random(23);
  std::vector<double> errors;
  for (int run = 0; run < 400; ++run) {
    errors.push_back(mcse_mean(autoregressive_draws(random, 500, 4, rho)));
  }
  CHECK(mean_of(errors) == Approx(want).epsilon(0.03));
}

TEST_CASE("alternating chains claim at most S log10 S") {
  TestRandom random(24);
  CHECK(ess_mean(autoregressive_draws(random, 500, 2, -0.95)) == Approx(1000 * 3.0));
}

TEST_CASE("chains that disagree have few effective draws") {
  TestRandom random(25);
  Draws draws = normal_draws(random, 1000, 4);
  for (double& x : draws.chain(1)) x += 5;
  CHECK(ess_mean(draws) < 20);
  CHECK(bulk_ess(draws) < 20);
}

TEST_CASE("effective draws of constant, short and broken traces") {
  for (const auto ess : {ess_mean, bulk_ess, tail_ess}) {
    CHECK(std::isnan(ess(Draws(std::vector<double>(40, 0.1), 4))));
    CHECK(std::isnan(ess(Draws({1, 1, 1, 1, 2, 2, 2, 2}, 2))));
    CHECK(std::isnan(ess(Draws({1, 2, 3, 4, 5, 6}, 2))));
    CHECK(std::isnan(ess(Draws({1, 2, 3, std::nan("")}, 1))));
    CHECK(std::isnan(ess(Draws())));
  }
  CHECK(mcse_mean(Draws(std::vector<double>(40, 0.1), 4)) == 0.0);
  CHECK(std::isnan(mcse_mean(Draws({1, 1, 1, 1, 2, 2, 2, 2}, 2))));
  CHECK(std::isnan(mcse_mean(Draws({1, 2, 3}, 1))));
}

TEST_CASE("tails of a trace with few values are judged by the values that occur") {
  // 97 % fives, the rest fours: both quantiles are 5, the largest value.
  TestRandom random(26);
  Draws counts(1000, 4);
  for (double& x : counts.values()) x = random.uniform() < 0.97 ? 5 : 4;
  CHECK(tail_ess(counts) == Approx(4000).epsilon(0.2));
}
