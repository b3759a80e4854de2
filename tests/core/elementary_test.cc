// exp and log against the long double functions of the C library (glibc), over the whole range.
#include "core/elementary.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using stillfield::exact_exp;
using stillfield::exact_log;

TEST_CASE("exp stays within its stated error bound") {
  double worst = 0;
  for (int i = -1400000; i <= 1400000; ++i) {
    const double x = i * 5.0e-4 + 1e-7;
    const long double want = std::exp(static_cast<long double>(x));
    worst = std::max(worst, static_cast<double>(std::fabs((exact_exp(x) - want) / want)));
  }
  CAPTURE(worst);
  CHECK(worst <= stillfield::kExpMaxRelError);
}

TEST_CASE("exp at the ends of its range") {
  CHECK(exact_exp(0.0) == 1.0);
  CHECK(exact_exp(-800.0) == 0.0);
  CHECK(std::isinf(exact_exp(710.0)));
  CHECK(std::isnan(exact_exp(std::numeric_limits<double>::quiet_NaN())));
  CHECK(exact_exp(-740.0) > 0.0);
  CHECK(exact_exp(-std::numeric_limits<double>::infinity()) == 0.0);
}

TEST_CASE("log stays within its stated error bound") {
  double worst = 0;
  for (int e = -300; e <= 300; ++e) {
    for (int i = 0; i < 4000; ++i) {
      const double x = std::ldexp(1.0 + i / 4000.0 + 1e-9, e);
      const long double want = std::log(static_cast<long double>(x));
      worst = std::max(worst, static_cast<double>(std::fabs((exact_log(x) - want) / want)));
    }
  }
  CAPTURE(worst);
  CHECK(worst <= stillfield::kLogMaxRelError);
}

TEST_CASE("log at the ends of its range") {
  CHECK(exact_log(1.0) == 0.0);
  CHECK(exact_log(0.0) == -std::numeric_limits<double>::infinity());
  CHECK(std::isnan(exact_log(-1.0)));
  CHECK(std::isinf(exact_log(std::numeric_limits<double>::infinity())));
  CHECK(exact_log(std::numeric_limits<double>::denorm_min()) == Approx(-744.4400719213812));
}
