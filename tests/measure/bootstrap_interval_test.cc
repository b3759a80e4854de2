#include "measure/bootstrap_interval.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

TEST_CASE("a corrected value equals the worked example") {
  // By hand: kinds (1, 3) and (4, 6, 8): b_1 = 2, b_2 = 6, b = 4; variances 2 and 4, mean 3;
  // between the kinds ((2 - 4)^2 + (6 - 4)^2) / 2 = 4. With the shares below
  // u^2 = .5 * 1.2 * 3 + 1.25 * 4 + .5 * 16 + 2 * 1 + 2 * .6 = 18; 24 - .75 * 4 = 21.
  // Student's t with 5 - 2 = 3 degrees of freedom: 2.353363 and 3.182446 (NIST e-Handbook table,
  // further digits from Boost.Math).
  BootstrapErrors b;
  b.value = 24;
  b.errors = {{1, 3}, {4, std::nan(""), 6, 8}};
  b.posterior_variance = 1;
  b.floor_variance = 0.6;
  const BootstrapShares shares{0.75, 0.5, 1.25, 0.5, 2.0, 2.0};
  Measurement c;
  c.plain_estimate = 24;
  REQUIRE(correct_measurement(b, shares, c));
  const double u = std::sqrt(18.0);
  CHECK(c.estimate == Approx(21));
  CHECK(c.sd == Approx(u));
  CHECK(c.lower90 == Approx(21 - 2.353363 * u).epsilon(1e-6));
  CHECK(c.upper90 == Approx(21 + 2.353363 * u).epsilon(1e-6));
  CHECK(c.lower95 == Approx(21 - 3.182446 * u).epsilon(1e-6));
  CHECK(c.upper95 == Approx(21 + 3.182446 * u).epsilon(1e-6));

  b.lowest = 18;
  b.highest = 19;
  Measurement within;
  REQUIRE(correct_measurement(b, shares, within));
  CHECK(within.estimate == 19);
  CHECK(within.lower90 == 18);
  CHECK(within.upper95 == 19);
  CHECK(within.sd == Approx(u));
  CHECK(c.plain_estimate == 24);
}

TEST_CASE("a corrected value covers as often as it says when errors are Gaussian") {
  // T = truth + bias + N(0, 1) and n errors bias + N(0, 1) from one kind: (T - b - truth) /
  // (s sqrt(1 + 1/n)) has Student's t distribution with n - 1 degrees of freedom exactly, so the
  // coverage is exactly .90 and .95. 20 000 repetitions, 4 standard errors: false alarm 6e-5 each.
  constexpr int kRepetitions = 20000;
  constexpr double kTruth = 5, kBias = 3;
  RandomStream random(chain_key(31, 0), Purpose::kSimulation);
  for (const int n : {4, 8}) {
    CAPTURE(n);
    int covered90 = 0, covered95 = 0;
    double sum = 0;
    for (int i = 0; i < kRepetitions; ++i) {
      BootstrapErrors b;
      b.value = kTruth + kBias + random.normal();
      b.errors.resize(1);
      for (int r = 0; r < n; ++r) b.errors[0].push_back(kBias + random.normal());
      Measurement c;
      REQUIRE(correct_measurement(b, {}, c));
      covered90 += c.lower90 <= kTruth && kTruth <= c.upper90;
      covered95 += c.lower95 <= kTruth && kTruth <= c.upper95;
      sum += c.estimate;
    }
    CHECK(std::fabs(covered90 / double{kRepetitions} - 0.90) < 4 * std::sqrt(0.09 / kRepetitions));
    CHECK(std::fabs(covered95 / double{kRepetitions} - 0.95) <
          4 * std::sqrt(0.0475 / kRepetitions));
    // The known bias is gone.
    CHECK(std::fabs(sum / kRepetitions - kTruth) < 4 * std::sqrt((1 + 1.0 / n) / kRepetitions));
  }
}

TEST_CASE("a value without two errors of every kind is left alone") {
  BootstrapErrors b;
  Measurement m;
  m.estimate = 7;
  b.value = 1;
  CHECK_FALSE(correct_measurement(b, {}, m));
  b.errors = {{1, 2}, {1, std::nan("")}};
  CHECK_FALSE(correct_measurement(b, {}, m));
  CHECK(m.estimate == 7);
  CHECK(std::isnan(m.upper95));
  b.errors = {{1, 2}, {1, 1}};
  CHECK(correct_measurement(b, {}, m));
  CHECK(std::isfinite(m.upper95));
  b.value = std::nan("");
  CHECK(bootstrap_parts(b).bias.empty());
}
