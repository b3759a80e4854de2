#include "model/noise_transform.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <functional>

#include "model/noise_rician.h"

using namespace stillfield;

namespace {

struct MeanAndSd {
  double mean = 0.0, sd = 0.0;
};

// Moments of t.forward(y) for y = offset + gain k + n, by the sum over k and Simpson's rule over n.
MeanAndSd photon_moments(const VarianceTransform& t, double gain, double read, double offset,
                         double counts) {
  double m1 = 0.0, m2 = 0.0, total = 0.0;
  const int last = static_cast<int>(counts + 12.0 * std::sqrt(counts + 1.0) + 12.0);
  for (int k = 0; k <= last; ++k) {
    const double p = counts == 0.0 ? (k == 0 ? 1.0 : 0.0)
                                   : std::exp(k * std::log(counts) - counts - std::lgamma(k + 1.0));
    const int steps = read > 0.0 ? 160 : 0;
    for (int i = 0; i <= steps; ++i) {
      const double n = steps == 0 ? 0.0 : -8.0 + 16.0 * i / steps;
      const double simpson = i == 0 || i == steps ? 1.0 : i % 2 == 1 ? 4.0 : 2.0;
      const double w = p * simpson * std::exp(-0.5 * n * n);
      const double z = t.forward(offset + gain * k + read * n);
      total += w;
      m1 += w * z;
      m2 += w * z * z;
    }
  }
  return {m1 / total, std::sqrt(m2 / total - m1 * m1 / total / total)};
}

MeanAndSd rician_moments(const VarianceTransform& t, double sd, double signal) {
  double m1 = 0.0, m2 = 0.0, total = 0.0;
  for (double r = 0.002; r < signal + 9.0; r += 0.004) {
    // Rice 1944, with the standard library's Bessel function.
    const double w = r * std::exp(-0.5 * (r - signal) * (r - signal)) *
                     std::cyl_bessel_i(0.0, r * signal) * std::exp(-r * signal);
    const double z = t.forward(sd * r);
    total += w;
    m1 += w * z;
    m2 += w * z * z;
  }
  return {m1 / total, std::sqrt(m2 / total - m1 * m1 / total / total)};
}

}  // namespace

TEST_CASE("photon transform: unit deviation and an unbiased inverse") {
  struct Case {
    double gain, read, offset;
  };
  for (const Case& c : {Case{1.0, 0.0, 0.0}, Case{2.0, 1.0, 100.0}, Case{0.5, 2.0, 10.0}}) {
    const auto t = make_transform(given_photon_noise(c.gain, c.read * c.read, c.offset, 100.0));
    for (const double counts : {1.0, 2.0, 5.0, 20.0, 100.0}) {
      const MeanAndSd z = photon_moments(*t, c.gain, c.read, c.offset, counts);
      const double back = (t->point_inverse(z.mean) - c.offset) / c.gain;
      CAPTURE(c.gain, c.read, counts, z.mean, z.sd, back);
      // The closed form's error, measured here: below 0.04 of a count.
      CHECK(back == Approx(counts).margin(0.04));
      if (counts >= 5.0) CHECK(z.sd == Approx(1.0).margin(0.03));
    }
    CHECK(t->sd() == 1.0);
  }
}

TEST_CASE("photon inverse is monotone, at least the offset, and has the stated slope") {
  const auto t = make_transform(given_photon_noise(2.0, 9.0, 50.0, 100.0));
  double last = 0.0;
  for (double z = 0.0; z < 60.0; z += 0.05) {
    const double x = t->point_inverse(z);
    CHECK(x >= 50.0);
    CHECK(x >= last);
    if (x > 50.5) {
      const double difference = (t->point_inverse(z + 1e-4) - t->point_inverse(z - 1e-4)) / 2e-4;
      CHECK(t->slope(z) == Approx(difference).epsilon(1e-5));
    }
    last = x;
  }
}

TEST_CASE("the mean inverse is exact for the square that photon noise leads to") {
  // E[z^2/4] = (m^2 + v)/4: the spread of z adds gain v / 4, up to the inverse's small terms.
  const auto t = make_transform(given_photon_noise(4.0, 0.0, 0.0, 100.0));
  CHECK(t->mean_inverse(40.0, 0.09) - t->point_inverse(40.0) ==
        Approx(4.0 * 0.09 / 4).epsilon(1e-3));
  CHECK(t->mean_inverse(40.0, 0.0) == Approx(t->point_inverse(40.0)));
}

TEST_CASE("Gaussian noise needs no transform") {
  const auto t = make_transform(given_gaussian_noise(3.0));
  CHECK(t->forward(7.5) == 7.5);
  CHECK(t->point_inverse(-7.5) == -7.5);
  CHECK(t->mean_inverse(7.5, 4.0) == Approx(7.5));
  CHECK(t->slope(1.0) == 1.0);
  CHECK(t->sd() == 3.0);
}

TEST_CASE("Rician moments against direct integration and Rayleigh's values") {
  CHECK(rician_mean(0.0) == Approx(std::sqrt(M_PI / 2)).epsilon(kRicianMaxRelError));
  CHECK(rician_variance(0.0) == Approx(2.0 - M_PI / 2).epsilon(kRicianMaxRelError));
  for (const double s : {0.3, 1.0, 2.5, 5.0, 9.0, 15.0}) {
    // E y = sqrt(pi/2) L_{1/2}(-s^2/2) in the standard library's Bessel functions.
    const double q = 0.25 * s * s;
    const double mean =
        std::sqrt(M_PI / 8) * std::exp(-q) *
        ((2 + s * s) * std::cyl_bessel_i(0.0, q) + s * s * std::cyl_bessel_i(1.0, q));
    CHECK(rician_mean(s) == Approx(mean).epsilon(kRicianMaxRelError));
    CHECK(rician_signal(rician_mean(s) / std::sqrt(rician_variance(s))) == Approx(s).epsilon(1e-6));
  }
  CHECK(rician_signal(1.5) == 0.0);
  // The series beyond s = 30 continues the difference of squares.
  CHECK(rician_variance(30.001) == Approx(rician_variance(29.999)).epsilon(1e-7));
}

TEST_CASE("Rician transform: nearly unit deviation and an unbiased inverse") {
  const double sd = 7.0;
  const auto t = make_transform(given_rician_noise(sd));
  for (const double s : {0.5, 1.0, 1.5, 2.0, 3.0, 5.0, 10.0, 20.0}) {
    const MeanAndSd z = rician_moments(*t, sd, s);
    CAPTURE(s, z.mean, z.sd);
    CHECK(z.sd > 0.9);
    CHECK(z.sd < 1.07);
    CHECK(t->point_inverse(z.mean) == Approx(sd * s).epsilon(0.01).margin(0.02 * sd));
  }
  double last = 0.0;
  for (double z = 0.0; z < 40.0; z += 0.01) {
    const double x = t->point_inverse(z);
    CHECK(x >= last);
    last = x;
  }
  CHECK(t->slope(t->forward(20.0 * sd)) == Approx(sd).epsilon(0.01));
}
