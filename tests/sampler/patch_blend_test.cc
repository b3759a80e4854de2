// Blending: the minimiser against closed forms, the split noise against its definition, the weights
// against restorations whose errors are known.
#include "sampler/patch_blend.h"

#include <catch2/catch.hpp>
#include <cmath>

#include "random/stream.h"

using namespace stillfield;

namespace {

constexpr PhiloxKey kKey{21, 22};

Volume<float> normals(int side, double sd, std::uint32_t sweep) {
  Volume<float> v({side, side});
  RandomStream random(kKey, Purpose::kSimulation, sweep);
  for (int y = 0; y < side; ++y) {
    for (int x = 0; x < side; ++x) v.at(x, y) = static_cast<float>(sd * random.normal());
  }
  return v;
}

Volume<float> sum(const Volume<float>& a, const Volume<float>& b) {
  Volume<float> v(a.extent());
  for (int y = 0; y < v.height(); ++y) {
    for (int x = 0; x < v.width(); ++x) v.at(x, y) = a.at(x, y) + b.at(x, y);
  }
  return v;
}

double mean_product(const Volume<float>& a, const Volume<float>& b) {
  double total = 0;
  for (int y = 0; y < a.height(); ++y) {
    for (int x = 0; x < a.width(); ++x) total += double{a.at(x, y)} * double{b.at(x, y)};
  }
  return total / static_cast<double>(a.extent().sites());
}

}  // namespace

TEST_CASE(
    "weights of independent errors are inverse to their variances, whatever is added to all") {
  // w_i = (1 / v_i) / sum (1 / v_j): the textbook weighted mean.
  for (const double constant : {0.0, 1e6}) {
    std::vector<double> a(9, constant);
    a[0] += 1;
    a[4] += 2;
    a[8] += 4;
    const std::vector<double> w = simplex_minimiser(a, 3);
    CHECK(w[0] == Approx(4.0 / 7));
    CHECK(w[1] == Approx(2.0 / 7));
    CHECK(w[2] == Approx(1.0 / 7));
  }
}

TEST_CASE("a restoration that only adds error gets no weight") {
  // Errors e and e + f: the free minimum would subtract the second.
  const std::vector<double> w = simplex_minimiser({1, 1.2, 1.2, 2}, 2);
  CHECK(w[0] == 1.0);
  CHECK(w[1] == 0.0);
  // Two equal ones: any weights will do, as long as they are weights.
  const std::vector<double> same = simplex_minimiser({1, 1, 1, 1}, 2);
  CHECK(same[0] + same[1] == Approx(1.0));
  CHECK(same[0] >= 0);
}

TEST_CASE("split noise: two images with independent noise of the stated deviation") {
  constexpr int kSide = 192;
  constexpr double kSd = 3.0;
  const Volume<float> noise = normals(kSide, kSd, 1);  // an image of noise alone
  const SplitNoise split = split_noise(noise, kSd, kKey, Pool(2));
  const double n = kSide * kSide;
  const double uu = mean_product(split.restored_from, split.restored_from);
  const double vv = mean_product(split.judged_by, split.judged_by);
  const double uv = mean_product(split.restored_from, split.judged_by);
  // Four standard errors each: variance sqrt(2/n), product sqrt(1/n); false alarm .0002 in all.
  CHECK(uu / (split.noise_sd * split.noise_sd) == Approx(1.0).margin(4 * std::sqrt(2 / n)));
  CHECK(std::fabs(uv) / std::sqrt(uu * vv) < 4 / std::sqrt(n));
  // The mean of the two with weights 1/(1+a^2), a^2/(1+a^2) is the image itself.
  const double a2 = split.noise_sd * split.noise_sd / (kSd * kSd) - 1;
  for (int x = 0; x < kSide; ++x) {
    const double back = (split.restored_from.at(x, 5) + a2 * split.judged_by.at(x, 5)) / (1 + a2);
    REQUIRE(back == Approx(double{noise.at(x, 5)}).margin(1e-5));
  }
}

TEST_CASE("weights come from the errors, and redrawn pixels do not count") {
  constexpr int kSide = 192;
  const Volume<float> truth = normals(kSide, 50.0, 2);
  const Volume<float> value = sum(truth, normals(kSide, 4.0, 3));
  const SplitNoise split = split_noise(value, 4.0, kKey, Pool(1));
  std::vector<Volume<float>> restorations;
  restorations.push_back(sum(truth, normals(kSide, 2.0, 4)));
  restorations.push_back(sum(truth, normals(kSide, 3.0, 5)));
  std::vector<double> w = blend_weights(restorations, split, value, value);
  // Truth: 9/13. The score's noise: 2 sd_v sd_diff / sqrt(n) over the curvature 2 sd_diff^2, about
  // .013 with sd_v = 4 sqrt(5), sd_diff = sqrt(13); four times that.
  CHECK(w[0] == Approx(9.0 / 13).margin(0.052));

  // The second restoration is spoilt where pixels were redrawn: nothing changes.
  Volume<float> usable = sum(value, normals(kSide, 0.0, 6));
  for (int x = 0; x < kSide; ++x) {
    usable.at(x, 7) += 1.0f;
    restorations[1].at(x, 7) = 1e6f;
  }
  const std::vector<double> again = blend_weights(restorations, split, value, usable);
  CHECK(again[0] == Approx(w[0]).margin(0.01));
}

TEST_CASE("a blend has the moments of the mixture") {
  std::vector<IntensityMoments> both;
  for (const float mean : {10.0f, 14.0f}) {
    IntensityMoments m{Volume<float>({3, 2}), Volume<float>({3, 2})};
    for (int y = 0; y < 2; ++y) {
      for (int x = 0; x < 3; ++x) {
        m.mean.at(x, y) = mean;
        m.variance.at(x, y) = mean == 10.0f ? 1.0f : 2.0f;
      }
    }
    both.push_back(std::move(m));
  }
  const IntensityMoments out = blend(both, {0.75, 0.25}, Pool(1));
  CHECK(out.mean.at(2, 1) == 11.0f);
  CHECK(out.variance.at(2, 1) == Approx(0.75 * 1 + 0.25 * 2 + 0.75 * 1 + 0.25 * 9));
}
