#include "diagnose/verdict.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "core/error.h"
#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;
using Catch::Matchers::Contains;

namespace {

NamedSummary scalar(const char* name, double rhat, double ess_bulk, double ess_tail) {
  TraceSummary s;
  s.mean = 1;
  s.sd = 0.1;
  s.rhat = rhat;
  s.ess_bulk = ess_bulk;
  s.ess_tail = ess_tail;
  return {name, s};
}

}  // namespace

TEST_CASE("a run that meets all targets has converged") {
  const std::vector<NamedSummary> scalars = {scalar("area fraction of class 1", 1.01, 400, 400)};
  const Verdict verdict = judge_convergence(scalars, 0.01);
  CHECK(verdict.converged);
  CHECK(verdict.misses.empty());
  CHECK(judge_convergence(scalars, std::nullopt).converged);
  CHECK(judge_convergence({}, std::nullopt).converged);
}

TEST_CASE("missed targets are named in plain words, worst first") {
  // Shortfalls: 0.02/0.01 = 2, 400/100 = 4, 400/250 = 1.6, 0.03/0.01 = 3.
  const std::vector<NamedSummary> scalars = {scalar("coupling", 1.02, 1000, 100),
                                             scalar("noise sd", 1.0, 250.7, 1000)};
  const Verdict verdict = judge_convergence(scalars, 0.03);
  CHECK_FALSE(verdict.converged);
  REQUIRE(verdict.misses.size() == 4);
  CHECK(verdict.misses[0].sentence ==
        "coupling: too few effective draws for its interval, tail ESS is 100 and should be at "
        "least 400.");
  CHECK(verdict.misses[0].shortfall == Approx(4));
  CHECK(verdict.misses[1].sentence ==
        "mean label probability: its Monte Carlo error is 0.0300 and should be at most 0.01.");
  CHECK(verdict.misses[2].sentence ==
        "coupling: the chains disagree, R-hat is 1.0200 and should be at most 1.01.");
  CHECK(verdict.misses[2].scalar == "coupling");
  CHECK(verdict.misses[3].sentence ==
        "noise sd: too few effective draws for its mean, bulk ESS is 250 and should be at least "
        "400.");
}

TEST_CASE("a value just beyond its target never reads as meeting it") {
  const std::vector<NamedSummary> scalars = {scalar("a", 1.010001, 399.99, 1000)};
  const Verdict verdict = judge_convergence(scalars, 0.0100001);
  REQUIRE(verdict.misses.size() == 3);
  for (const MissedTarget& miss : verdict.misses) CHECK(miss.shortfall > 1);
  const std::string all =
      verdict.misses[0].sentence + verdict.misses[1].sentence + verdict.misses[2].sentence;
  CHECK_THAT(all, Contains("R-hat is 1.0101"));
  CHECK_THAT(all, Contains("ESS is 399 "));
  CHECK_THAT(all, Contains("error is 0.0101"));
}

TEST_CASE("a trace that never moves has converged only if all chains agree") {
  const auto named = [](const Draws& draws) {
    return std::vector<NamedSummary>{{"area fraction of class 2", summarise(draws)}};
  };
  CHECK(judge_convergence(named(Draws(std::vector<double>(400, 0.1), 4)), 0.0).converged);

  Draws apart(100, 4);
  for (double& x : apart.chain(3)) x = 0.1;
  const Verdict verdict = judge_convergence(named(apart), 0.0);
  REQUIRE(verdict.misses.size() == 1);
  CHECK(verdict.misses[0].sentence ==
        "area fraction of class 2: the chains stand still, but not at the same value.");
  CHECK(std::isinf(verdict.misses[0].shortfall));
}

TEST_CASE("a trace that cannot be judged has not converged") {
  const std::vector<NamedSummary> scalars = {
      scalar("slow", 1.5, 20, 20),
      {"short", summarise(Draws({1, 1, 1}, 1))},
      {"broken", summarise(Draws({1, 2, 3, std::nan("")}, 1))},
      // Only the dropped middle draw differs.
      {"frozen", summarise(Draws({1, 1, 2, 1, 1}, 1))}};
  const Verdict verdict = judge_convergence(scalars, std::nan(""));
  CHECK_FALSE(verdict.converged);
  REQUIRE(verdict.misses.size() == 7);
  CHECK_THAT(verdict.misses[0].sentence, Contains("short: cannot be judged"));
  CHECK_THAT(verdict.misses[1].sentence, Contains("broken: cannot be judged"));
  CHECK_THAT(verdict.misses[2].sentence, Contains("frozen: cannot be judged"));
  CHECK_THAT(verdict.misses[3].sentence, Contains("not known yet"));
  CHECK(verdict.misses[4].scalar == "slow");
}

TEST_CASE("a real run: good chains pass, slow chains do not") {
  TestRandom random(41);
  const std::vector<NamedSummary> good = {{"a", summarise(normal_draws(random, 1000, 4))}};
  CHECK(judge_convergence(good, 0.002).converged);
  const std::vector<NamedSummary> slow = {
      {"a", summarise(autoregressive_draws(random, 500, 4, 0.99))}};
  CHECK_FALSE(judge_convergence(slow, 0.002).converged);
}

TEST_CASE("targets that cannot be met are refused") {
  ConvergenceTarget target;
  target.max_rhat = 1.0;
  CHECK_THROWS_AS(judge_convergence({}, 0.0, target), Error);
  target = {};
  target.min_ess = 0;
  CHECK_THROWS_AS(judge_convergence({}, 0.0, target), Error);
  target = {};
  target.max_probability_mcse = std::nan("");
  CHECK_THROWS_AS(judge_convergence({}, 0.0, target), Error);
}
