#include "diagnose/quantile.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

using stillfield::quantile;

TEST_CASE("type 7 quantiles by hand") {
  // Hyndman & Fan 1996, definition 7: h = (n - 1) p between order statistics, here n = 5:
  // 1 2 4 7 11; p = 0.1: h = 0.4, 1 + 0.4 (2 - 1); p = 0.9: h = 3.6, 7 + 0.6 (11 - 7).
  const std::vector<double> x = {7, 1, 11, 2, 4};
  CHECK(quantile(x, 0.1) == Approx(1.4));
  CHECK(quantile(x, 0.5) == 4);
  CHECK(quantile(x, 0.9) == Approx(9.4));
  CHECK(quantile(x, 0.0) == 1);
  CHECK(quantile(x, 1.0) == 11);
  // An even count: the median is the mean of the middle two.
  CHECK(quantile(std::vector<double>{4, 1, 3, 2}, 0.5) == 2.5);
}

TEST_CASE("quantiles of single, empty and broken lists") {
  CHECK(quantile(std::vector<double>{3}, 0.3) == 3);
  CHECK(std::isnan(quantile({}, 0.5)));
  CHECK(std::isnan(quantile(std::vector<double>{1, std::nan(""), 2}, 0.5)));
  CHECK(std::isnan(quantile(std::vector<double>{1, 2}, 1.5)));
  CHECK(std::isnan(quantile(std::vector<double>{1, 2}, std::nan(""))));
}

TEST_CASE("quantiles of equal values are that value") {
  const std::vector<double> x(37, 0.1);
  CHECK(quantile(x, 0.05) == 0.1);
  CHECK(quantile(x, 0.975) == 0.1);
}
