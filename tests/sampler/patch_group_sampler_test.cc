// The group sampler as a whole: closed forms of its conditionals, and its invariance.
#include <catch2/catch.hpp>
#include <cmath>
#include <vector>

#include "random/counters.h"
#include "random/stream.h"
#include "sampler/patch_wishart.h"
#include "simd/normals.h"
#include "simd/patch_batch.h"
#include "simd/patch_group.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

constexpr int kSize = 4;  // 2 x 2 patches
constexpr int kMembers = 8;
constexpr int kPriorDegrees = 10;  // above d + 1
constexpr float kKappa = 1.0f;
constexpr PhiloxKey kKey{91, 92};

Eigen::MatrixXd prior_scale() {
  Eigen::MatrixXd a(kSize, kSize);
  for (int i = 0; i < kSize; ++i) {
    for (int j = 0; j < kSize; ++j) a(i, j) = 30.0 * std::exp(-0.5 * std::abs(i - j));
  }
  return a;
}

Eigen::VectorXd prior_mean() {
  return (Eigen::VectorXd(kSize) << 1.0, -0.5, 2.0, 0.0).finished();
}

void fill_normals(std::uint32_t sweep, std::uint32_t colour, AlignedBuffer<float>& out) {
  standard_normals(kKey, {0, 0, sweep, counter_word3(Purpose::kGroup, colour, 0)}, out.size(),
                   out.data());
}

void set_priors(GroupMemory& m) {
  for (int lane = 0; lane < kPatchLanes; ++lane) {
    set_lane_triangle(prior_scale(), lane, m.scale);
    set_lane_vector(prior_mean(), 0, lane, m.prior_mean);
  }
}

// One Gibbs update of Sigma, mu and the clean patches.
void update(std::uint32_t sweep, GroupMemory& m) {
  set_priors(m);
  fill_bartlett({kKey, 0, sweep}, kSize, kSize + 1 + kPriorDegrees + kMembers, m.factor.data());
  fill_normals(sweep, 4, m.centre);
  draw_group_parameters(m.groups(kKappa));
  fill_normals(sweep, 5, m.clean);
  update_group_patches(m.groups(kKappa), false, true);
}

Eigen::VectorXd normal_vector(RandomStream& random) {
  Eigen::VectorXd v(kSize);
  for (int i = 0; i < kSize; ++i) v[i] = random.normal();
  return v;
}

struct State {
  Eigen::MatrixXd precision;  // Sigma^-1
  Eigen::VectorXd mu;
  std::vector<Eigen::VectorXd> clean;
};

// Sigma^-1 as a sum of outer products (definition of the Wishart distribution), then downwards.
State draw_prior(RandomStream& random) {
  const Eigen::MatrixXd scale_inverse = prior_scale().inverse();
  const Eigen::MatrixXd root = scale_inverse.llt().matrixL();
  State s;
  s.precision = Eigen::MatrixXd::Zero(kSize, kSize);
  for (int i = 0; i < kSize + 1 + kPriorDegrees; ++i) {
    const Eigen::VectorXd g = root * normal_vector(random);
    s.precision += g * g.transpose();
  }
  const Eigen::MatrixXd covariance = s.precision.inverse();
  const Eigen::MatrixXd spread = covariance.llt().matrixL();
  s.mu = prior_mean() + spread * normal_vector(random) / std::sqrt(double{kKappa});
  for (int i = 0; i < kMembers; ++i) s.clean.push_back(s.mu + spread * normal_vector(random));
  return s;
}

State read_state(const GroupMemory& m, int lane) {
  const Eigen::MatrixXd v = lane_triangle(m.factor, kSize, lane);
  State s;
  s.precision = (v.transpose() * v).inverse() - Eigen::MatrixXd::Identity(kSize, kSize);
  s.mu = lane_vector(m.centre, 0, kSize, lane);
  for (int i = 0; i < kMembers; ++i) s.clean.push_back(lane_vector(m.clean, i, kSize, lane));
  return s;
}

