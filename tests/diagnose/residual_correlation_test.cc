#include "diagnose/residual_correlation.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

namespace {

Volume<std::uint8_t> all_usable(Extent e) {
  Volume<std::uint8_t> usable(e);
  for (int y = 0; y < e.height; ++y) std::fill_n(usable.row(y), e.width, std::uint8_t{1});
  return usable;
}

Volume<float> white(int side, std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation, 6);
  Volume<float> out({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) out.at(x, y) = static_cast<float>(random.normal());
  }
  return out;
}

// Convolved with a Gaussian of this deviation, around the edges.
Volume<float> blurred(const Volume<float>& in, double sigma) {
  const int side = in.width();
  Volume<float> out({side, side});
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) {
      double sum = 0.0;
      for (int v = -3; v <= 3; ++v) {
        for (int u = -3; u <= 3; ++u) {
          sum += std::exp(-0.5 * (u * u + v * v) / (sigma * sigma)) *
                 in.at((x + u + side) % side, (y + v + side) % side);
        }
      }
      out.at(x, y) = static_cast<float>(sum);
    }
  }
  return out;
}

}  // namespace

TEST_CASE("white noise is not called correlated, and its p-values are honest") {
  // 200 fields. Rejections at p < 0.1 at most binomial(200, 0.1): more than 34 has probability 1e-3
  // (the Bonferroni bound makes them fewer). Mean square of rho / error: 1 less what the plane fit
  // takes, 0.8 to 1.1.
  int small = 0;
  double square = 0.0;
  for (std::uint64_t i = 0; i < 200; ++i) {
    const NoiseCorrelation c =
        noise_correlation(white(160, i).view(), all_usable({160, 160}).view(), 2);
    CHECK_FALSE(c.correlated);
    CHECK(c.sentence.empty());
    small += c.p_value < 0.1;
    const double z = c.at(1, 0) / c.error[c.index(1, 0)];
    square += z * z / 200.0;
  }
  CHECK(small <= 34);
  CHECK(small >= 4);
  CHECK(square > 0.65);
  CHECK(square < 1.35);
}

TEST_CASE("noise blurred by one pixel is always noticed, by half a pixel as well") {
  for (const double sigma : {0.5, 1.0}) {
    for (std::uint64_t i = 0; i < 20; ++i) {
      const NoiseCorrelation c = noise_correlation(blurred(white(128, 300 + i), sigma).view(),
                                                   all_usable({128, 128}).view(), 2);
      CAPTURE(sigma, c.at(1, 0), c.p_value);
      CHECK(c.correlated);
      CHECK_FALSE(c.sentence.empty());
    }
  }
}

TEST_CASE("the covariance of moving-average noise is found") {
  // e_x = n_x + n_{x+1}: rho(1,0) = 1/2, all other lags 0. Choosing quiet blocks lowers it a
  // little.
  const Volume<float> n = white(301, 400);
  Volume<float> e({300, 300});
  for (int y = 0; y < 300; ++y) {
    for (int x = 0; x < 300; ++x) e.at(x, y) = n.at(x, y) + n.at(x + 1, y);
  }
  const NoiseCorrelation c = noise_correlation(e.view(), all_usable({300, 300}).view(), 2);
  CHECK(c.at(0, 0) == 1.0);
  CHECK(c.at(1, 0) == Approx(0.5).margin(0.06));
  CHECK(c.at(-1, 0) == c.at(1, 0));
  CHECK(c.at(0, 1) == Approx(0.0).margin(0.06));
  CHECK(c.at(2, 0) == Approx(0.0).margin(0.06));
}

TEST_CASE("edges and slopes under white noise do not matter") {
  Volume<float> y = white(160, 500);
  for (int r = 0; r < 160; ++r) {
    for (int x = 0; x < 160; ++x)
      y.at(x, r) += 0.2f * static_cast<float>(x) + (r > 70 ? 50.0f : 0.0f);
  }
  CHECK_FALSE(noise_correlation(y.view(), all_usable({160, 160}).view(), 2).correlated);
}

TEST_CASE("too small an image gives no verdict") {
  const NoiseCorrelation c = noise_correlation(white(24, 1).view(), all_usable({24, 24}).view(), 1);
  CHECK(std::isnan(c.p_value));
  CHECK_FALSE(c.correlated);
  CHECK(c.rho.size() == 9);
}

TEST_CASE("plain autocorrelation of residuals, with its standard error") {
  Volume<float> y({4, 1});
  for (int x = 0; x < 4; ++x) y.at(x, 0) = x % 2 == 0 ? 1.0f : -1.0f;
  Volume<std::uint8_t> usable = all_usable({4, 1});
  NoiseCorrelation c = residual_autocorrelation(y.view(), usable.view(), 1);
  CHECK(c.at(1, 0) == -1.0);
  CHECK(c.error[c.index(1, 0)] == Approx(1.0 / std::sqrt(3.0)));
  usable.at(3, 0) = 0;
  c = residual_autocorrelation(y.view(), usable.view(), 1);
  CHECK(c.error[c.index(1, 0)] == Approx(1.0 / std::sqrt(2.0)));
}
