// Model checks on images whose labels and parameters are known.
#include "diagnose/predictive_checks.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <functional>

#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr int kSide = 96, kChains = 2, kDraws = 50;
const GaussianClasses kClasses{{60.0, 110.0}, {15.0, 15.0}, false};

// Class 1 on the left, class 2 from this column on; not where blocks meet, which hides borders.
constexpr int kBorder = 44;

Volume<std::uint8_t> halves() {
  Volume<std::uint8_t> labels({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) labels.at(x, y) = x < kBorder ? 1 : 2;
  }
  return labels;
}

using Noise = std::function<double(int x, int y, double white)>;

std::vector<ModelCheck> checked(std::uint64_t seed, const Noise& noise) {
  const Volume<std::uint8_t> labels = halves();
  RandomStream random(chain_key(seed, 3), Purpose::kSimulation);
  Volume<float> image({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      const double mean = kClasses.mean[static_cast<std::size_t>(labels.at(x, y) - 1)];
      image.at(x, y) =
          static_cast<float>(std::floor(mean + 15.0 * noise(x, y, random.normal()) + 0.5));
    }
  }
  const GreyLevels grey = make_grey_levels(image.view());
  PredictiveChecks checks(grey, kChains, kDraws, seed);
  for (int chain = 0; chain < kChains; ++chain) {
    for (int draw = 0; draw < kDraws; ++draw) {
      checks.show(chain, draw, labels.view(), kClasses);
    }
  }
  return checks.results();
}

const ModelCheck& named(const std::vector<ModelCheck>& checks, const std::string& name) {
  return *std::find_if(checks.begin(), checks.end(),
                       [&](const ModelCheck& c) { return c.name == name; });
}

}  // namespace

TEST_CASE("images drawn from the model pass every check, and their p-values are honest") {
  // 40 images, parameters known, so p-values are uniform but for the six checks' dependence.
  // At most kCheckLevel a check by p alone; with the limits on top no failure is expected: the
  // chance that one of 240 has p <= 0.01 is bounded by 240 * 0.02, but each must be beyond a limit
  // that is three standard errors or more away as well: below 240 * 0.0015 * ... = 1 in 3 by the
  // crudest bound, so the seeds are fixed and up to one failure is allowed.
  int failures = 0, small = 0, all = 0;
  for (std::uint64_t seed = 1; seed <= 40; ++seed) {
    for (const ModelCheck& check : checked(seed, [](int, int, double n) { return n; })) {
      failures += check.failed;
      if (check.name == "stray_values") continue;  // a small count: its p-values are lumps
      small += check.p_value <= 0.2;
      ++all;
      CHECK(check.sentence.empty() == !check.failed);
    }
  }
  CHECK(failures <= 1);
  // 200 p-values, binomial(200, 0.2): 40 expected, sd 5.7; 20 to 62 has probability above 0.999.
  CHECK(all == 200);
  CHECK(small >= 20);
  CHECK(small <= 62);
}

TEST_CASE("each fault is found by the check that is meant for it") {
  SECTION("correlated noise") {
    double before = 0;
    const auto checks = checked(1, [&before](int, int, double n) {
      const double value = 0.96 * n + 0.28 * before;  // correlation 0.96 * 0.28 = 0.27 along x
      before = n;
      return value;
    });
    const ModelCheck& found = named(checks, "noise_correlation");
    CHECK(found.failed);
    CHECK(found.grave);
    CHECK(found.value - found.expected == Approx(0.269).margin(0.05));  // 4 standard errors
    CHECK(found.sentence.find("intervals are too narrow") != std::string::npos);
    CHECK_FALSE(named(checks, "slow_trend").failed);
    CHECK_FALSE(named(checks, "noise_distribution").failed);
  }
  SECTION("shading") {
    const auto checks = checked(2, [](int, int y, double n) { return n + 1.5 * (y / 95.0 - 0.5); });
    CHECK(named(checks, "slow_trend").failed);
    CHECK_FALSE(named(checks, "noise_correlation").failed);
  }
  SECTION("two levels within a class") {
    const auto checks = checked(3, [](int x, int y, double n) {
      return n * 0.5 + ((x / 8 + y / 8) % 2 == 0 ? 0.866 : -0.866);
    });
    CHECK(named(checks, "noise_distribution").failed);
  }
  SECTION("noise stronger in one corner") {
    const auto checks =
        checked(4, [](int x, int y, double n) { return n * (x + y < 96 ? 0.6 : 1.28); });
    CHECK(named(checks, "noise_level").failed);
    CHECK_FALSE(named(checks, "noise_correlation").failed);
  }
  SECTION("blurred border") {
    const auto checks = checked(5, [](int x, int, double n) {
      return n + (x == kBorder - 1 ? 1.0
                                   : (x == kBorder ? -1.0 : 0.0));  // 30 % of the contrast of 3.33
    });
    CHECK(named(checks, "border_mixing").failed);
    CHECK(named(checks, "border_mixing").value == Approx(0.3).margin(0.1));
    CHECK_FALSE(named(checks, "noise_distribution").failed);
  }
  SECTION("hot pixels") {
    const auto checks =
        checked(6, [](int x, int y, double n) { return (31 * x + 57 * y) % 97 == 0 ? 6.0 : n; });
    CHECK(named(checks, "stray_values").failed);
  }
}

TEST_CASE("noise below half a grey level is not judged") {
  const auto checks = checked(7, [](int, int, double) { return 0.0; });
  // The parameters handed in say 15; so a picture without noise is no sample of them.
  CHECK(named(checks, "noise_distribution").failed);
  const Volume<std::uint8_t> labels = halves();
  Volume<float> image({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) image.at(x, y) = labels.at(x, y) == 1 ? 60.F : 110.F;
  }
  const GreyLevels grey = make_grey_levels(image.view());
  PredictiveChecks quiet(grey, 1, 10, 1);
  for (int draw = 0; draw < 10; ++draw) {
    quiet.show(0, draw, labels.view(), {{60.0, 110.0}, {0.2, 0.2}, false});
  }
  for (const ModelCheck& check : quiet.results()) {
    CHECK_FALSE(check.failed);
    if (check.name != "border_mixing") CHECK(std::isnan(check.p_value));
  }
}

TEST_CASE("a large image is checked on evenly spread blocks") {
  const auto blocks = residual_blocks({2048, 1024});
  CHECK(static_cast<std::int64_t>(blocks.size()) * ResidualBlock::kPixels == kMostCheckedPixels);
  std::int64_t left = 0;
  for (const ResidualBlock& block : blocks) left += block.y < 512;
  CHECK(left == static_cast<std::int64_t>(blocks.size() / 2));
}
