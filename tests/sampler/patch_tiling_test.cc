#include "sampler/patch_tiling.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <utility>
#include <vector>

#include "random/stream.h"
#include "sampler/patch_grid.h"
#include "sampler/patch_labels.h"
#include "sampler/patch_moments_reference.h"
#include "simd/patch_density.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

constexpr PhiloxKey kKey{71, 72};

// In the tables' noise units around `centre`.
Volume<float> noisy_field(int width, int height, std::uint32_t seed) {
  Volume<float> v({width, height, 1});
  RandomStream random({seed, 1}, Purpose::kSimulation);
  double drift = 0.0;
  for (int y = 0; y < height; ++y) {
    for (int x = 0; x < width; ++x) {
      drift = 0.9 * drift + random.normal();
      v.at(x, y) = static_cast<float>(drift + random.normal());
    }
  }
  return v;
}

Eigen::VectorXd patch_at(const Volume<float>& v, int side, int x, int y) {
  Eigen::VectorXd out(side * side);
  for (int i = 0; i < side * side; ++i) out[i] = double{v.at(x + i % side, y + i / side)};
  return out;
}

// Tables for noise of a moving average; 0: white.
PatchTables tables_of(const PatchMixture& mixture, double noise_sd, double centre, double average) {
  if (average == 0.0) {
    return make_patch_tables(mixture, noise_sd, centre, TableParts::kAll, Pool(1));
  }
  const PatchNoise noise = patch_noise(moving_average_model(average, 2), mixture.side);
  return make_patch_tables(mixture, noise_sd, centre, TableParts::kAll, Pool(1), &noise);
}

}  // namespace

TEST_CASE("grids cover every pixel once or more and stay inside") {
  for (const int length : {16, 17, 18, 23, 24, 40, 41}) {
    for (const int side : {4, 6, 8}) {
      for (const int step : {side / 2, side}) {
        for (int offset = 0; offset < step; ++offset) {
          const std::vector<int> positions = covering_positions(length, side, step, offset);
          std::vector<int> cover(static_cast<std::size_t>(length), 0);
          for (std::size_t i = 0; i < positions.size(); ++i) {
            REQUIRE(positions[i] >= 0);
            REQUIRE(positions[i] + side <= length);
            if (i > 0) REQUIRE(positions[i] > positions[i - 1]);
            for (int p = 0; p < side; ++p) ++cover[static_cast<std::size_t>(positions[i] + p)];
          }
          for (const int c : cover) REQUIRE(c >= 1);
        }
      }
    }
  }
}

TEST_CASE("label probabilities of a patch agree with enumeration") {
  constexpr double kNoise = 6.0;
  for (const auto& [side, average] : {std::pair(4, 0.0), {6, 0.0}, {4, 0.8}, {6, 0.8}}) {
    const PatchMixture mixture = smooth_mixture(side, 100.0);
    const PatchTables tables = tables_of(mixture, kNoise, 100.0, average);
    const Eigen::MatrixXd noise = noise_covariance(side, kNoise, average);
    const Volume<float> value = noisy_field(24, 24, 1);
    std::vector<PatchPosition> where;
    for (int i = 0; i < 40; ++i) where.push_back({i % 17, (i * 5) % 17});
    PatchLabeller labeller(tables);
    labeller.weigh(value, where);
    for (int i = 0; i < 40; ++i) {
      const PatchPosition at = where[static_cast<std::size_t>(i)];
      const Eigen::VectorXd y = (kNoise * patch_at(value, side, at.x, at.y)).array() + 100.0;
      const PatchPosterior expected = patch_posterior(mixture, noise, y);
      double sum = 0.0;
      for (int k = 0; k < 3; ++k) {
        CAPTURE(mixture.side, i, k);
        const double share = expected.share[static_cast<std::size_t>(k)];
        CHECK(double{labeller.probability(k, i)} == Approx(share).margin(2e-4));
        if (share > 0.01) CHECK(labeller.label(i, sum + 0.5 * share) == k);
        sum += share;
      }
    }
  }
}

