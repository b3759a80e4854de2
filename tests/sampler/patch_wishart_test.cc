#include "sampler/patch_wishart.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "simd/patch_batch.h"

using namespace stillfield;
using namespace stillfield::testing;

TEST_CASE("Bartlett triangles give Wishart matrices") {
  // W = B'B ~ Wishart(n, I): mean n I, variance n off the diagonal and 2n on it (closed form).
  // 16 * 250 = 4000 matrices; 36 entries within 4.5 standard errors: false alarm 2.5e-4.
  constexpr int kSize = 8;
  constexpr int kDegrees = 12;
  constexpr int kRounds = 250;
  AlignedBuffer<float> triangle = GroupMemory::lanes(static_cast<int>(triangle_elements(kSize)));
  Eigen::MatrixXd sum = Eigen::MatrixXd::Zero(kSize, kSize);
  for (std::uint32_t round = 0; round < kRounds; ++round) {
    fill_bartlett({{81, 82}, 5, round}, kSize, kDegrees, triangle.data());
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      const Eigen::MatrixXd b = lane_triangle(triangle, kSize, lane);
      sum += b.transpose() * b;
    }
  }
  const double n = kRounds * kPatchLanes;
  for (int i = 0; i < kSize; ++i) {
    for (int j = 0; j <= i; ++j) {
      CAPTURE(i, j);
      const double expected = i == j ? kDegrees : 0.0;
      const double error = std::sqrt((i == j ? 2.0 : 1.0) * kDegrees / n);
      CHECK(std::abs(sum(i, j) / n - expected) < 4.5 * error);
    }
  }
}

TEST_CASE("the diagonal's squares follow their chi-square distributions") {
  // The last diagonal element has all degrees, the first the fewest. 6400 draws: mean and
  // variance within 4.5 standard errors (excess kurtosis of chi-square: 12 / degrees).
  constexpr int kSize = 4;
  constexpr int kDegrees = 9;
  constexpr int kRounds = 400;
  AlignedBuffer<float> triangle = GroupMemory::lanes(static_cast<int>(triangle_elements(kSize)));
  double sum[kSize] = {}, square[kSize] = {};
  for (std::uint32_t round = 0; round < kRounds; ++round) {
    fill_bartlett({{83, 84}, round, 3}, kSize, kDegrees, triangle.data());
    for (int i = 0; i < kSize; ++i) {
      for (int lane = 0; lane < kPatchLanes; ++lane) {
        const double b =
            double{triangle[static_cast<std::size_t>(triangle_at(i, i) * kPatchLanes + lane)]};
        sum[i] += b * b;
        square[i] += b * b * b * b;
      }
    }
  }
  const double n = kRounds * kPatchLanes;
  for (int i = 0; i < kSize; ++i) {
    CAPTURE(i);
    const double degrees = kDegrees - (kSize - 1 - i);
    const double mean = sum[i] / n;
    const double variance = square[i] / n - mean * mean;
    CHECK(std::abs(mean - degrees) < 4.5 * std::sqrt(2.0 * degrees / n));
    CHECK(std::abs(variance - 2.0 * degrees) <
          4.5 * 2.0 * degrees * std::sqrt((2.0 + 12.0 / degrees) / n));
  }
}
