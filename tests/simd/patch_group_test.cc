// The group kernels against the same formulas in double precision by Eigen, and their bytes on
// every CPU target.
#include "simd/patch_group.h"

#include <catch2/catch.hpp>
#include <cmath>
#include <cstring>
#include <vector>

#include "simd/forced_target.h"
#include "simd/patch_batch.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

// Random groups: clean patches with a strong common part, a prior scale that differs by lane, and
// Bartlett triangles with a diagonal near its expectation.
GroupMemory random_groups(int d, int members, std::uint32_t seed) {
  GroupMemory m(d, members);
  RandomStream random({seed, 7}, Purpose::kSimulation);
  fill_normal(random, 3.0, m.clean);
  fill_normal(random, 3.0, m.value);
  fill_normal(random, 1.0, m.centre);
  fill_normal(random, 2.0, m.prior_mean);
  fill_normal(random, 1.0, m.factor);
  for (int lane = 0; lane < kPatchLanes; ++lane) {
    const Eigen::VectorXd common = 5.0 * Eigen::VectorXd::Ones(d) * random.normal();
    for (int i = 0; i < members; ++i) {
      set_lane_vector(lane_vector(m.clean, i, d, lane) + common, i, lane, m.clean);
    }
    Eigen::MatrixXd a = (2.0 + lane) * Eigen::MatrixXd::Identity(d, d);
    a += 0.5 * Eigen::MatrixXd::Ones(d, d);
    set_lane_triangle(a, lane, m.scale);
    for (int i = 0; i < d; ++i) {
      m.factor[static_cast<std::size_t>(triangle_at(i, i) * kPatchLanes + lane)] =
          static_cast<float>(std::sqrt(members + 11.0 + i) + 0.3 * random.normal());
    }
  }
  return m;
}

struct Expected {
  Eigen::VectorXd mu;
  Eigen::MatrixXd v;
};

Expected expected_parameters(const GroupMemory& m, int lane, double kappa) {
  const int d = m.d;
  const double n = m.members;
  Eigen::VectorXd mean = Eigen::VectorXd::Zero(d);
  for (int i = 0; i < m.members; ++i) mean += lane_vector(m.clean, i, d, lane) / n;
  Eigen::MatrixXd a = lane_triangle(m.scale, d, lane);
  a = Eigen::MatrixXd(a.selfadjointView<Eigen::Lower>());
  for (int i = 0; i < m.members; ++i) {
    const Eigen::VectorXd off = lane_vector(m.clean, i, d, lane) - mean;
    a += off * off.transpose();
  }
  const Eigen::VectorXd prior = lane_vector(m.prior_mean, 0, d, lane);
  a += kappa * n / (kappa + n) * (mean - prior) * (mean - prior).transpose();
  const Eigen::VectorXd centre = (kappa * prior + n * mean) / (kappa + n);
  const Eigen::MatrixXd l = a.llt().matrixL();
  const Eigen::MatrixXd dd = lane_triangle(m.factor, d, lane) * l.inverse();
  const Eigen::MatrixXd q = Eigen::MatrixXd::Identity(d, d) + dd.transpose() * dd;
  const Eigen::MatrixXd r = q.llt().matrixL();
  Expected e;
  e.mu = centre + dd.inverse() * lane_vector(m.centre, 0, d, lane) / std::sqrt(kappa + n);
  e.v = r.inverse();
  return e;
}

bool same_bytes(const AlignedBuffer<float>& a, const AlignedBuffer<float>& b) {
  return a.size() == b.size() && std::memcmp(a.data(), b.data(), a.size() * sizeof(float)) == 0;
}

}  // namespace

TEST_CASE("a group's covariance and mean follow from its normals as the formulas say") {
  // Single precision against double: errors of about 1e-5 of a matrix element are expected of
  // matrices whose condition numbers stay below some thousands, as here.
  for (const int d : {16, 36, 64}) {
    for (const double kappa : {0.0, 1.5}) {
      GroupMemory m = random_groups(d, d == 36 ? 40 : 12, 11);
      std::vector<Expected> expected;
      for (int lane = 0; lane < kPatchLanes; ++lane) {
        expected.push_back(expected_parameters(m, lane, kappa));
      }
      draw_group_parameters(m.groups(static_cast<float>(kappa)));
      for (int lane = 0; lane < kPatchLanes; ++lane) {
        CAPTURE(d, kappa, lane);
        const Expected& e = expected[static_cast<std::size_t>(lane)];
        CHECK((lane_triangle(m.factor, d, lane) - e.v).cwiseAbs().maxCoeff() < 1e-4);
        CHECK((lane_vector(m.centre, 0, d, lane) - e.mu).cwiseAbs().maxCoeff() < 1e-3);
      }
    }
  }
}

