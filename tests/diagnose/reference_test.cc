// The diagnostics against two implementations that share no code with them: reference.h, and the
// values in golden/posterior_1.4.0.txt (R package posterior, by the authors of the paper).
#include "diagnose/reference.h"

#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>
#include <string>
#include <vector>

#include "diagnose/effective_sample_size.h"
#include "diagnose/quantile.h"
#include "diagnose/rhat.h"
#include "diagnose/standard_error.h"
#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;
using Catch::Matchers::WithinRel;

namespace {

Chains as_chains(const Draws& draws) {
  Chains chains;
  for (std::size_t c = 0; c < draws.chains(); ++c) {
    chains.emplace_back(draws.chain(c).begin(), draws.chain(c).end());
  }
  return chains;
}

double rounded(long double x) {
  return static_cast<double>(x);
}

void check_against_reference(const Draws& draws) {
  const Chains x = as_chains(draws);
  const double tolerance = 1e-10;
  CHECK_THAT(split_rhat(draws), WithinRel(rounded(reference_rhat(reference_split(x))), tolerance));
  CHECK_THAT(rank_normalised_split_rhat(draws),
             WithinRel(rounded(reference_rank_normalised_split_rhat(x)), tolerance));
  CHECK_THAT(ess_mean(draws), WithinRel(rounded(reference_ess(reference_split(x))), tolerance));
  CHECK_THAT(bulk_ess(draws), WithinRel(rounded(reference_bulk_ess(x)), tolerance));
  CHECK_THAT(tail_ess(draws), WithinRel(rounded(reference_tail_ess(x)), tolerance));
  CHECK_THAT(mcse_mean(draws), WithinRel(rounded(reference_mcse_mean(x)), tolerance));
}

}  // namespace

TEST_CASE("diagnostics equal the plain reference on random traces") {
  TestRandom random(2021);
  const double rho = GENERATE(-0.8, -0.2, 0.0, 0.5, 0.95, 0.999);
  const std::size_t n = GENERATE(as<std::size_t>{}, 20, 57, 100, 151);
  const std::size_t m = GENERATE(as<std::size_t>{}, 1, 2, 4);
  CAPTURE(rho, n, m);
  check_against_reference(autoregressive_draws(random, n, m, rho));
}

TEST_CASE("diagnostics equal the plain reference on traces with ties and on the shortest ones") {
  TestRandom random(7);
  for (const std::size_t n : {40u, 81u, 160u}) {
    Draws counts(n, 3);
    for (double& x : counts.values()) x = std::floor(10 * random.uniform() * random.uniform());
    CAPTURE(n);
    check_against_reference(counts);
  }
  for (const std::size_t n : {4u, 5u, 6u, 7u}) {
    CAPTURE(n);
    const Draws draws = normal_draws(random, n, 4);
    const Chains x = as_chains(draws);
    CHECK_THAT(bulk_ess(draws), WithinRel(rounded(reference_bulk_ess(x)), 1e-10));
    CHECK_THAT(rank_normalised_split_rhat(draws),
               WithinRel(rounded(reference_rank_normalised_split_rhat(x)), 1e-10));
  }
}

TEST_CASE("diagnostics equal the values of the R package posterior") {
  std::ifstream file(std::string(STILLFIELD_SOURCE_DIR) +
                     "/tests/diagnose/golden/posterior_1.4.0.txt");
  REQUIRE(file);
  std::string line;
  int cases = 0;
  while (std::getline(file, line)) {
    if (line.starts_with('#')) continue;
    std::string name;
    std::size_t n = 0;
    std::size_t m = 0;
    std::istringstream(line) >> name >> n >> m;
    std::vector<double> want(9);
    for (double& v : want) REQUIRE(file >> v);
    std::vector<double> values(n * m);
    for (double& v : values) REQUIRE(file >> v);
    std::getline(file, line);

    CAPTURE(name);
    const Draws draws(values, m);
    const double tolerance = 1e-12;
    CHECK_THAT(split_rhat(draws), WithinRel(want[0], tolerance));
    CHECK_THAT(rank_normalised_split_rhat(draws), WithinRel(want[1], tolerance));
    CHECK_THAT(bulk_ess(draws), WithinRel(want[2], tolerance));
    CHECK_THAT(tail_ess(draws), WithinRel(want[3], tolerance));
    CHECK_THAT(ess_mean(draws), WithinRel(want[4], tolerance));
    CHECK_THAT(quantile_ess(draws, 0.25), WithinRel(want[5], tolerance));
    CHECK_THAT(mcse_mean(draws), WithinRel(want[6], tolerance));
    CHECK_THAT(quantile(draws.values(), 0.025), WithinRel(want[7], tolerance));
    CHECK_THAT(quantile(draws.values(), 0.95), WithinRel(want[8], tolerance));
    ++cases;
  }
  CHECK(cases == 9);
}
