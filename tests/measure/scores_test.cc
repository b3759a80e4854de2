// Scores against values worked out by hand, and SSIM and PSNR against scikit-image 0.19.3
// (structural_similarity with gaussian_weights=True, sigma=1.5, use_sample_covariance=False).
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "core/error.h"
#include "measure/intensity_scores.h"
#include "measure/label_scores.h"

using namespace stillfield;

namespace {

struct Pair {
  Volume<float> a{Extent{48, 40}}, b{Extent{48, 40}};
};

Pair formula_images() {
  Pair p;
  for (int y = 0; y < 40; ++y) {
    for (int x = 0; x < 48; ++x) {
      p.a.at(x, y) = static_cast<float>(128 + 60 * std::sin(x / 5.0) * std::cos(y / 7.0));
      p.b.at(x, y) = p.a.at(x, y) + static_cast<float>(((x * 7 + y * 13) % 11 - 5) * 3);
    }
  }
  return p;
}

}  // namespace

TEST_CASE("PSNR and SSIM are those of scikit-image") {
  const Pair p = formula_images();
  const IntensityScores s =
      score_intensities(p.b.view(), p.a.view(), p.b.view(), p.a.view(), 255.0);
  CHECK(s.psnr == Approx(28.58385703810271).epsilon(1e-6));
  CHECK(s.ssim == Approx(0.7291298287548036).epsilon(1e-5));
  CHECK(structural_similarity(p.a.view(), p.a.view(), 255.0) == Approx(1.0));
  const Volume<float> tiny({8, 8});
  CHECK(std::isnan(structural_similarity(tiny.view(), tiny.view(), 1.0)));
}

TEST_CASE("coverage, width and bias of a plane worked out by hand") {
  const Extent e{20, 10};
  Volume<float> truth(e), restored(e), lower(e), upper(e);
  for (int y = 0; y < 10; ++y) {
    for (int x = 0; x < 20; ++x) {
      truth.at(x, y) = x < 10 ? 0.0F : 100.0F;
      restored.at(x, y) = truth.at(x, y) + 2;
      lower.at(x, y) = restored.at(x, y) - (x == 9 ? 1.0F : 3.0F);  // misses left of the edge
      upper.at(x, y) = restored.at(x, y) + 3;
    }
  }
  truth.at(0, 0) = std::numeric_limits<float>::quiet_NaN();
  const IntensityScores s =
      score_intensities(restored.view(), lower.view(), upper.view(), truth.view(), 100);
  CHECK(s.pixels == 199);
  CHECK(s.rmse == Approx(2));
  CHECK(s.mean_error == Approx(2));
  CHECK(s.psnr == Approx(20 * std::log10(50.0)));
  CHECK(s.coverage90 == Approx(189.0 / 199));
  CHECK(s.coverage90_at_edges == Approx(0.5));  // columns 9 and 10
  CHECK(s.mean_width90 == Approx((189 * 6.0 + 10 * 4.0) / 199));
}

TEST_CASE("labels: confusion, Dice, Brier score and reliability worked out by hand") {
  Volume<std::uint8_t> labels({4, 1});
  Volume<float> truth({4, 1}), p1({4, 1}), p2({4, 1});
  const int found[] = {1, 1, 2, 2};
  const float there[] = {1, 2, 2, 0};
  const float first[] = {0.95F, 0.6F, 0.25F, 0.5F};
  for (int x = 0; x < 4; ++x) {
    labels.at(x, 0) = static_cast<std::uint8_t>(found[x]);
    truth.at(x, 0) = there[x];
    p1.at(x, 0) = first[x];
    p2.at(x, 0) = 1 - first[x];
  }
  const LabelScores s = score_labels(labels.view(), {p1.view(), p2.view()}, truth.view());
  CHECK(s.pixels == 3);
  CHECK(s.confusion == std::vector<std::int64_t>{1, 0, 1, 1});
  CHECK(s.misclassified == Approx(1.0 / 3));
  CHECK(s.dice[0] == Approx(2.0 / 3));
  CHECK(s.dice[1] == Approx(2.0 / 3));
  CHECK(s.true_fraction[1] == Approx(2.0 / 3));
  CHECK(s.brier == Approx(2 * (0.0025 + 0.36 + 0.0625) / 3));
  CHECK(s.reliability[9].pixels == 1);
  CHECK(s.reliability[9].share_right == 1);
  CHECK(s.reliability[6].share_right == 0);
  CHECK(s.reliability[7].mean_probability == Approx(0.75));
  CHECK(s.calibration_error == Approx((0.05 + 0.6 + 0.25) / 3).epsilon(1e-6));
  truth.at(0, 0) = 3;
  CHECK_THROWS_AS(score_labels(labels.view(), {p1.view(), p2.view()}, truth.view()), Error);
  truth.at(0, 0) = 0.5F;
  CHECK_THROWS_AS(score_labels(labels.view(), {p1.view(), p2.view()}, truth.view()), Error);
}
