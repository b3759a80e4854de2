// Draws of the blur given labels and classes against quadrature of the formula.
//
// Error    4 Monte Carlo standard errors from 200 batch means of 100 draws; false alarms 6.3e-5 a
//          comparison, two comparisons; seeds fixed
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/blurred_likelihood.h"
#include "sampler/blurred_chain.h"

using namespace stillfield;
using namespace stillfield::exactness;

TEST_CASE("blur draws: mean and square follow the posterior") {
  constexpr int kWidth = 14, kHeight = 10;
  constexpr double kTrue = 0.9;
  FieldSpec spec = random_spec(kWidth, kHeight, Connectivity::kFour, 2, 0.5, 3);
  spec.model.classes.sd = {6.0, 9.0};
  Labels z;
  RandomStream random(chain_key(3, 7), Purpose::kSimulation);
  for (int s = 0; s < kWidth * kHeight; ++s) {
    z.push_back(s % kWidth > 6 && s / kWidth > 3 ? 1 : 0);
    const double edge = std::min(s % kWidth - 6.5, s / kWidth - 3.5) / kTrue;
    const double share = 0.5 * (1.0 + std::erf(edge / std::sqrt(2.0)));
    spec.level[static_cast<std::size_t>(s)] = static_cast<std::uint16_t>(
        std::min(255.0, std::max(0.0, 50.0 + 100.0 * share + 14.0 * random.normal())));
  }
  Volume<float> ones({kWidth, kHeight});
  for (int y = 0; y < kHeight; ++y) std::fill_n(ones.row(y), kWidth, 1.0F);
  double total = 0.0, mean = 0.0, square = 0.0;
  const double peak = plain_log_likelihood(spec, kTrue, ones, z);
  constexpr double kStep = 0.001;
  for (double b = kSmallestBlur + 0.5 * kStep; b < kLargestBlur; b += kStep) {
    const double p = std::exp(plain_log_likelihood(spec, b, ones, z) - peak);
    total += p;
    mean += p * b;
    square += p * b * b;
  }
  mean /= total;
  square /= total;
  REQUIRE(square - mean * mean > 1e-4);  // something to draw

  TestField start(spec);
  start.set_labels(z);
  LabelPosterior problem;
  problem.field = observe(start.colouring, start.grey);
  BlurredField field = open_blurred_chain(problem, make_blur_kernel(1.0), start.chain);
  BatchMeans drawn(100), squares(100);
  for (int i = -200; i < 20000; ++i) {
    draw_blur(problem, field, start.chain);
    ++start.chain.sweeps_done;  // names the random numbers
    if (i < 0) continue;
    drawn.add(field.kernel.sd);
    squares.add(field.kernel.sd * field.kernel.sd);
  }
  const Estimate m = drawn.estimate(), q = squares.estimate();
  CAPTURE(m.mean, m.mcse, mean, q.mean, q.mcse, square);
  CHECK(m.deviations(mean) <= 4.0);
  CHECK(q.deviations(square) <= 4.0);
}
