#include "model/label_scene.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "random/counters.h"

using namespace stillfield;

namespace {

constexpr int kSide = 64;

Volume<std::uint8_t> half_plane() {
  Volume<std::uint8_t> labels({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) labels.at(x, y) = x < kSide / 2 ? 1 : 2;
  }
  return labels;
}

// Grey levels in steps of .001 from -8 to 12, the pixel (3, 3) missing.
GreyLevels levels_of(const Volume<double>& value) {
  GreyLevels grey;
  grey.origin = -8;
  grey.step = 0.001;
  grey.levels = 20001;
  grey.histogram.assign(20001, 0);
  grey.level = Volume<std::uint16_t>(value.extent());
  for (int y = 0; y < value.height(); ++y) {
    for (int x = 0; x < value.width(); ++x) {
      grey.level.at(x, y) =
          static_cast<std::uint16_t>(std::lround((value.at(x, y) - grey.origin) / grey.step));
      if (x == 3 && y == 3) grey.level.at(x, y) = grey.missing();
    }
  }
  grey.observed = value.extent().sites() - 1;
  return grey;
}

}  // namespace

TEST_CASE("a blurred edge follows the normal distribution function") {
  // A step at pixel centres becomes the running sum of the sampled kernel. By the midpoint rule a
  // sample is the integral over its pixel of a Gaussian with variance b^2 - 1/12 (Euler-Maclaurin,
  // to second order; the next term is below 1e-3 for b >= 1), so the sum is
  // Phi(d / sqrt(b^2 - 1/12)) at distance d from the step.
  Volume<double> step({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) step.at(x, y) = x < kSide / 2 ? 0 : 1;
  }
  for (const double b : {1.0, 1.5}) {
    const Volume<double> soft = blurred(step, b);
    for (int x = 20; x < 44; ++x) {
      const double d = x + 0.5 - kSide / 2;
      CAPTURE(b, x);
      const double sd = std::sqrt(b * b - 1.0 / 12);
      CHECK(soft.at(x, 30) == Approx(0.5 * std::erfc(-d / (sd * std::sqrt(2.0)))).margin(1e-3));
    }
  }
  const Volume<double> same = blurred(step, 0);
  CHECK(same.at(31, 5) == 0);
  CHECK(same.at(32, 5) == 1);
}

TEST_CASE("class means and noise of a known scene are found again") {
  const Volume<std::uint8_t> labels = half_plane();
  Volume<double> plane({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) plane.at(x, y) = labels.at(x, y) == 1 ? 1.0 : 3.0;
  }
  const GreyLevels clean = levels_of(blurred(plane, 1.2));
  const GaussianClasses start{{0, 9}, {1, 1}, false};
  const GaussianClasses fit = fit_scene(clean, labels.view(), 1.2, start);
  CHECK(fit.mean[0] == Approx(1).margin(1e-3));
  CHECK(fit.mean[1] == Approx(3).margin(1e-3));
  CHECK(fit.sd[0] < 1e-3);  // rounding to .001

  // 4095 observed pixels with sd .5 and .8: standard errors of the means below .02, of the sds
  // below .015; 4.5 of them, false alarm below 1e-5 each.
  const GaussianClasses classes{{1, 3}, {0.5, 0.8}, false};
  const GreyLevels noisy = simulate_scene(clean, labels.view(), 1.2, classes, chain_key(3, 0));
  CHECK(noisy.level.at(3, 3) == noisy.missing());
  std::int64_t counted = 0;
  for (const std::int64_t n : noisy.histogram) counted += n;
  CHECK(counted == noisy.observed);
  const GaussianClasses again = fit_scene(noisy, labels.view(), 1.2, start);
  CHECK(again.mean[0] == Approx(1).margin(0.09));
  CHECK(again.mean[1] == Approx(3).margin(0.09));
  CHECK(again.sd[0] == Approx(0.5).margin(0.036));
  CHECK(again.sd[1] == Approx(0.8).margin(0.057));

  // Another key, other noise; the same key, the same.
  const GreyLevels same = simulate_scene(clean, labels.view(), 1.2, classes, chain_key(3, 0));
  const GreyLevels other = simulate_scene(clean, labels.view(), 1.2, classes, chain_key(3, 1));
  CHECK(same.histogram == noisy.histogram);
  CHECK(other.histogram != noisy.histogram);

  // A class without pixels keeps where it started.
  const GaussianClasses three{{1, 3, 7}, {1, 1, 2}, false};
  CHECK(fit_scene(clean, labels.view(), 1.2, three).mean[2] == Approx(7));
}
