#include "sampler/noise_redraw.h"

#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "core/error.h"
#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr int kSide = 200;
const PhiloxKey kKey = chain_key(7, 0);

Volume<float> constant(float value) {
  Volume<float> v({kSide, kSide});
  for (int y = 0; y < kSide; ++y) std::fill_n(v.row(y), kSide, value);
  return v;
}

RedrawProblem problem_of(float observed, PixelState state) {
  RedrawProblem p;
  p.observed = constant(observed);
  p.state = Volume<std::uint8_t>({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    std::fill_n(p.state.row(y), kSide, static_cast<std::uint8_t>(state));
  }
  p.noise = given_gaussian_noise(3.0);
  p.white_sd = 3.0;
  return p;
}

struct Moments {
  double mean = 0.0, variance = 0.0, least = 1e300;
};

Moments moments_of(const Volume<float>& v) {
  Moments m;
  const double n = kSide * kSide;
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      m.mean += v.at(x, y) / n;
      m.least = std::min<double>(m.least, v.at(x, y));
    }
  }
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) m.variance += std::pow(v.at(x, y) - m.mean, 2) / n;
  }
  return m;
}

Volume<float> redrawn(RedrawProblem problem, double mean, double variance, int threads = 1) {
  NoiseRedraw redraw(std::move(problem), kKey);
  const IntensityMoments now{constant(static_cast<float>(mean)),
                             constant(static_cast<float>(variance))};
  Volume<float> value({kSide, kSide});
  redraw.redraw(now, 5, Pool(threads), value);
  return value;
}

// 4.5 standard errors of a mean and of a variance over the 40 000 pixels: false alarms 7e-6 each.
void check_moments(const Moments& m, double mean, double variance, double kurtosis = 3.0) {
  const double n = kSide * kSide;
  CHECK(std::fabs(m.mean - mean) < 4.5 * std::sqrt(variance / n));
  CHECK(std::fabs(m.variance - variance) < 4.5 * variance * std::sqrt((kurtosis - 1.0) / n));
}

double upper_tail(double z) {
  return 0.5 * std::erfc(z / std::sqrt(2.0));
}

}  // namespace

TEST_CASE("missing pixels are drawn from the prediction with its noise") {
  check_moments(moments_of(redrawn(problem_of(0.0f, PixelState::kMissing), 50.0, 7.0)), 50.0, 16.0);
}

TEST_CASE("plain pixels with the white level keep their value") {
  const Moments m = moments_of(redrawn(problem_of(42.0f, PixelState::kPlain), 50.0, 7.0));
  CHECK(m.mean == Approx(42.0));
  CHECK(m.variance < 1e-12);
}

TEST_CASE("noisier pixels: closed form of two normals") {
  // x ~ N(50, 7), u = x + N(0, 9), y = u + N(0, 25 - 9): precision of u is 1/16 + 1/16.
  RedrawProblem p = problem_of(42.0f, PixelState::kPlain);
  p.noise = given_gaussian_noise(5.0);
  check_moments(moments_of(redrawn(std::move(p), 50.0, 7.0)), 46.0, 8.0);
}

TEST_CASE("saturated pixels: moments of the truncated normal") {
  // Mean and variance of N(m, s^2) above L (Johnson, Kotz & Balakrishnan 1994, 13.10):
  // m + s h, s^2 (1 + a h - h^2) with a = (L - m)/s, h = phi(a) / Q(a).
  for (const double limit : {30.0, 48.0, 51.0, 56.0, 75.0}) {
    RedrawProblem p = problem_of(static_cast<float>(limit), PixelState::kSaturated);
    p.saturation = limit;
    const Moments m = moments_of(redrawn(std::move(p), 50.0, 7.0));
    const double a = (limit - 50.0) / 4.0;
    const double h = std::exp(-0.5 * a * a) / std::sqrt(2 * M_PI) / upper_tail(a);
    CAPTURE(limit, m.mean, m.variance);
    CHECK(m.least >= limit - 1e-4);
    // Kurtosis of the exponential, 9, bounds that of the truncated normal.
    check_moments(m, 50.0 + 4.0 * h, 16.0 * (1.0 + a * h - h * h), 9.0);
  }
}

