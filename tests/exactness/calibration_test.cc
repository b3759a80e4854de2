// The whole sampler of `--coupling sampled` leaves the joint distribution of parameters, labels and
// grey values as it is.
//
// Method   Parameters from their prior, labels and grey values given them; then some blocks of the
//          program's Gibbs sampler given the grey values, started from the very parameters and
//          labels. If every step is right, what comes out again has the prior distribution, however
//          slowly the chain moves: Geweke 2004 (joint distribution test) with independent
//          replications, as in Gandy & Scott 2020; see also simulation-based calibration (Talts et
//          al. 2018).
// Prior    exactness/joint_draw.h. Both classes are alike before the means are put in order, so the
//          parameters of a class picked by chance follow the prior without order.
// Error    Kolmogorov-Smirnov distance at a false-alarm level of 1e-3, means at 4 standard errors
#include <algorithm>
#include <boost/math/distributions/gamma.hpp>
#include <boost/math/distributions/students_t.hpp>
#include <catch2/catch.hpp>
#include <cmath>

#include "exactness/batch_means.h"
#include "exactness/joint_draw.h"
#include "exactness/row_states.h"
#include "random/stream.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

constexpr int kReplications = 4000;
constexpr int kBlocks = 10;

// Largest distance of the empirical distribution of values in [0, 1] from the uniform one, times
// sqrt n.
double uniform_distance(std::vector<double> values) {
  std::sort(values.begin(), values.end());
  const auto n = static_cast<double>(values.size());
  double distance = 0.0;
  for (std::size_t i = 0; i < values.size(); ++i) {
    distance = std::max({distance, values[i] - static_cast<double>(i) / n,
                         static_cast<double>(i + 1) / n - values[i]});
  }
  return distance * std::sqrt(n);
}

struct Outcome {
  LabelModel model;
  double pairs;
  double ones;  // share of label 1
};

Outcome replicate(const LogPartition& log_partition, std::uint64_t seed, double& beta_change) {
  const JointDraw joint = draw_jointly(log_partition, seed);
  TestField field(joint.spec);
  field.set_labels(joint.labels);
  LabelChain& chain = field.chain;
  const double beta_before = chain.model.prior.beta;
  for (int b = 0; b < kBlocks; ++b) {
    sweep_block(field);
    draw_parameters(log_partition, field);
  }
  beta_change += std::fabs(chain.model.prior.beta - beta_before);
  return {chain.model, field.pairs_now(),
          static_cast<double>(chain.totals.classes[1].sites) / (kJointSide * kJointSide)};
}

}  // namespace

TEST_CASE("exact draws of row states have the exact marginals") {
  const GibbsField f = plain_field(random_spec(4, 3, Connectivity::kFour, 3, 0.7, 3));
  const ExactSums exact = sum_row_states(f);
  RandomStream random(chain_key(51, 0), Purpose::kSimulation);
  std::vector<BatchMeans> share(f.log_weight.size(), BatchMeans(1));
  for (int i = 0; i < 4000; ++i) {
    const Labels z = draw_row_states(f, [&random] { return random.uniform(); });
    for (std::size_t at = 0; at < share.size(); ++at) share[at].add(z[at / 3] == at % 3);
  }
  for (std::size_t at = 0; at < share.size(); ++at) {
    CHECK(share[at].estimate().deviations(exact.marginal[at]) <= 4.0);
  }
}

TEST_CASE("labels, class parameters and coupling together keep their joint distribution") {
  const Neighbourhood neighbourhood = make_neighbourhood(Connectivity::kFour);
  const LogPartition log_partition = exact_log_partition(neighbourhood);
  const double max_beta = log_partition.max_beta();
  const boost::math::gamma_distribution<> precision(0.5 * kJointPrior.nu);
  const boost::math::students_t mean_law(kJointPrior.nu);
  std::vector<double> beta, sd, mean;
  BatchMeans pairs(1), ones(1);
  double beta_change = 0.0;
  for (int i = 0; i < kReplications; ++i) {
    const Outcome o = replicate(log_partition, static_cast<std::uint64_t>(7000 + i), beta_change);
    const GaussianClasses& classes = o.model.classes;
    const auto k = static_cast<std::size_t>(i % 2);
    beta.push_back(o.model.prior.beta / max_beta);
    sd.push_back(boost::math::cdf(
        precision, 0.5 * kJointPrior.nu * kJointPrior.variance / (classes.sd[k] * classes.sd[k])));
    mean.push_back(
        boost::math::cdf(mean_law, (classes.mean[k] - kJointPrior.mean) /
                                       std::sqrt(kJointPrior.variance / kJointPrior.kappa)));
    pairs.add(o.pairs);
    ones.add(o.ones);
  }
  // Kolmogorov 1933: P(sqrt n D > 1.9495) = 1e-3 for large n.
  CHECK(uniform_distance(beta) < 1.9495);
  CHECK(uniform_distance(sd) < 1.9495);
  CHECK(uniform_distance(mean) < 1.9495);
  // Mean of E_beta[S] over a uniform beta: the integral of d ln Z / d beta.
  CHECK(pairs.estimate().deviations(log_partition.log_z.back() / max_beta) <= 4.0);
  CHECK(ones.estimate().deviations(0.5) <= 4.0);
  // The chain has moved: two independent uniforms would differ by max_beta / 3 on average.
  CHECK(beta_change / kReplications > 0.1 * max_beta);
}
