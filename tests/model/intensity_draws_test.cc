#include "model/intensity_draws.h"

#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

namespace {

struct Moments {
  double mean, variance;
};

template <class Draw>
Moments moments_of(const Draw& draw, int n) {
  double sum = 0.0, squares = 0.0;
  for (int i = 0; i < n; ++i) {
    const double v = draw();
    sum += v;
    squares += v * v;
  }
  return {sum / n, squares / n - sum / n * (sum / n)};
}

constexpr int kDraws = 40000;

// Mean of the draws within 4 standard errors, their variance within 5 %: for Gamma variables of
// these shapes (kurtosis 3 + 6 / shape) its standard error is below 1 %.
void check_moments(const Moments& m, double mean, double variance) {
  CHECK(std::fabs(m.mean - mean) < 4.0 * std::sqrt(variance / kDraws));
  CHECK(m.variance == Approx(variance).epsilon(0.05));
}

}  // namespace

TEST_CASE("strengths are drawn with the power of the improper prior's normaliser") {
  RandomStream random({1, 2}, Purpose::kParameters);
  const ShapeRate hyper{2.0, 5.0};
  // smooth: Gamma(2 + 19/2, 5 + 30/2); edges: Gamma(2 + 19, 5 + 30).
  check_moments(
      moments_of([&] { return draw_strength(IntensityPrior::kSmooth, hyper, 20, 30.0, random); },
                 kDraws),
      11.5 / 20.0, 11.5 / 400.0);
  check_moments(
      moments_of([&] { return draw_strength(IntensityPrior::kEdges, hyper, 20, 30.0, random); },
                 kDraws),
      21.0 / 35.0, 21.0 / (35.0 * 35.0));
}

TEST_CASE("noise variances are drawn from their inverse Gamma distribution") {
  RandomStream random({1, 3}, Purpose::kParameters);
  // InvGamma(a, b) with a = 3 + 20, b = 7 + 15: mean b/(a-1), variance b^2/((a-1)^2 (a-2)).
  check_moments(moments_of(
                    [&] {
                      return draw_noise_variance({3.0, 7.0}, 40, 30.0, random);
                    },
                    kDraws),
                22.0 / 22.0, 1.0 / 21.0);
}
