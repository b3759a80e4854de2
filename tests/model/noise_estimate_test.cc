#include "model/noise_estimate.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>
#include <vector>

#include "core/error.h"
#include "model/noise_blocks.h"
#include "model/noise_line.h"
#include "model/noise_scene.h"

using namespace stillfield;
using namespace stillfield::testing;

// The simulated noise level is known. At 192 x 192 the estimate's standard error is about 1.2 %
// (jackknife); 5 % is four of them: false-alarm level about 1e-4 a check, seeds fixed.
TEST_CASE("the level of Gaussian noise is found, whatever the grey values") {
  const Pool pool(1);
  const Volume<float> clean = clean_scene(192);
  const Volume<std::uint8_t> usable = all_usable(clean.extent());
  for (const double sd : {2.0, 10.0, 40.0}) {
    const Volume<float> y = with_gaussian(clean, sd, 11);
    const NoiseModel m = estimate_noise(NoiseKind::kGaussian, y.view(), usable.view(), pool);
    CAPTURE(sd, m.sd, m.lower90, m.upper90);
    CHECK(m.kind == NoiseKind::kGaussian);
    CHECK(m.estimated);
    CHECK(m.sd == Approx(sd).epsilon(0.05));
    CHECK(m.lower90 < m.sd);
    CHECK(m.upper90 > m.sd);
    CHECK(m.upper90 < 1.1 * m.lower90);
    CHECK(m.warning.empty());
    CHECK(m.sd_at(0.0) == m.sd);
  }
}

TEST_CASE("the estimate's interval covers the level as often as it says") {
  // 40 fields of pure noise, nominal 90 %. Binomial(40, 0.9): fewer than 29 has probability 2e-4.
  const Pool pool(1);
  const Volume<float> flat({96, 96});
  const Volume<std::uint8_t> usable = all_usable(flat.extent());
  int covered = 0;
  for (std::uint64_t i = 0; i < 40; ++i) {
    const Volume<float> y = with_gaussian(flat, 3.0, 100 + i);
    const NoiseModel m = estimate_noise(NoiseKind::kGaussian, y.view(), usable.view(), pool);
    covered += m.lower90 <= 3.0 && 3.0 <= m.upper90;
  }
  CHECK(covered >= 29);
}

TEST_CASE("fine random texture everywhere brings a warning and a wide interval") {
  // Texture: noise smoothed over 2 x 2 pixels, sd 20, under noise of sd 4.
  const Pool pool(1);
  const Volume<float> rough = with_gaussian(Volume<float>({193, 193}), 40.0, 3);
  Volume<float> texture({192, 192});
  for (int y = 0; y < 192; ++y) {
    for (int x = 0; x < 192; ++x) {
      texture.at(x, y) = 0.25f * (rough.at(x, y) + rough.at(x + 1, y) + rough.at(x, y + 1) +
                                  rough.at(x + 1, y + 1));
    }
  }
  const Volume<float> y = with_gaussian(texture, 4.0, 4);
  const Volume<std::uint8_t> usable = all_usable(y.extent());
  const NoiseModel m = estimate_noise(NoiseKind::kGaussian, y.view(), usable.view(), pool);
  CHECK(m.sd > 4.0);
  CHECK(m.lower90 <= 4.0);
  CHECK(m.warning.find("texture") != std::string::npos);
}

TEST_CASE("photon noise is found and told from Gaussian noise") {
  const Pool pool(1);
  const Volume<float> clean = clean_scene(192);
  const Volume<std::uint8_t> usable = all_usable(clean.extent());
  struct Case {
    double gain, sd, offset;
  };
  // Check of the sd curve: 5 %, about four standard errors.
  for (const Case& c : {Case{2.0, 0.0, 0.0}, Case{0.5, 6.0, 0.0}, Case{4.0, 3.0, 100.0}}) {
    const Volume<float> y = with_photons(clean, c.gain, c.sd, c.offset, 21);
    const NoiseModel m = estimate_noise(std::nullopt, y.view(), usable.view(), pool);
    CAPTURE(c.gain, c.sd, c.offset, m.gain, m.variance, m.offset);
    REQUIRE(m.kind == NoiseKind::kPhoton);
    for (const double x : {60.0, 120.0, 180.0}) {
      CHECK(m.sd_at(x + c.offset) == Approx(std::sqrt(c.gain * x + c.sd * c.sd)).epsilon(0.06));
    }
    CHECK(m.warning.find("read noise") != std::string::npos);
  }
  const Volume<float> y = with_gaussian(clean, 10.0, 22);
  CHECK(estimate_noise(std::nullopt, y.view(), usable.view(), pool).kind == NoiseKind::kGaussian);
  const NoiseModel forced = estimate_noise(NoiseKind::kPhoton, y.view(), usable.view(), pool);
  CHECK(forced.sd_at(120.0) == Approx(10.0).epsilon(0.05));
}

