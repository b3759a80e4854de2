// Each discrepancy of the model checks against a value worked out by other means.
#include <catch2/catch.hpp>
#include <cmath>

#include "diagnose/border_pull.h"
#include "diagnose/local_noise.h"
#include "diagnose/normal_probability.h"
#include "diagnose/residual_histogram.h"
#include "diagnose/slow_trend.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

// A whole block of inner pixels of class 1, residuals zero.
ResidualBlock plain_block() {
  ResidualBlock block;
  block.width = block.height = kResidualBlock;
  block.label.fill(1);
  block.inner.fill(1);
  block.residual.fill(0.0F);
  return block;
}

std::size_t at(int x, int y) {
  return static_cast<std::size_t>(y * kResidualBlock + x);
}

// White noise through x_t = rho x_{t-1} + sqrt(1 - rho^2) n along rows: correlation rho there.
void fill_autoregressive(double rho, RandomStream& random, ResidualBlock& block) {
  for (int y = 0; y < kResidualBlock; ++y) {
    double x = random.normal();
    for (int u = 0; u < kResidualBlock; ++u) {
      block.residual[at(u, y)] = static_cast<float>(x);
      x = rho * x + std::sqrt(1 - rho * rho) * random.normal();
    }
  }
}

GreyLevels grey_scale(int levels, double origin, double step) {
  GreyLevels grey;
  grey.levels = levels;
  grey.origin = origin;
  grey.step = step;
  return grey;
}

}  // namespace

TEST_CASE("columns of +1 and -1 have Moran's I of -1 along x and +1 along y") {
  ResidualBlock block = plain_block();
  for (int y = 0; y < kResidualBlock; ++y) {
    for (int x = 0; x < kResidualBlock; ++x) block.residual[at(x, y)] = x % 2 == 0 ? 1.F : -1.F;
  }
  LocalNoise noise(1);
  noise.add(block);
  CHECK(noise.along_x() == Approx(-1.0));
  CHECK(noise.along_y() == Approx(1.0));
  // Variance 256 / 255: spread (1 / 255)^2.
  CHECK(noise.spread() == Approx(1.0 / (255.0 * 255.0)));
}

TEST_CASE("Moran's I of a cell worked by hand, its neighbours of another class left out") {
  // Class 1 fills the left 4 columns. In them rows alternate 2, 0: mean 1, centred +1, -1.
  // Along x every pair has product 1, along y -1; the mean square is 1. Class 2 is constant 3, so
  // centred 0: 12 columns add 16 * 12 zero squares and 16 * 11 zero pairs along x, 15 * 12 along y.
  ResidualBlock block = plain_block();
  for (int y = 0; y < kResidualBlock; ++y) {
    for (int x = 0; x < kResidualBlock; ++x) {
      block.inner[at(x, y)] = x < 4 ? 1 : 2;
      block.residual[at(x, y)] = x < 4 ? (y % 2 == 0 ? 2.F : 0.F) : 3.F;
    }
  }
  LocalNoise noise(2);
  noise.add(block);
  const double mean_square = 64.0 / 256.0;
  CHECK(noise.along_x() == Approx((16.0 * 3) / (16 * 3 + 16 * 11) / mean_square));
  CHECK(noise.along_y() == Approx(-(15.0 * 4) / (15 * 4 + 15 * 12) / mean_square));
}

TEST_CASE("autoregressive noise shows its correlation along rows and none along columns") {
  // 400 blocks, 96000 pairs: standard error about 0.0035, bound of 4.5 of them, false alarm 1e-5.
  // Taking the cell's mean off removes from every product the variance of that mean,
  // (1 + rho) / (1 - rho) / 256 nearly, and as much from the square.
  RandomStream random(chain_key(5, 0), Purpose::kSimulation);
  for (const double rho : {0.0, 0.3, 0.6}) {
    LocalNoise noise(1);
    ResidualBlock block = plain_block();
    for (int i = 0; i < 400; ++i) {
      fill_autoregressive(rho, random, block);
      noise.add(block);
    }
    const double lost = (1 + rho) / (1 - rho) / 256;
    CHECK(noise.along_x() == Approx((rho - lost) / (1 - lost)).margin(0.016));
    CHECK(noise.along_y() == Approx(-lost / (1 - lost)).margin(0.016));
  }
}

