// Labels seen through blur: every marginal of small fields against sums over all states.
//
// Source   the model's formula in plain loops with libm, windows cut off and renormalised at the
//          border (model/blur.h); shares no code with the sampler
// Error    4 Monte Carlo standard errors from 1 000 batch means of 100 sweeps; a correct sampler
//          fails one comparison by chance with probability 6.3e-5, any of the about 220 with 1.4 %;
//          seeds are fixed
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/blurred_likelihood.h"
#include "exactness/test_field.h"
#include "sampler/blurred_sweep.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kBatch = 100;
constexpr int kBatches = 1000;

struct Case {
  int width, height, classes;
  Connectivity connectivity;
  double blur;
  bool own_variance;
};

FieldSpec blurred_spec(const Case& c) {
  FieldSpec spec = random_spec(c.width, c.height, c.connectivity, c.classes, 0.5,
                               static_cast<std::uint64_t>(7 * c.width + c.classes));
  if (!c.own_variance) std::fill_n(spec.model.classes.sd.begin(), c.classes, 25.0);
  for (double& sd : spec.model.classes.sd) sd *= 0.5;
  return spec;
}

Volume<float> some_weights(const Case& c) {
  Volume<float> weight({c.width, c.height});
  for (int y = 0; y < c.height; ++y) {
    for (int x = 0; x < c.width; ++x) weight.at(x, y) = (x + y) % 3 == 0 ? 0.5F : 1.0F;
  }
  return weight;
}

std::vector<double> exact_marginals(const FieldSpec& spec, const Case& c) {
  const Volume<float> weight = some_weights(c);
  GibbsField prior = plain_field(spec);
  for (int s = 0; s < prior.pixels(); ++s) {
    for (int k = 0; k < c.classes; ++k) {
      prior.log_weight[static_cast<std::size_t>(s * c.classes + k)] =
          spec.model.prior.alpha[static_cast<std::size_t>(k)];
    }
  }
  std::vector<double> marginal(prior.log_weight.size(), 0.0);
  double total = 0.0;
  const double shift = plain_log_likelihood(spec, c.blur, weight, Labels(spec.level.size(), 0));
  for_each_state(prior.pixels(), c.classes, [&](const Labels& z) {
    const double p =
        std::exp(log_potential(prior, z) - shift + plain_log_likelihood(spec, c.blur, weight, z));
    total += p;
    for (std::size_t s = 0; s < z.size(); ++s) {
      marginal[s * static_cast<std::size_t>(c.classes) + z[s]] += p;
    }
  });
  for (double& v : marginal) v /= total;
  return marginal;
}

void check(const Case& c) {
  const FieldSpec spec = blurred_spec(c);
  const std::vector<double> exact = exact_marginals(spec, c);
  const TestField start(spec);  // for its grey levels and neighbourhood
  BlurredField field = open_blurred_field(start.grey, make_blur_kernel(c.blur), some_weights(c));
  const LevelClasses levels = level_classes(start.grey, spec.model.classes);
  const Neighbourhood neighbourhood = make_neighbourhood(c.connectivity);
  std::uint32_t sweep = 0;
  std::int64_t changes = 0;
  std::vector<BatchMeans> share(exact.size(), BatchMeans(kBatch));
  for (int b = -5; b < kBatches; ++b) {
    refresh_blurred_field(levels, field);
    std::vector<int> visits(exact.size(), 0);
    for (int s = 0; s < kBatch; ++s) {
      changes += sweep_blurred(neighbourhood, spec.model, start.chain.key, sweep++, field);
      for (int p = 0; p < c.width * c.height; ++p) {
        ++visits[static_cast<std::size_t>(p * c.classes +
                                          field.labels.row(p / c.width)[p % c.width])];
      }
    }
    if (b < 0) continue;  // warm-up
    for (std::size_t i = 0; i < visits.size(); ++i) {
      share[i].add_batch(static_cast<double>(visits[i]) / kBatch);
    }
  }
  REQUIRE(changes > 0);
  std::size_t told = 0;
  for (std::size_t i = 0; i < exact.size(); ++i) {
    const Estimate e = share[i].estimate();
    CAPTURE(i, e.mean, e.mcse, exact[i]);
    if (exact[i] > 1e-3 && exact[i] < 0.999) {
      CHECK(e.deviations(exact[i]) <= 4.0);
      CHECK(e.mcse < 0.01);
      ++told;
    } else {  // too rare for a standard error from batches
      CHECK(std::fabs(e.mean - exact[i]) < 2e-3);
    }
  }
  CHECK(2 * told > exact.size());
}

}  // namespace

TEST_CASE("blurred labels: marginals of 3 x 3 and 4 x 3 fields are exact") {
  check({3, 3, 2, Connectivity::kFour, 0.7, false});
  check({3, 3, 2, Connectivity::kEight, 1.0, true});
  check({3, 3, 3, Connectivity::kFour, 0.6, false});
  check({3, 3, 3, Connectivity::kFour, 1.3, true});
  check({4, 3, 2, Connectivity::kFour, 0.5, true});
  check({4, 3, 3, Connectivity::kEight, 0.8, true});
}

TEST_CASE("blurred labels: running slope, curvature and residual agree with fresh ones") {
  for (const bool own : {false, true}) {
    const FieldSpec spec = blurred_spec({23, 19, 3, Connectivity::kFour, 1.1, own});
    const TestField start(spec);
    BlurredField field = open_blurred_field(start.grey, make_blur_kernel(1.1));
    const LevelClasses levels = level_classes(start.grey, spec.model.classes);
    refresh_blurred_field(levels, field);
    std::int64_t changes = 0;
    for (std::uint32_t s = 0; s < 10; ++s) {
      changes +=
          sweep_blurred(start.colouring.neighbourhood(), spec.model, start.chain.key, s, field);
    }
    CHECK(changes > 200);
    BlurredField fresh = open_blurred_field(start.grey, make_blur_kernel(1.1));
    Volume<std::uint8_t> labels({23, 19});
    get_labels(field, labels.view());
    set_labels(labels.view(), fresh);
    refresh_blurred_field(levels, fresh);
    for (int y = 0; y < 19; ++y) {
      for (int x = 0; x < 23; ++x) {
        CAPTURE(own, x, y);
        CHECK(field.residual.row(y)[x] == Approx(fresh.residual.row(y)[x]).margin(2e-3));
        CHECK(field.slope.row(y)[x] == Approx(fresh.slope.row(y)[x]).margin(2e-5));
        CHECK(field.curvature.row(y)[x] == Approx(fresh.curvature.row(y)[x]).epsilon(1e-4));
      }
    }
  }
}
