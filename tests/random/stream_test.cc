// Goodness of fit: every test below raises a false alarm with probability at most 1e-4, and seeds
// are fixed. Reference distributions: Boost.Math (Debian: libboost-dev).
#include "random/stream.h"

#include <algorithm>
#include <boost/math/distributions/chi_squared.hpp>
#include <boost/math/distributions/gamma.hpp>
#include <boost/math/distributions/normal.hpp>
#include <boost/math/distributions/poisson.hpp>
#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

using namespace stillfield;
namespace bm = boost::math;

namespace {

constexpr double kFalseAlarm = 1e-4;

// Kolmogorov's distance and the bound it passes with probability <= kFalseAlarm:
// P(D > e) <= 2 exp(-2 n e^2) (Massart 1990).
template <class Cdf>
void check_distribution(std::vector<double> x, const Cdf& cdf) {
  std::sort(x.begin(), x.end());
  const auto n = static_cast<double>(x.size());
  double distance = 0.0;
  for (std::size_t i = 0; i < x.size(); ++i) {
    const double f = cdf(x[i]);
    distance =
        std::max({distance, f - static_cast<double>(i) / n, static_cast<double>(i + 1) / n - f});
  }
  CHECK(distance < std::sqrt(std::log(2.0 / kFalseAlarm) / (2.0 * n)));
}

// Pearson's chi-squared; `expected` sums to the number of draws, no entry below 5.
void check_counts(const std::vector<double>& observed, const std::vector<double>& expected) {
  double statistic = 0.0;
  for (std::size_t i = 0; i < observed.size(); ++i) {
    REQUIRE(expected[i] >= 5.0);
    statistic += (observed[i] - expected[i]) * (observed[i] - expected[i]) / expected[i];
  }
  const bm::chi_squared law(static_cast<double>(observed.size() - 1));
  CHECK(statistic < bm::quantile(bm::complement(law, kFalseAlarm)));
}

RandomStream stream(std::uint32_t lane) {
  return {{2026, 12}, Purpose::kSimulation, 3, lane};
}

constexpr int kDraws = 200000;

}  // namespace

TEST_CASE("a stream's words are the blocks of its name, and the same in any order of reading") {
  RandomStream a({1, 2}, Purpose::kStart, 4, 5);
  std::vector<std::uint32_t> first;
  for (int i = 0; i < 10; ++i) first.push_back(a.word());
  const PhiloxCounter block =
      philox4x32({1, 5, 4, counter_word3(Purpose::kStart, 7, 0)}, PhiloxKey{1, 2});
  CHECK(std::equal(block.begin(), block.end(), first.begin() + 4));

  RandomStream b({1, 2}, Purpose::kStart, 4, 5);
  RandomStream other({1, 2}, Purpose::kStart, 4, 6);
  int equal = 0;
  for (int i = 0; i < 10; ++i) {
    equal += other.word() == first[static_cast<std::size_t>(i)];
    CHECK(b.word() == first[static_cast<std::size_t>(i)]);
  }
  CHECK(equal == 0);
}

TEST_CASE("words have unbiased bits") {
  RandomStream random = stream(1);
  std::vector<double> ones(32), expected(2, kDraws / 2.0);
  for (int i = 0; i < kDraws; ++i) {
    const std::uint32_t word = random.word();
    for (std::size_t b = 0; b < 32; ++b) ones[b] += word >> b & 1;
  }
  for (const double n : ones) check_counts({n, kDraws - n}, expected);
}

TEST_CASE("uniforms are open at both ends and uniform") {
  CHECK(open_uniform(0) == 0x1p-53);
  CHECK(open_uniform(~std::uint64_t{0}) == 1.0 - 0x1p-53);
  CHECK(open_uniform(std::uint64_t{1} << 63) == 0.5 + 0x1p-53);
  RandomStream random = stream(2);
  std::vector<double> x(kDraws);
  for (double& v : x) v = random.uniform();
  CHECK(*std::min_element(x.begin(), x.end()) > 0.0);
  CHECK(*std::max_element(x.begin(), x.end()) < 1.0);
  check_distribution(x, [](double v) { return v; });
}

TEST_CASE("normals are normal") {
  RandomStream random = stream(3);
  std::vector<double> x(kDraws);
  for (double& v : x) v = random.normal();
  const bm::normal law;
  check_distribution(x, [&law](double v) { return bm::cdf(law, v); });
  const auto beyond3 = static_cast<double>(
      std::count_if(x.begin(), x.end(), [](double v) { return std::fabs(v) > 3.0; }));
  const double expected = kDraws * 2.0 * bm::cdf(law, -3.0);
  check_counts({beyond3, kDraws - beyond3}, {expected, kDraws - expected});
}

TEST_CASE("gamma draws follow the gamma distribution") {
  std::uint32_t lane = 10;
  for (const double shape : {0.05, 0.5, 1.0, 2.5, 40.0, 1e6}) {
    CAPTURE(shape);
    RandomStream random = stream(lane++);
    std::vector<double> x(kDraws);
    for (double& v : x) v = random.gamma(shape);
    const bm::gamma_distribution<> law(shape);
    check_distribution(x, [&law](double v) { return bm::cdf(law, v); });
  }
}

TEST_CASE("Poisson draws follow the Poisson distribution") {
  std::uint32_t lane = 20;
  for (const double mean : {0.1, 1.0, 7.3, 29.9, 31.0, 250.0, 4000.0}) {
    CAPTURE(mean);
    RandomStream random = stream(lane++);
    const bm::poisson law(mean);
    // Bins of equal values between the quantiles that leave 50 draws on either side.
    const double tail = 50.0 / kDraws;
    const auto low = static_cast<std::int64_t>(bm::quantile(law, tail));
    const auto high = static_cast<std::int64_t>(bm::quantile(bm::complement(law, tail)));
    const std::int64_t width = std::max<std::int64_t>(1, (high - low) / 60);
    const auto bins = static_cast<std::size_t>((high - low) / width + 2);
    std::vector<double> observed(bins), expected(bins);
    double below = 0.0;
    for (std::size_t b = 0; b < bins; ++b) {
      const auto last = static_cast<double>(low + width * static_cast<std::int64_t>(b));
      const double upto = b + 1 == bins ? 1.0 : bm::cdf(law, last);
      expected[b] = kDraws * (upto - below);
      below = upto;
    }
    for (int i = 0; i < kDraws; ++i) {
      const std::int64_t bin = (random.poisson(mean) - low + width - 1) / width;
      observed[static_cast<std::size_t>(
          std::clamp<std::int64_t>(bin, 0, static_cast<std::int64_t>(bins) - 1))] += 1.0;
    }
    while (expected.back() < 5.0) {
      expected[expected.size() - 2] += expected.back();
      observed[observed.size() - 2] += observed.back();
      expected.pop_back();
      observed.pop_back();
    }
    check_counts(observed, expected);
  }
  RandomStream random = stream(30);
  for (int i = 0; i < 1000; ++i) CHECK(random.poisson(0.0) == 0);
}