TEST_CASE("the spread of white noise is 2 / (n - 1), and that of two levels adds their variation") {
  // Half of 800 blocks with variance 1.5, half with 0.5: relative variation 0.5^2 = 0.25, and each
  // variance v scatters by 2 v^2 / 255. Monte Carlo error of the mean below 0.005; bound 0.02.
  RandomStream random(chain_key(6, 0), Purpose::kSimulation);
  LocalNoise even(1), uneven(1);
  ResidualBlock block = plain_block();
  for (int i = 0; i < 800; ++i) {
    fill_autoregressive(0.0, random, block);
    even.add(block);
    for (float& e : block.residual) e *= static_cast<float>(std::sqrt(i % 2 == 0 ? 1.5 : 0.5));
    uneven.add(block);
  }
  CHECK(even.spread() == Approx(2.0 / 255).margin(0.002));
  CHECK(uneven.spread() == Approx(0.25 + 2.0 / 255 * 1.25).margin(0.02));
}

TEST_CASE("a cell of fewer pixels than kFewestCellPixels counts for nothing") {
  ResidualBlock block = plain_block();
  block.inner.fill(0);
  for (std::size_t i = 0; i < kFewestCellPixels - 1; ++i) block.inner[i] = 1;
  LocalNoise noise(1);
  noise.add(block);
  CHECK(std::isnan(noise.spread()));
  CHECK(std::isnan(noise.along_x()));
}

TEST_CASE("the histogram distance of a point mass and of a shifted normal are known") {
  // Levels so fine that rounding hardly matters. All residuals at 0: F jumps from 0 to 1 at the
  // median, distance 1/2.
  const GreyLevels grey = grey_scale(65000, -10.0, 20.0 / 65000);
  const GaussianClasses classes{{0.0}, {1.0}, false};
  ResidualHistogram point(1);
  point.add(plain_block());
  CHECK(point.distance(grey, classes).distance == Approx(0.5).margin(0.013));  // half a bin
  CHECK(point.distance(grey, classes).label == 1);
  // N(0.5, 1) against N(0, 1): 2 Phi(0.25) - 1 = 0.197. 102400 residuals: Kolmogorov's bound at
  // 1e-6 is 2.7 / sqrt(n) = 0.0084.
  RandomStream random(chain_key(7, 0), Purpose::kSimulation);
  ResidualHistogram shifted(1), right(1);
  for (int i = 0; i < 400; ++i) {
    ResidualBlock block = plain_block();
    for (float& e : block.residual) e = static_cast<float>(random.normal());
    right.add(block);
    for (float& e : block.residual) e += 0.5F;
    shifted.add(block);
  }
  CHECK(right.distance(grey, classes).distance < 0.0084);
  CHECK(shifted.distance(grey, classes).distance ==
        Approx(std::erf(0.25 / std::sqrt(2.0))).margin(0.0084));
  // Beyond 4 deviations: erfc(4 / sqrt 2) = 6.3e-5, 6.5 expected of 102400; Poisson bounds 1e-4.
  CHECK(right.far_share() * 102400 <= 19);
}

TEST_CASE("rounding to coarse grey levels is expected by the histogram distance") {
  // sd of 0.8 levels: against the unrounded normal the distance would be about
  // 0.5 / 0.8 * phi(0) = 0.25; against the rounded one it is sampling error alone.
  const GreyLevels grey = grey_scale(256, 0.0, 1.0);
  const GaussianClasses classes{{100.3}, {0.8}, false};
  ResidualHistogram histogram(1);
  for (std::uint32_t i = 0; i < 100; ++i) {
    ResidualBlock block = plain_block();
    block.number = i;
    replicated_residuals(grey, classes, chain_key(3, 0), 0, block);
    histogram.add(block);
  }
  CHECK(histogram.distance(grey, classes).distance < 2.7 / std::sqrt(25600.0));
}

