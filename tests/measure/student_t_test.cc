#include "measure/student_t.h"

#include <boost/math/distributions/students_t.hpp>
#include <catch2/catch.hpp>
#include <cmath>

using stillfield::student_t_quantile;

TEST_CASE("t quantiles equal the handbook table") {
  // NIST/SEMATECH e-Handbook, critical values of Student's t, column 0.975, three decimals (from
  // memory, confirmed by the Boost.Math check below).
  CHECK(student_t_quantile(0.975, 1) == Approx(12.706).margin(5e-4));
  CHECK(student_t_quantile(0.975, 2) == Approx(4.303).margin(5e-4));
  CHECK(student_t_quantile(0.975, 4) == Approx(2.776).margin(5e-4));
  CHECK(student_t_quantile(0.975, 9) == Approx(2.262).margin(5e-4));
  CHECK(student_t_quantile(0.975, 29) == Approx(2.045).margin(5e-4));
  CHECK(student_t_quantile(0.975, 1'000'000'000) == Approx(1.960).margin(5e-4));
}

TEST_CASE("t quantiles in closed form") {
  // One degree of freedom: tan(pi (p - 1/2)); two: (2p - 1) sqrt(2 / (4 p (1 - p))).
  for (const double p : {0.6, 0.75, 0.95, 0.975, 0.995, 0.9995}) {
    CAPTURE(p);
    CHECK(student_t_quantile(p, 1) ==
          Approx(std::tan(3.141592653589793 * (p - 0.5))).epsilon(1e-11));
    CHECK(student_t_quantile(p, 2) ==
          Approx((2 * p - 1) * std::sqrt(1 / (2 * p * (1 - p)))).epsilon(1e-11));
    CHECK(student_t_quantile(1 - p, 7) == Approx(-student_t_quantile(p, 7)).epsilon(1e-11));
  }
}

TEST_CASE("t quantiles stay within their stated error bound") {
  // Outside reference: Boost.Math. Both sides of the switch to the expansion (200 / 201).
  double worst = 0;
  for (std::int64_t dof = 1; dof < 2'000'000; dof = dof < 260 ? dof + 1 : dof * 3 / 2) {
    const boost::math::students_t t(static_cast<double>(dof));
    for (const double p : {0.0005, 0.02, 0.3, 0.55, 0.8, 0.9, 0.95, 0.975, 0.99, 0.995, 0.9995}) {
      const double want = boost::math::quantile(t, p);
      worst = std::max(worst, std::fabs(student_t_quantile(p, dof) / want - 1));
    }
  }
  CAPTURE(worst);
  CHECK(worst <= stillfield::kStudentTMaxRelError);
}

TEST_CASE("t quantiles outside their range") {
  CHECK(student_t_quantile(0.5, 3) == 0);
  CHECK(std::isnan(student_t_quantile(0.0, 3)));
  CHECK(std::isnan(student_t_quantile(1.0, 3)));
  CHECK(std::isnan(student_t_quantile(std::nan(""), 3)));
  CHECK(std::isnan(student_t_quantile(0.9, 0)));
}
