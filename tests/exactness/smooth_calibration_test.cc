// Simulation-based calibration of the smooth field with lambda and sigma drawn (Talts, Betancourt,
// Simpson, Vehtari & Gelman 2018): over parameters and fields from the prior and images from them,
// the rank of the truth among posterior draws is uniform.
//
// The prior leaves the field's level free. Level and image shift together, so that ranks of pixels
// are uniform whatever the true level is (a location parameter with a flat prior); it is 0 here.
// Error    chi-squared of the ranks in 8 classes, false alarm 2e-4 for each of 5 quantities: 1e-3
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/cosine_field.h"
#include "exactness/intensity_sample.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kWidth = 6, kHeight = 5;
constexpr int kReplications = 480;
constexpr int kClasses = 8;
constexpr int kDraws = 63;  // ranks 0..63
constexpr int kThinning = 12;
constexpr int kWarming = 120;
// Chi-squared with 7 degrees of freedom is above this with probability 2e-4 (computed with SciPy).
constexpr double kLimit = 28.2;

struct Quantities {
  double values[5];  // lambda, sigma, a corner, an inner pixel, a difference of neighbours
};

Quantities quantities(double lambda, double variance, const std::vector<double>& x) {
  return {{lambda, std::sqrt(variance), x[0], x[2 * kWidth + 3],
           x[2 * kWidth + 3] - x[2 * kWidth + 2]}};
}

}  // namespace

TEST_CASE("ranks of lambda, sigma and pixels of smooth fields are uniform") {
  IntensityModel model;
  model.prior = IntensityPrior::kSmooth;
  model.strength = {3.0, 600.0};  // lambda about 1/200: neighbours differ by some 14 grey levels
  model.noise = {3.0, 300.0};     // sigma^2 about 100
  const CosineField cosines(kWidth, kHeight);
  int count[5][kClasses] = {};
  for (int rep = 0; rep < kReplications; ++rep) {
    RandomStream random({static_cast<std::uint32_t>(rep), 4}, Purpose::kSimulation);
    const double lambda = random.gamma(model.strength.shape) / model.strength.rate;
    const double variance = model.noise.rate / random.gamma(model.noise.shape);
    const std::vector<double> truth = cosines.draw(lambda, random);
    IntensityProblem p{kWidth, kHeight, Connectivity::kFour, model, {}, {}};
    for (const double x : truth) {
      p.value.push_back(x + std::sqrt(variance) * random.normal());
      p.variance.push_back(1.0);
    }
    const Quantities true_values = quantities(lambda, variance, truth);
    // A start that knows nothing of the truth.
    IntensitySample sample(p, {static_cast<std::uint32_t>(rep), 5}, 1.0 / 300.0, 150.0);
    int rank[5] = {};
    for (int i = -kWarming; i < kDraws * kThinning; ++i) {
      sample.sweep();
      sample.draw_parameters();
      if (i < 0 || i % kThinning != 0) continue;
      const Quantities q =
          quantities(sample.chain.strength, sample.chain.noise_variance, sample.pixels());
      for (int k = 0; k < 5; ++k) rank[k] += q.values[k] < true_values.values[k];
    }
    for (int k = 0; k < 5; ++k) ++count[k][rank[k] * kClasses / (kDraws + 1)];
  }
  const double expected = static_cast<double>(kReplications) / kClasses;
  for (int k = 0; k < 5; ++k) {
    double chi_squared = 0.0;
    for (const int n : count[k]) chi_squared += (n - expected) * (n - expected) / expected;
    CAPTURE(k, chi_squared, std::vector<int>(count[k], count[k] + kClasses));
    CHECK(chi_squared < kLimit);
  }
}
