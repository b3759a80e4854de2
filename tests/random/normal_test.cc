#include "random/normal.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "random/counters.h"

using namespace stillfield;

namespace {

// P(Z > z); the error of erfc (some 1e-16 of itself) is far below the bounds.
double upper_tail(double z) {
  return 0.5 * std::erfc(z / std::sqrt(2.0));
}

double tail_of(std::uint32_t word) {
  return (word + 0.5) / 4294967296.0;
}

std::vector<float> draw(int n) {
  std::vector<float> z;
  for (std::uint32_t i = 0; static_cast<int>(z.size()) < n; ++i) {
    for (const std::uint32_t w : philox4x32({i, 0, 0, 0}, {20261201, 3})) {
      z.push_back(standard_normal(w));
    }
  }
  return z;
}

}  // namespace

TEST_CASE("a normal number is the quantile of its word within the stated errors") {
  // Against erfc. Every word of the far tail, then a stride that is coprime to powers of two.
  double worst = 0.0, worst_of_tail = 0.0;
  for (std::uint64_t m = 0; m < (1ull << 31); m += m < 4096 ? 1 : 5003) {
    const auto word = static_cast<std::uint32_t>(m);
    const double error = std::fabs(upper_tail(standard_normal(word)) - tail_of(word));
    worst = std::max(worst, error);
    worst_of_tail = std::max(worst_of_tail, error / tail_of(word));
  }
  CHECK(worst <= kNormalMaxCdfError);
  CHECK(worst_of_tail <= kNormalMaxTailError);
  CHECK(worst > 0.5 * kNormalMaxCdfError);  // the constants are not idle
  CHECK(worst_of_tail > 0.5 * kNormalMaxTailError);
}

TEST_CASE("normal numbers are symmetric and reach beyond six") {
  for (std::uint64_t m = 0; m < (1ull << 31); m += 100003) {
    const auto word = static_cast<std::uint32_t>(m);
    REQUIRE(standard_normal(~word) == -standard_normal(word));
  }
  CHECK(standard_normal(0u) > 6.3f);
  CHECK(standard_normal(~0u) < -6.3f);
  CHECK(std::fabs(standard_normal(0x7fffffffu)) < 1e-5f);
}

TEST_CASE("normal numbers can be computed by the compiler") {
  STATIC_REQUIRE(standard_normal(0u) > 6.3f);
  STATIC_REQUIRE(standard_normal(0x80000000u) == -standard_normal(0x7fffffffu));
}

TEST_CASE("normal numbers follow the normal distribution function") {
  // Kolmogorov 1933: P(sqrt n D > 1.9495) = 1e-3 for large n.
  constexpr int kDraws = 1000000;
  std::vector<float> z = draw(kDraws);
  std::sort(z.begin(), z.end());
  double distance = 0.0;
  for (int i = 0; i < kDraws; ++i) {
    const double below = 1.0 - upper_tail(z[static_cast<std::size_t>(i)]);
    distance = std::max({distance, below - static_cast<double>(i) / kDraws,
                         static_cast<double>(i + 1) / kDraws - below});
  }
  CHECK(distance * std::sqrt(static_cast<double>(kDraws)) < 1.9495);
}

TEST_CASE(
    "normal numbers fill classes of equal probability, and the tails, as often as they should") {
  constexpr int kDraws = 4000000;
  constexpr int kClasses = 64;
  std::vector<int> count(kClasses);
  int beyond[3] = {};  // 3, 4, 5
  double sum = 0.0, squares = 0.0;
  for (const float z : draw(kDraws)) {
    const double below = 1.0 - upper_tail(z);
    ++count[static_cast<std::size_t>(std::min(below * kClasses, kClasses - 1.0))];
    for (int i = 0; i < 3; ++i) beyond[i] += std::fabs(z) > static_cast<float>(3 + i);
    sum += z;
    squares += static_cast<double>(z) * z;
  }
  double chi_squared = 0.0;
  const double expected = static_cast<double>(kDraws) / kClasses;
  for (const int n : count) chi_squared += (n - expected) * (n - expected) / expected;
  // chi-squared with 63 degrees of freedom exceeds 103.44 with probability 1e-3 (SciPy).
  CHECK(chi_squared < 103.44);
  // Counts beyond 3, 4, 5 are Poisson to a good approximation: 3.5 deviations, false alarm 5e-4
  // each.
  for (int i = 0; i < 3; ++i) {
    const double mean = 2.0 * kDraws * upper_tail(3.0 + i);
    CAPTURE(i, beyond[i], mean);
    CHECK(std::fabs(beyond[i] - mean) < 3.5 * std::sqrt(mean));
  }
  CHECK(std::fabs(sum) < 3.5 * std::sqrt(static_cast<double>(kDraws)));
  CHECK(std::fabs(squares - kDraws) < 3.5 * std::sqrt(2.0 * kDraws));
}