std::vector<double> statistics(const State& s, const std::vector<Eigen::VectorXd>& value) {
  const Eigen::VectorXd x = s.clean[0] - prior_mean(), y = s.clean[5] - prior_mean();
  const Eigen::VectorXd mu = s.mu - prior_mean();
  return {s.precision(0, 0),
          s.precision(2, 1),
          std::log(s.precision.determinant()),
          mu[0],
          mu[1] * mu[1],
          mu[2] * mu[3],
          x[0] * x[0],
          x[0] * x[1],
          x[2] * y[2],
          (s.clean[3] - s.mu).dot(s.precision * (s.clean[3] - s.mu)),
          x[3] * (value[0][3] - s.mu[3]),
          std::sqrt(x.squaredNorm())};
}

}  // namespace

TEST_CASE("a group's covariance is drawn from its inverse Wishart distribution") {
  // Given fixed clean patches, Sigma^-1 ~ Wishart(n, A^-1) with mean n A^-1 and variance of entry
  // (i, j) n (B_ij^2 + B_ii B_jj), B = A^-1 (closed form). 16 * 300 draws, 10 entries and 4 means
  // within 4.5 standard errors: false alarm 1e-4.
  RandomStream random({93, 94}, Purpose::kSimulation);
  std::vector<Eigen::VectorXd> clean;
  for (int i = 0; i < kMembers; ++i) clean.push_back(2.0 * normal_vector(random));
  Eigen::VectorXd mean = Eigen::VectorXd::Zero(kSize);
  for (const Eigen::VectorXd& x : clean) mean += x / kMembers;
  Eigen::MatrixXd a = prior_scale();
  for (const Eigen::VectorXd& x : clean) a += (x - mean) * (x - mean).transpose();
  const Eigen::VectorXd off = mean - prior_mean();
  const double total = kMembers + double{kKappa};
  a += double{kKappa} * kMembers / total * off * off.transpose();
  const Eigen::VectorXd centre = mean - double{kKappa} / total * off;
  const double degrees = kSize + 1 + kPriorDegrees + kMembers;
  const Eigen::MatrixXd b = a.inverse();

  constexpr int kRounds = 300;
  GroupMemory m(kSize, kMembers);
  Eigen::MatrixXd sum = Eigen::MatrixXd::Zero(kSize, kSize);
  Eigen::VectorXd mu_sum = Eigen::VectorXd::Zero(kSize);
  for (std::uint32_t round = 0; round < kRounds; ++round) {
    set_priors(m);
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      for (int i = 0; i < kMembers; ++i) {
        set_lane_vector(clean[static_cast<std::size_t>(i)], i, lane, m.clean);
      }
    }
    fill_bartlett({kKey, 1, round}, kSize, static_cast<int>(degrees), m.factor.data());
    fill_normals(round, 4, m.centre);
    draw_group_parameters(m.groups(kKappa));
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      const Eigen::MatrixXd v = lane_triangle(m.factor, kSize, lane);
      sum += (v.transpose() * v).inverse() - Eigen::MatrixXd::Identity(kSize, kSize);
      mu_sum += lane_vector(m.centre, 0, kSize, lane);
    }
  }
  const double n = kRounds * kPatchLanes;
  for (int i = 0; i < kSize; ++i) {
    for (int j = 0; j <= i; ++j) {
      CAPTURE(i, j);
      const double error = std::sqrt(degrees * (b(i, j) * b(i, j) + b(i, i) * b(j, j)) / n);
      CHECK(std::abs(sum(i, j) / n - degrees * b(i, j)) < 4.5 * error);
    }
    // E Sigma = A / (n - d - 1), so mu has variance A_ii / ((n - d - 1) total).
    const double error = std::sqrt(a(i, i) / ((degrees - kSize - 1) * total * n));
    CHECK(std::abs(mu_sum[i] / n - centre[i]) < 4.5 * error);
  }
}