TEST_CASE("distances are weighted by the root of the class's share") {
  // Class 2, a quarter of the pixels, is a point mass at its mean: 1/2 sqrt(1/4). Class 1 is exact:
  // equally spaced quantiles by bisection of the distribution function.
  const GreyLevels grey = grey_scale(65000, -10.0, 20.0 / 65000);
  const GaussianClasses classes{{0.0, 1.0}, {1.0, 1.0}, false};
  ResidualBlock block = plain_block();
  for (std::size_t i = 0; i < 256; ++i) {
    if (i < 64) {
      block.inner[i] = 2;
      continue;
    }
    double low = -8, high = 8;
    for (int step = 0; step < 60; ++step) {
      const double middle = 0.5 * (low + high);
      (normal_probability(middle) < (static_cast<double>(i) - 63.5) / 192 ? low : high) = middle;
    }
    block.residual[i] = static_cast<float>(low);
  }
  ResidualHistogram histogram(2);
  histogram.add(block);
  const HistogramDistance found = histogram.distance(grey, classes);
  CHECK(found.label == 2);
  CHECK(found.distance == Approx(0.25).margin(0.007));
}

TEST_CASE("a slow trend explains what its amplitude says, white noise five parts in n") {
  const Extent extent{96, 96};
  RandomStream random(chain_key(8, 0), Purpose::kSimulation);
  SlowTrend pure(extent), drift(extent);
  double white_share = 0;
  constexpr int kFields = 60;
  for (int field = 0; field < kFields; ++field) {
    SlowTrend white(extent);
    for (ResidualBlock block : residual_blocks(extent)) {
      block.label.fill(1);
      block.inner.fill(1);
      for (int v = 0; v < block.height; ++v) {
        for (int u = 0; u < block.width; ++u) {
          const double x = 2.0 * (block.x + u) / 95 - 1, y = 2.0 * (block.y + v) / 95 - 1;
          block.residual[at(u, v)] = static_cast<float>(0.5 + x - 0.7 * x * y + 0.2 * y * y);
        }
      }
      if (field == 0) pure.add(block);
      ResidualBlock noisy = block;
      for (float& e : noisy.residual) e = static_cast<float>(random.normal());
      white.add(noisy);
      for (int v = 0; v < block.height; ++v) {
        for (int u = 0; u < block.width; ++u) {
          noisy.residual[at(u, v)] += static_cast<float>(2.0 * (block.x + u) / 95 - 1);
        }
      }
      drift.add(noisy);
    }
    white_share += white.share() / kFields;
  }
  CHECK(pure.share() == Approx(1.0).margin(1e-5));
  // x uniform on [-1, 1] has variance 1/3 (96 pixels: 97/95/3): 0.340 / 1.340. Standard error of
  // the share of 552960 residuals below 0.001; bound 0.005.
  CHECK(drift.share() == Approx(97.0 / 285 / (1 + 97.0 / 285)).margin(0.005));
  // Mean of 60 chi-squared of 5 over n: standard error sqrt(10 / 60) / n; bound 4.9 of them, 1e-6.
  CHECK(white_share * 96 * 96 == Approx(5.0).margin(2.0));
}

TEST_CASE("border pixels mixed by a known share show that share") {
  // Left half class 1 at mean 0, right half class 2 at mean 4, sd 1 and 2. The two columns at the
  // border hold 30 % of the other class: residuals 0.3 * 4 / 1 and -0.3 * 4 / 2.
  const GaussianClasses classes{{0.0, 4.0}, {1.0, 2.0}, false};
  ResidualBlock block = plain_block();
  for (int y = 0; y < kResidualBlock; ++y) {
    for (int x = 0; x < kResidualBlock; ++x) block.label[at(x, y)] = x < 8 ? 1 : 2;
    block.residual[at(7, y)] = 1.2F;
    block.residual[at(8, y)] = -0.6F;
  }
  BorderPull border;
  border.add(block, classes);
  CHECK(border.pixels() == 2 * kResidualBlock);
  CHECK(border.pull() == Approx(0.3).epsilon(1e-6));
  // A strip of two pixels is no straight border.
  for (int y = 0; y < kResidualBlock; ++y) block.label[at(10, y)] = 1;
  BorderPull thin;
  thin.add(block, classes);
  CHECK(thin.pixels() == 0);
}
