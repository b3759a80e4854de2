#include "diagnose/inverse_normal.h"

#include <boost/math/distributions/normal.hpp>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using stillfield::inverse_normal;

namespace {

long double normal_cdf(long double z) {
  return 0.5L * std::erfc(-z / std::sqrt(2.0L));
}

}  // namespace

TEST_CASE("the normal quantile inverts the distribution function") {
  long double worst = 0;
  for (int i = 1; i < 200000; ++i) {
    const double p = i / 200000.0;
    worst = std::max(worst, std::fabs(normal_cdf(inverse_normal(p)) - p));
  }
  CHECK(worst < 1e-14L);
  // The lower tail, relative to p. An error d of z changes log p by |z| d, so ask for z^2 eps.
  for (double p = 0.01; p > 1e-300; p *= 0.37) {
    const double z = inverse_normal(p);
    CAPTURE(p, z);
    CHECK(std::fabs(normal_cdf(z) / p - 1) < (z * z + 1) * stillfield::kInverseNormalMaxRelError);
  }
}

TEST_CASE("the normal quantile stays within its stated error bound") {
  // Outside reference: Boost.Math in long double.
  const boost::math::normal_distribution<long double> normal;
  double worst = 0;
  const auto look = [&](double p) {
    const long double want = boost::math::quantile(normal, static_cast<long double>(p));
    if (want == 0) return;
    worst = std::max(worst, static_cast<double>(std::fabs((inverse_normal(p) - want) / want)));
  };
  for (int i = 1; i < 20000; ++i) look(i / 20000.0);
  for (double p = 0.1; p > 1e-300; p *= 0.83) look(p);
  CAPTURE(worst);
  CHECK(worst <= stillfield::kInverseNormalMaxRelError);
}

TEST_CASE("known normal quantiles") {
  // Two-sided 95 % and 90 % points, as printed in every table (16 digits from memory, confirmed
  // by the Boost.Math check above).
  CHECK(inverse_normal(0.975) == Approx(1.959963984540054).epsilon(1e-15));
  CHECK(inverse_normal(0.95) == Approx(1.644853626951473).epsilon(1e-15));
  CHECK(inverse_normal(0.5) == 0.0);
  CHECK(inverse_normal(0.25) == -inverse_normal(0.75));
}

TEST_CASE("the normal quantile at the ends of its range") {
  CHECK(inverse_normal(0.0) == -std::numeric_limits<double>::infinity());
  CHECK(inverse_normal(1.0) == std::numeric_limits<double>::infinity());
  CHECK(std::isnan(inverse_normal(-0.1)));
  CHECK(std::isnan(inverse_normal(1.1)));
  CHECK(std::isnan(inverse_normal(std::nan(""))));
}