TEST_CASE("a tiling's pooled moments agree with the closed form of each of its patches") {
  constexpr double kNoise = 6.0;
  for (const auto& [side, average] : {std::pair(4, 0.0), {6, 0.0}, {4, 0.8}, {6, 0.8}}) {
    const PatchMixture mixture = smooth_mixture(side, 100.0);
    const PatchTables tables = tables_of(mixture, kNoise, 100.0, average);
    const Eigen::MatrixXd noise = noise_covariance(side, kNoise, average);
    const Volume<float> value = noisy_field(29, 22, 2);
    for (std::uint32_t sweep = 0; sweep < 3; ++sweep) {
      PatchSums sums(value);
      sweep_tiling(value, tables, kKey, sweep, Pool(2), sums);
      RandomStream stream(kKey, Purpose::kTiling, sweep, 7);
      const int dx = static_cast<int>(stream.uniform() * side);
      const int dy = static_cast<int>(stream.uniform() * side);
      Eigen::MatrixXd weight = Eigen::MatrixXd::Zero(29, 22);
      Eigen::MatrixXd first = weight, second = weight, count = weight;
      for (const int y0 : covering_positions(22, side, side, dy)) {
        for (const int x0 : covering_positions(29, side, side, dx)) {
          const Eigen::VectorXd y = (kNoise * patch_at(value, side, x0, y0)).array() + 100.0;
          const PatchPosterior p = patch_posterior(mixture, noise, y);
          for (int i = 0; i < side * side; ++i) {
            const int x = x0 + i % side, row = y0 + i / side;
            weight(x, row) += 1.0 / p.variance[i];
            first(x, row) += p.mean[i] / p.variance[i];
            second(x, row) += p.mean[i] * p.mean[i] / p.variance[i];
            count(x, row) += 1.0;
          }
        }
      }
      for (int y = 0; y < 22; ++y) {
        for (int x = 0; x < 29; ++x) {
          const double mean = first(x, y) / weight(x, y);
          const double variance =
              count(x, y) / weight(x, y) + second(x, y) / weight(x, y) - mean * mean;
          // Labels of a share below 1e-3 are left out: some hundredths of the noise at most.
          REQUIRE(std::abs(double{sums.mean(x, y)} * kNoise + 100.0 - mean) < 0.02 * kNoise);
          REQUIRE(std::abs(double{sums.variance(x, y)} * kNoise * kNoise - variance) <
                  0.02 * kNoise * kNoise);
        }
      }
    }
  }
}

TEST_CASE("deviations drawn on tilings have the conditional covariance") {
  // One component: the deviations of a patch have the correlation matrix of the posterior, so a
  // product of two has a variance of at most 2; asserted 5 standard errors (16 x 17 / 2 entries:
  // false alarm below 1e-4).
  constexpr int kSide = 4;
  PatchMixture mixture = smooth_mixture(kSide, 0.0);
  mixture.components.resize(1);
  mixture.components[0].weight = 1.0;
  const double average = GENERATE(0.0, 0.8);
  const PatchTables tables = tables_of(mixture, 3.0, 0.0, average);
  const Volume<float> value = noisy_field(16, 16, 3);
  const Eigen::Map<const Eigen::MatrixXd> covariance(mixture.components[0].covariance.data(), 16,
                                                     16);
  const Eigen::MatrixXd total = covariance + noise_covariance(kSide, 3.0, average);
  const Eigen::MatrixXd posterior = covariance - covariance * total.inverse() * covariance;
  Eigen::MatrixXd sum = Eigen::MatrixXd::Zero(16, 16);
  int patches = 0;
  const Pool pool(1);
  for (std::uint32_t sweep = 0; sweep < 600; ++sweep) {
    const Volume<float> deviation = draw_tiling_deviation(value, tables, kKey, sweep, pool);
    RandomStream stream(kKey, Purpose::kTiling, sweep, 7);
    const int dx = static_cast<int>(stream.uniform() * kSide);
    const int dy = static_cast<int>(stream.uniform() * kSide);
    for (int y = dy; y + kSide <= 12; y += kSide) {
      for (int x = dx; x + kSide <= 12; x += kSide) {
        const Eigen::VectorXd e = patch_at(deviation, kSide, x, y);
        // Patches that a border patch may overwrite are left out.
        if (x < kSide - 1 && dx > 0 && x == dx) continue;
        if (y < kSide - 1 && dy > 0 && y == dy) continue;
        sum += e * e.transpose();
        ++patches;
      }
    }
  }
  REQUIRE(patches > 1500);
  const double tolerance = 5.0 * std::sqrt(2.0 / patches);
  for (int i = 0; i < 16; ++i) {
    for (int j = 0; j <= i; ++j) {
      const double correlation = posterior(i, j) / std::sqrt(posterior(i, i) * posterior(j, j));
      REQUIRE(std::abs(sum(i, j) / patches - correlation) < tolerance);
    }
  }
}
