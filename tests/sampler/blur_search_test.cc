// The first estimate of blur on scenes of known blur, and the rule that takes thin rims away.
//
// Source   scenes are made here: sharp labels at pixel centres, blurred by a Gaussian of 6 sd with
//          libm, white noise. Bound: 4 standard errors of the least-squares estimate and .02 px for
//          the parabola through steps of .1 and the kernel's end; false alarms 6.3e-5 a comparison
#include "sampler/blur_search.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr int kSide = 96;

Volume<std::uint8_t> draw_disks(std::uint64_t seed) {
  RandomStream random(chain_key(seed, 0), Purpose::kSimulation);
  Volume<std::uint8_t> labels({kSide, kSide});
  for (int i = 0; i < 8; ++i) {
    const double r = 4.0 + 9.0 * random.uniform();
    const double cx = kSide * random.uniform(), cy = kSide * random.uniform();
    for (int y = 0; y < kSide; ++y) {
      for (int x = 0; x < kSide; ++x) {
        if ((x - cx) * (x - cx) + (y - cy) * (y - cy) <= r * r) labels.at(x, y) = 1;
      }
    }
  }
  return labels;
}

Volume<float> blurred(const Volume<std::uint8_t>& labels, double blur) {
  Volume<float> image({kSide, kSide});
  const int r = static_cast<int>(std::ceil(6.0 * blur));
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      double sum = 0.0, total = 0.0;
      for (int j = -r; j <= r; ++j) {
        for (int i = -r; i <= r; ++i) {
          if (x + i < 0 || x + i >= kSide || y + j < 0 || y + j >= kSide) continue;
          const double h = blur > 0.0 ? std::exp(-0.5 * (i * i + j * j) / (blur * blur)) : 1.0;
          total += h;
          sum += h * labels.at(x + i, y + j);
        }
      }
      image.at(x, y) = static_cast<float>(sum / total);
    }
  }
  return image;
}

GreyLevels look_at(const Volume<std::uint8_t>& labels, double blur, double sigma,
                   std::uint32_t number) {
  RandomStream random(chain_key(12, number), Purpose::kSimulation);
  Volume<float> image = blurred(labels, blur);
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      image.at(x, y) += static_cast<float>(sigma * random.normal());
    }
  }
  return make_grey_levels(image.view());
}

// Standard error of the blur when all else is known: sigma / |d image / d blur|.
double standard_error(const Volume<std::uint8_t>& labels, double blur, double sigma) {
  const Volume<float> less = blurred(labels, blur - 0.02), more = blurred(labels, blur + 0.02);
  double sum = 0.0;
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      const double d =
          (static_cast<double>(more.at(x, y)) - static_cast<double>(less.at(x, y))) / 0.04;
      sum += d * d;
    }
  }
  return sigma / std::sqrt(sum);
}

}  // namespace

TEST_CASE("blur search finds the blur of a scene whose labels are known") {
  const Volume<std::uint8_t> labels = draw_disks(11);
  for (const double sigma : {0.1, 0.4}) {
    for (const double blur : {0.7, 1.0, 1.5}) {
      double found = 0.0;  // mean over four images
      for (std::uint32_t i = 1; i <= 4; ++i) {
        found += search_blur(look_at(labels, blur, sigma, i), 2, labels) / 4.0;
      }
      const double se = standard_error(labels, blur, sigma) / 2.0;
      CAPTURE(sigma, blur, found, se);
      CHECK(std::fabs(found - blur) < 4.0 * se + 0.02);
      CHECK(se < 0.06);  // else the bound would say nothing
    }
    const double sharp = search_blur(look_at(labels, 0.0, sigma, 5), 2, labels);
    CAPTURE(sigma, sharp);
    CHECK(sharp < 0.4);
  }
}

TEST_CASE("thin rims go to the nearer side, blocks of three stay") {
  // Columns: 40 of class 0, two of class 1 (a rim), the rest class 2, with a band of class 1 that
  // is three columns wide.
  Volume<std::uint8_t> labels({kSide, kSide});
  Volume<float> image({kSide, kSide});
  for (int y = 0; y < kSide; ++y) {
    for (int x = 0; x < kSide; ++x) {
      const bool band = x >= 70 && x < 73;
      labels.at(x, y) = static_cast<std::uint8_t>(x < 40 ? 0 : (x < 42 || band ? 1 : 2));
      image.at(x, y) =
          x < 40 ? 0.0F : (x == 40 ? 80.0F : (x == 41 ? 120.0F : (band ? 100.0F : 200.0F)));
    }
  }
  const GreyLevels grey = make_grey_levels(image.view());
  absorb_thin_labels(grey, {{0.0, 100.0, 200.0}, {5.0, 5.0, 5.0}, false}, labels);
  for (int y = 0; y < kSide; ++y) {
    CHECK(labels.at(39, y) == 0);
    CHECK(labels.at(40, y) == 0);
    CHECK(labels.at(41, y) == 2);
    CHECK(labels.at(42, y) == 2);
    CHECK(labels.at(71, y) == 1);
  }
}