TEST_CASE("patches of a group get their conditional moments and draws") {
  for (const int d : {16, 64}) {
    GroupMemory m = random_groups(d, 8, 12);
    draw_group_parameters(m.groups(0.0f));
    RandomStream random({13, 7}, Purpose::kSimulation);
    fill_normal(random, 1.0, m.clean);
    fill_normal(random, 1.0, m.mean_sum);
    fill_normal(random, 1.0, m.variance_sum);
    const GroupMemory before = [&] {
      GroupMemory copy(d, 8);
      for (std::size_t i = 0; i < m.clean.size(); ++i) {
        copy.clean[i] = m.clean[i];
        copy.mean_sum[i] = m.mean_sum[i];
      }
      for (std::size_t i = 0; i < m.variance_sum.size(); ++i) {
        copy.variance_sum[i] = m.variance_sum[i];
      }
      return copy;
    }();
    update_group_patches(m.groups(0.0f), true, true);
    for (int lane = 0; lane < kPatchLanes; ++lane) {
      CAPTURE(d, lane);
      const Eigen::MatrixXd v = lane_triangle(m.factor, d, lane);
      const Eigen::VectorXd mu = lane_vector(m.centre, 0, d, lane);
      const Eigen::MatrixXd gain = v.transpose() * v;
      for (int i = 0; i < 8; ++i) {
        const Eigen::VectorXd mean = mu + gain * (lane_vector(m.value, i, d, lane) - mu);
        const Eigen::VectorXd sum = lane_vector(before.mean_sum, i, d, lane) + mean;
        const Eigen::VectorXd draw = mean + v.transpose() * lane_vector(before.clean, i, d, lane);
        CHECK((lane_vector(m.mean_sum, i, d, lane) - sum).cwiseAbs().maxCoeff() < 1e-4);
        CHECK((lane_vector(m.clean, i, d, lane) - draw).cwiseAbs().maxCoeff() < 1e-4);
      }
      const Eigen::VectorXd variance =
          lane_vector(before.variance_sum, 0, d, lane) + gain.diagonal();
      CHECK((lane_vector(m.variance_sum, 0, d, lane) - variance).cwiseAbs().maxCoeff() < 1e-5);
    }
  }
}

TEST_CASE("group kernels give the same bytes on every CPU target") {
  for (const int d : {16, 36, 64}) {
    GroupMemory first(4, 4);
    bool have_first = false;
    for_each_target([&](const std::string& name) {
      GroupMemory m = random_groups(d, 12, 14);
      draw_group_parameters(m.groups(0.7f));
      update_group_patches(m.groups(0.7f), true, true);
      if (have_first) {
        CAPTURE(d, name);
        CHECK(same_bytes(m.factor, first.factor));
        CHECK(same_bytes(m.centre, first.centre));
        CHECK(same_bytes(m.clean, first.clean));
        CHECK(same_bytes(m.mean_sum, first.mean_sum));
        CHECK(same_bytes(m.variance_sum, first.variance_sum));
      } else {
        first = std::move(m);
        have_first = true;
      }
    });
  }
}

TEST_CASE("a scale without rank does not lead to infinities") {
  // All patches equal and no prior scale: only the floor of the pivots is left.
  GroupMemory m = random_groups(16, 4, 15);
  for (float& v : m.clean) v = 3.0f;
  for (float& v : m.scale) v = 0.0f;
  draw_group_parameters(m.groups(0.0f));
  update_group_patches(m.groups(0.0f), true, false);
  for (const float v : m.mean_sum) CHECK(std::isfinite(v));
  for (const float v : m.variance_sum) CHECK((v >= 0.0f && v <= 16.0f));
}