TEST_CASE("impulses: probability by Bayes' rule, share by its Beta posterior") {
  RedrawProblem p = problem_of(60.0f, PixelState::kPlain);
  // Half of the pixels at 60, the others spread the range to 0..256.
  p.observed.at(0, 0) = 0.0f;
  p.observed.at(1, 0) = 256.0f;
  Volume<std::uint8_t> usable({kSide, kSide});
  for (int y = 0; y < kSide; ++y) std::fill_n(usable.row(y), kSide, std::uint8_t{1});
  const ImpulseMap map{Volume<float>({kSide, kSide})};
  p.density = ImpulseDensity(p.observed.view(), usable.view(), map);
  p.impulses = true;
  p.impulse_share = 0.2;
  NoiseRedraw redraw(std::move(p), kKey);
  const IntensityMoments now{constant(50.0f), constant(7.0f)};
  Volume<float> value({kSide, kSide});
  redraw.redraw(now, 1, Pool(1), value);
  // Density 1/256 everywhere; regular: N(60; 50, 7 + 9).
  const double hit = 0.2 / 256.0;
  const double regular = 0.8 * std::exp(-0.5 * 100.0 / 16.0) / std::sqrt(2 * M_PI * 16.0);
  const double expected = hit / (hit + regular);
  CHECK(redraw.impulse_probability().at(5, 5) == Approx(expected).epsilon(1e-5));
  // Pixels drawn as impulses leave their value.
  double moved = 0.0;
  for (int y = 1; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) moved += value.at(x, y) != 60.0f;
  }
  const double n = kSide * (kSide - 1.0);
  CHECK(std::fabs(moved / n - expected) < 4.5 * std::sqrt(expected * (1 - expected) / n));
  CHECK(redraw.impulse_share() == 0.2);
  redraw.redraw(now, 2, Pool(1), value);
  // Beta(1 + hits, 20 + rest): mean about the share drawn, sd below 0.0025.
  CHECK(redraw.impulse_share() == Approx(moved / n).margin(0.012));
  redraw.reset_means();
  CHECK(redraw.impulse_probability().at(5, 5) == 0.0f);
}

TEST_CASE("an impulse and its repair: the chain recovers the share and the pixels") {
  // A constant field known exactly (mean 100, variance 0.01): 5 % of the pixels are uniform values.
  RedrawProblem p = problem_of(100.0f, PixelState::kPlain);
  Volume<std::uint8_t> hit({kSide, kSide}), usable({kSide, kSide});
  RandomStream random(kKey, Purpose::kSimulation);
  for (int y = 0; y < kSide; ++y) {
    std::fill_n(usable.row(y), kSide, std::uint8_t{1});
    for (int x = 0; x < kSide; ++x) {
      hit.at(x, y) = random.uniform() < 0.05;
      p.observed.at(x, y) = static_cast<float>(hit.at(x, y) != 0 ? 255.0 * random.uniform()
                                                                 : 100.0 + 3.0 * random.normal());
    }
  }
  const ImpulseMap map{Volume<float>({kSide, kSide})};
  p.density = ImpulseDensity(p.observed.view(), usable.view(), map);
  p.impulses = true;
  p.impulse_share = 0.3;
  NoiseRedraw redraw(std::move(p), kKey);
  const IntensityMoments now{constant(100.0f), constant(0.01f)};
  Volume<float> value({kSide, kSide});
  for (std::uint32_t sweep = 0; sweep < 20; ++sweep) redraw.redraw(now, sweep, Pool(1), value);
  // The sd of the number hit is 44 of 2000: 0.0011 in share; 0.006 leaves room for one chain.
  CHECK(redraw.impulse_share() == Approx(0.05).margin(0.006));
  check_moments(moments_of(value), 100.0, 9.0);
}

TEST_CASE("redraws depend on position and sweep, not on threads") {
  const Volume<float> one = redrawn(problem_of(0.0f, PixelState::kMissing), 50.0, 7.0, 1);
  const Volume<float> four = redrawn(problem_of(0.0f, PixelState::kMissing), 50.0, 7.0, 4);
  bool same = true, varied = false;
  for (int y = 0; y < kSide; ++y) {
    for (int x = 1; x < kSide; ++x) {
      same = same && one.at(x, y) == four.at(x, y);
      varied = varied || one.at(x, y) != one.at(x - 1, y);
    }
  }
  CHECK(same);
  CHECK(varied);
}

TEST_CASE("a redraw needs a positive white-noise level") {
  RedrawProblem p = problem_of(0.0f, PixelState::kPlain);
  p.white_sd = 0.0;
  CHECK_THROWS_AS(NoiseRedraw(std::move(p), kKey), Error);
}