TEST_CASE("the level of Rician noise is found in dark and in bright pictures") {
  const Pool pool(1);
  for (const double scale : {0.0, 0.05, 1.0}) {
    Volume<float> clean = clean_scene(192);
    RandomStream random = scene_random(31);
    for (int y = 0; y < 192; ++y) {
      for (int x = 0; x < 192; ++x) {
        const double a = scale * clean.at(x, y) + 8.0 * random.normal(), b = 8.0 * random.normal();
        clean.at(x, y) = static_cast<float>(std::sqrt(a * a + b * b));
      }
    }
    const Volume<std::uint8_t> usable = all_usable(clean.extent());
    const NoiseModel m = estimate_noise(NoiseKind::kRician, clean.view(), usable.view(), pool);
    CAPTURE(scale, m.sd);
    CHECK(m.sd == Approx(8.0).epsilon(0.06));
  }
}

TEST_CASE("unusable pixels, even NaN, take no part and smaller blocks take over") {
  const Pool pool(1);
  Volume<float> y = with_gaussian(clean_scene(192), 10.0, 41);
  Volume<std::uint8_t> usable = all_usable(y.extent());
  RandomStream random = scene_random(42);
  for (int r = 0; r < 192; ++r) {
    for (int x = 0; x < 192; ++x) {
      if (random.uniform() > 0.1) continue;
      usable.at(x, r) = 0;
      y.at(x, r) = std::numeric_limits<float>::quiet_NaN();
    }
  }
  CHECK(find_noise_blocks(y.view(), usable.view(), pool).size < 8);
  const NoiseModel m = estimate_noise(NoiseKind::kGaussian, y.view(), usable.view(), pool);
  CHECK(m.sd == Approx(10.0).epsilon(0.08));
}

TEST_CASE("constant pictures show no noise; tiny ones are refused") {
  const Pool pool(1);
  const Volume<float> flat({64, 64});
  const Volume<std::uint8_t> usable = all_usable(flat.extent());
  const NoiseModel m = estimate_noise(std::nullopt, flat.view(), usable.view(), pool);
  CHECK(m.sd == 0.0);
  CHECK_FALSE(m.warning.empty());
  const Volume<float> tiny({6, 6});
  CHECK_THROWS_AS(estimate_noise(std::nullopt, tiny.view(), all_usable({6, 6}).view(), pool),
                  Error);
  const Volume<std::uint8_t> none({64, 64});
  CHECK_THROWS_AS(estimate_noise(std::nullopt, flat.view(), none.view(), pool), Error);
}

TEST_CASE("the estimate does not depend on the threads") {
  const Volume<float> y = with_photons(clean_scene(192), 2.0, 3.0, 0.0, 51);
  const Volume<std::uint8_t> usable = all_usable(y.extent());
  const NoiseModel one = estimate_noise(std::nullopt, y.view(), usable.view(), Pool(1));
  const NoiseModel four = estimate_noise(std::nullopt, y.view(), usable.view(), Pool(4));
  CHECK(one.gain == four.gain);
  CHECK(one.variance == four.variance);
  CHECK(one.lower90 == four.lower90);
}

TEST_CASE("a block's low and high parts keep the energy of a cosine where it belongs") {
  // cos(pi (2k+1) j / 16): coefficient j of the 8-point transform alone, energy 4 (8 for j = 0).
  const Pool pool(1);
  for (const int j : {1, 7}) {
    Volume<float> y({24, 24});
    for (int r = 0; r < 24; ++r) {
      for (int x = 0; x < 24; ++x) {
        y.at(x, r) = static_cast<float>(std::cos(M_PI * (2 * (x % 8) + 1) * j / 16.0) *
                                        std::cos(M_PI * (2 * (r % 8) + 1) * j / 16.0));
      }
    }
    const NoiseBlocks b = find_noise_blocks(y.view(), all_usable({24, 24}).view(), pool);
    REQUIRE(b.size == 8);
    const std::vector<std::uint32_t> first = {0};
    double high = 0.0;
    const HighSums sums = sum_high_parts(y.view(), b, first);
    for (const double s : sums.tile[0].square) high += s;
    CHECK(20.0 * b.low[0] == Approx(j == 1 ? 16.0 : 0.0).margin(1e-6));
    CHECK(high == Approx(j == 7 ? 16.0 : 0.0).margin(1e-6));
  }
}

TEST_CASE("the noise line ignores points that texture has raised") {
  NoisePoints p;
  for (int i = 0; i < 20; ++i) {
    p.grey.push_back(10.0 * i);
    p.variance.push_back((2.0 * 10.0 * i + 30.0) * (i % 5 == 0 ? 1.8 : 1.0));
    p.flatness.push_back(1.0);
  }
  const NoiseLine line = fit_noise_line(p, false);
  CHECK(line.slope == Approx(2.0).epsilon(0.01));
  CHECK(line.intercept == Approx(30.0).epsilon(0.05));
}

TEST_CASE("given noise levels are checked") {
  CHECK_THROWS_AS(given_gaussian_noise(0.0), Error);
  CHECK_THROWS_AS(given_gaussian_noise(-1.0), Error);
  CHECK_THROWS_AS(given_rician_noise(std::numeric_limits<double>::quiet_NaN()), Error);
  CHECK_THROWS_AS(given_photon_noise(0.0, 1.0, 0.0, 10.0), Error);
  CHECK_THROWS_AS(given_photon_noise(1.0, -1.0, 0.0, 10.0), Error);
  const NoiseModel m = given_photon_noise(2.0, 9.0, 100.0, 150.0);
  CHECK(m.sd_at(120.0) == Approx(7.0));
  CHECK(m.lower90 == m.upper90);
  CHECK(m.sd_at(0.0) > 0.0);
}