TEST_CASE("patches given a fixed covariance follow the closed-form Gaussian posterior") {
  // With Sigma and mu held fixed, draws have mean mu + G (y - mu) and covariance G. 16 * 400 draws
  // of 8 patches; means within 4.5 standard errors, the pooled covariance too: false alarm 3e-4.
  RandomStream random({95, 96}, Purpose::kSimulation);
  GroupMemory m(kSize, kMembers);
  const State s = draw_prior(random);
  const Eigen::MatrixXd gain = (Eigen::MatrixXd::Identity(kSize, kSize) + s.precision).inverse();
  const Eigen::MatrixXd q = Eigen::MatrixXd::Identity(kSize, kSize) + s.precision;
  const Eigen::MatrixXd r = q.llt().matrixL();
  for (int lane = 0; lane < kPatchLanes; ++lane) {
    set_lane_triangle(r.inverse(), lane, m.factor);
    set_lane_vector(s.mu, 0, lane, m.centre);
    for (int i = 0; i < kMembers; ++i) {
      set_lane_vector(s.clean[static_cast<std::size_t>(i)], i, lane, m.value);
    }
  }
  constexpr int kRounds = 400;
  const double n = kRounds * kPatchLanes;
  std::vector<Eigen::VectorXd> sum(kMembers, Eigen::VectorXd::Zero(kSize));
  Eigen::MatrixXd square = Eigen::MatrixXd::Zero(kSize, kSize);
  for (std::uint32_t round = 0; round < kRounds; ++round) {
    fill_normals(round, 5, m.clean);
    update_group_patches(m.groups(0.0f), false, true);
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      for (int i = 0; i < kMembers; ++i) {
        const auto at = static_cast<std::size_t>(i);
        const Eigen::VectorXd x = lane_vector(m.clean, i, kSize, lane);
        const Eigen::VectorXd off = x - s.mu - gain * (s.clean[at] - s.mu);
        sum[at] += off;
        square += off * off.transpose();
      }
    }
  }
  for (int i = 0; i < kSize; ++i) {
    for (const Eigen::VectorXd& v : sum)
      CHECK(std::abs(v[i] / n) < 4.5 * std::sqrt(gain(i, i) / n));
    for (int j = 0; j <= i; ++j) {
      const double error =
          std::sqrt((gain(i, i) * gain(j, j) + gain(i, j) * gain(i, j)) / (n * kMembers));
      CHECK(std::abs(square(i, j) / (n * kMembers) - gain(i, j)) < 4.5 * error);
    }
  }
}

TEST_CASE("updates of a group leave the joint distribution as it is") {
  // Geweke (2004): start at a draw of (Sigma, mu, x) from the prior with data y from the model; the
  // state after any number of updates given y has the prior's distribution again. Differences
  // after - before then have mean zero: 12 statistics within 4.5 standard errors, 6400 replicates:
  // false alarm 12 * 7e-6 = 1e-4.
  RandomStream random({97, 98}, Purpose::kSimulation);
  constexpr int kRounds = 400;
  constexpr int kUpdates = 3;
  GroupMemory m(kSize, kMembers);
  std::vector<double> sum, square;
  for (std::uint32_t round = 0; round < kRounds; ++round) {
    std::vector<std::vector<double>> before;
    std::vector<std::vector<Eigen::VectorXd>> values;
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      const State s = draw_prior(random);
      std::vector<Eigen::VectorXd> value;
      for (int i = 0; i < kMembers; ++i) {
        const Eigen::VectorXd& x = s.clean[static_cast<std::size_t>(i)];
        value.push_back(x + normal_vector(random));
        set_lane_vector(x, i, lane, m.clean);
        set_lane_vector(value.back(), i, lane, m.value);
      }
      before.push_back(statistics(s, value));
      values.push_back(value);
    }
    for (std::uint32_t t = 0; t < kUpdates; ++t) update(round * kUpdates + t, m);
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      const auto at = static_cast<std::size_t>(lane);
      const std::vector<double> after = statistics(read_state(m, lane), values[at]);
      sum.resize(after.size(), 0.0);
      square.resize(after.size(), 0.0);
      for (std::size_t i = 0; i < after.size(); ++i) {
        const double off = after[i] - before[at][i];
        sum[i] += off;
        square[i] += off * off;
      }
    }
  }
  const double n = kRounds * kPatchLanes;
  for (std::size_t i = 0; i < sum.size(); ++i) {
    CAPTURE(i, sum[i] / n);
    CHECK(square[i] > 0.0);
    CHECK(std::abs(sum[i] / n) < 4.5 * std::sqrt(square[i]) / n);
  }
}
