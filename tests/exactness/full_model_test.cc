// The whole Gibbs sampler of a small field, labels and class parameters together, against exact
// values: labels enumerated, parameters integrated (class_evidence.h), means in rising order.
//
// Error    4 Monte Carlo standard errors from 1 000 batch means of 500 sweeps; false alarms 6.3e-5
//          a comparison, seeds fixed.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/class_evidence.h"
#include "exactness/test_field.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kBatch = 500;
constexpr int kBatches = 1000;
constexpr double kThreshold = 42.0;

struct FullModel {
  FieldSpec spec;
  GaussianPrior prior;
};

FullModel make_model(int width, int height, int classes, bool shared, std::uint64_t seed) {
  FullModel m{random_spec(width, height, Connectivity::kFour, classes, 0.6, seed), {}};
  m.spec.model.classes.shared_variance = shared;
  for (std::uint16_t& l : m.spec.level) l = l == m.spec.levels ? std::uint16_t{100} : l;
  m.prior = {45.0, 0.3, 900.0, 3.0};
  return m;
}

struct ExactPosterior {
  std::vector<double> marginal;  // [pixel * classes + k]
  std::vector<double> below;     // P(mean_k < threshold)
};

ExactPosterior integrate(const FullModel& m) {
  const LabelModel& model = m.spec.model;
  const int classes = model.size();
  GibbsField field{m.spec.width, m.spec.height, classes, false, model.prior.beta, {}};
  std::vector<double> grey;
  for (const std::uint16_t l : m.spec.level) {
    grey.push_back(m.spec.origin + m.spec.step * l);
    field.log_weight.insert(field.log_weight.end(), model.prior.alpha.begin(),
                            model.prior.alpha.end());
  }
  ExactPosterior exact;
  exact.marginal.assign(field.log_weight.size(), 0.0);
  exact.below.assign(static_cast<std::size_t>(classes), 0.0);
  double total = 0.0;
  constexpr double kShift = 100.0;  // keeps exp away from its limits
  for_each_state(field.pixels(), classes, [&](const Labels& z) {
    const Evidence e = model.classes.shared_variance
                           ? shared_variance_evidence(grey, z, m.prior)
                           : own_variance_evidence(grey, z, classes, m.prior, kThreshold);
    const double p = std::exp(log_potential(field, z) + e.log_value + kShift);
    total += p;
    for (std::size_t s = 0; s < z.size(); ++s) {
      exact.marginal[s * static_cast<std::size_t>(classes) + z[s]] += p;
    }
    for (std::size_t k = 0; k < e.below.size(); ++k) exact.below[k] += p * e.below[k];
  });
  for (double& v : exact.marginal) v /= total;
  for (double& v : exact.below) v /= total;
  return exact;
}

void check_posterior(const FullModel& m) {
  const ExactPosterior exact = integrate(m);
  TestField field(m.spec);
  const auto classes = static_cast<std::size_t>(m.spec.model.size());
  std::vector<BatchMeans> share(exact.marginal.size(), BatchMeans(kBatch));
  std::vector<BatchMeans> below(classes, BatchMeans(kBatch));
  int kept = 0;
  bool in_order = true;
  const int blocks = kBatch * kBatches, warm_up = 2000;
  for (int i = -warm_up; i < blocks; ++i) {
    field.prepare();
    field.sweep();
    field.total();
    RandomStream random(field.chain.key, Purpose::kParameters, field.chain.sweeps_done);
    kept += !draw_gaussian_classes(field.grey, field.chain.totals.classes, m.prior, random,
                                   field.chain.model.classes);
    const std::vector<double>& mean = field.chain.model.classes.mean;
    in_order = in_order && std::is_sorted(mean.begin(), mean.end());
    if (i < 0) continue;
    const Labels z = field.labels();
    for (std::size_t s = 0; s < z.size(); ++s) {
      for (std::size_t k = 0; k < classes; ++k) share[s * classes + k].add(z[s] == k);
    }
    for (std::size_t k = 0; k < classes; ++k) below[k].add(mean[k] < kThreshold);
  }
  const auto check = [](const Estimate& e, double value) {
    CAPTURE(e.mean, e.mcse, value);
    CHECK(e.mcse < 0.01);
    CHECK(e.deviations(value) <= 4.0);
  };
  for (std::size_t i = 0; i < share.size(); ++i) {
    CAPTURE(i / classes, i % classes);
    check(share[i].estimate(), exact.marginal[i]);
  }
  for (std::size_t k = 0; k < classes && !m.spec.model.classes.shared_variance; ++k) {
    CAPTURE(k);
    check(below[k].estimate(), exact.below[k]);
  }
  CHECK(in_order);
  CHECK(kept > blocks / 100);  // the order rule was put to work
}

}  // namespace

TEST_CASE("labels and ordered class means of a 3 x 3 field have their exact posterior") {
  check_posterior(make_model(3, 3, 2, false, 21));
}

TEST_CASE("three ordered classes of a 3 x 2 field have their exact posterior") {
  check_posterior(make_model(3, 2, 3, false, 22));
}

TEST_CASE("two classes with a shared variance have their exact posterior") {
  check_posterior(make_model(3, 3, 2, true, 23));
}
