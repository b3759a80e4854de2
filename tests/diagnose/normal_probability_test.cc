#include "diagnose/normal_probability.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using namespace stillfield;

TEST_CASE("the normal distribution function agrees with erfc of the C library") {
  for (double x = -7.99; x < 8.0; x += 0.0137) {
    const double expected = 0.5 * std::erfc(-x / std::sqrt(2.0));
    CHECK(std::fabs(normal_probability(x) - expected) <= kNormalProbabilityMaxError);
  }
  CHECK(normal_probability(0.0) == 0.5);
  CHECK(normal_probability(-9.0) == 0.0);
  CHECK(normal_probability(9.0) == 1.0);
  CHECK(std::isnan(normal_probability(std::numeric_limits<double>::quiet_NaN())));
}
