#include "diagnose/autocovariance.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "diagnose/fourier.h"
#include "diagnose/test_random.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("autocovariance by hand") {
  // 1 2 3 4 5 centred: -2 -1 0 1 2; lag 1: (2 + 0 + 0 + 2) / 5, lag 2: (0 - 1 + 0) / 5,
  // lag 3: (-2 - 2) / 5, lag 4: -4 / 5.
  const Draws x({-2, -1, 0, 1, 2}, 1);
  MeanAutocovariance covariance(x);
  const std::vector<double> want = {2.0, 0.8, -0.2, -0.8, -0.8, 0.0, 0.0};
  for (std::size_t lag = 0; lag < want.size(); ++lag) {
    CHECK(covariance.at(lag) == Approx(want[lag]).margin(1e-15));
  }
}

TEST_CASE("autocovariances by transform equal the sums of products") {
  TestRandom random(51);
  const std::size_t n = GENERATE(as<std::size_t>{}, 65, 128, 129, 1000);
  const std::size_t m = GENERATE(as<std::size_t>{}, 1, 2, 3, 8);
  const Draws x = normal_draws(random, n, m);
  MeanAutocovariance covariance(x);
  for (std::size_t lag = 0; lag <= n; ++lag) {
    double want = 0;
    for (std::size_t c = 0; c < m; ++c) {
      for (std::size_t i = 0; i + lag < n; ++i) want += x.chain(c)[i] * x.chain(c)[i + lag];
    }
    CAPTURE(n, m, lag);
    REQUIRE(covariance.at(lag) == Approx(want / static_cast<double>(n * m)).margin(1e-14));
  }
}

TEST_CASE("the Fourier transform against its defining sum, and there and back") {
  const std::size_t length = GENERATE(as<std::size_t>{}, 2, 4, 8, 64, 512);
  TestRandom random(52);
  ComplexSignal z(length);
  for (std::size_t j = 0; j < length; ++j) {
    z.re[j] = random.normal();
    z.im[j] = random.normal();
  }
  const FourierTransform transform(length);
  ComplexSignal spectrum = z;
  transform.forward(spectrum);
  const double bound = 1e-15 * static_cast<double>(length);
  for (std::size_t k = 0; k < length; ++k) {
    double re = 0;
    double im = 0;
    for (std::size_t j = 0; j < length; ++j) {
      const double angle =
          -2 * kPi * static_cast<double>(j * k % length) / static_cast<double>(length);
      re += z.re[j] * std::cos(angle) - z.im[j] * std::sin(angle);
      im += z.re[j] * std::sin(angle) + z.im[j] * std::cos(angle);
    }
    std::size_t reversed = 0;
    for (std::size_t bit = 1; bit < length; bit *= 2) reversed = 2 * reversed + (k & bit ? 1 : 0);
    CHECK(spectrum.re[reversed] == Approx(re).margin(10 * bound));
    CHECK(spectrum.im[reversed] == Approx(im).margin(10 * bound));
  }
  transform.backward(spectrum);
  for (std::size_t j = 0; j < length; ++j) {
    CHECK(spectrum.re[j] == Approx(z.re[j]).margin(bound));
    CHECK(spectrum.im[j] == Approx(z.im[j]).margin(bound));
  }
}
