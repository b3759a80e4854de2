// Chains of the smooth field at fixed parameters against results known exactly: a sparse Cholesky
// factorisation, and cosines.
#include <Eigen/Sparse>
#include <Eigen/SparseCholesky>
#include <algorithm>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "exactness/cosine_field.h"
#include "exactness/intensity_sample.h"

using namespace stillfield;
using namespace stillfield::exactness;

namespace {

IntensityProblem make_problem(int side, Connectivity connectivity, bool uneven) {
  IntensityProblem p;
  p.width = p.height = side;
  p.connectivity = connectivity;
  RandomStream random({static_cast<std::uint32_t>(side), 7}, Purpose::kSimulation);
  for (int s = 0; s < side * side; ++s) {
    p.value.push_back(120.0 + 40.0 * std::sin(0.3 * (s % side)) + 25.0 * random.normal());
    p.variance.push_back(!uneven                  ? 600.0
                         : random.uniform() < 0.1 ? std::numeric_limits<double>::infinity()
                                                  : 200.0 + 1000.0 * random.uniform());
  }
  return p;
}

struct Exact {
  std::vector<double> mean, variance;
};

// Precision of prior and likelihood together, A = lambda L + diag(1 / v); mean A^-1 (y / v),
// marginal variances diag A^-1 (Rue & Held 2005).
Exact solve(const IntensityProblem& p, double lambda) {
  const int n = p.width * p.height;
  const Neighbourhood neighbourhood = make_neighbourhood(p.connectivity);
  std::vector<Eigen::Triplet<double>> entries;
  Eigen::VectorXd right(n);
  for (int s = 0; s < n; ++s) {
    const double v = p.variance[static_cast<std::size_t>(s)];
    const double precision = std::isinf(v) ? 0.0 : 1.0 / v;
    entries.emplace_back(s, s, precision);
    right[s] = precision > 0.0 ? precision * p.value[static_cast<std::size_t>(s)] : 0.0;
    for (const NeighbourRing& ring : neighbourhood.rings) {
      for (const Displacement& d : ring.neighbours) {
        const int x = s % p.width + d.x, y = s / p.width + d.y;
        if (x < 0 || x >= p.width || y < 0 || y >= p.height) continue;
        entries.emplace_back(s, s, lambda * ring.weight);
        entries.emplace_back(s, y * p.width + x, -lambda * ring.weight);
      }
    }
  }
  Eigen::SparseMatrix<double> a(n, n);
  a.setFromTriplets(entries.begin(), entries.end());
  const Eigen::SimplicialLDLT<Eigen::SparseMatrix<double>> cholesky(a);
  REQUIRE(cholesky.info() == Eigen::Success);
  const Eigen::VectorXd mean = cholesky.solve(right);
  Exact exact;
  for (int s = 0; s < n; ++s) {
    Eigen::VectorXd unit = Eigen::VectorXd::Zero(n);
    unit[s] = 1.0;
    const Eigen::VectorXd column = cholesky.solve(unit);
    exact.mean.push_back(mean[s]);
    exact.variance.push_back(column[s]);
  }
  return exact;
}

struct Agreement {
  int beyond = 0;            // values more than 4 standard errors off
  double worst = 0.0;        // in standard errors
  double mean_square = 0.0;  // of the deviations in standard errors; about 1
};

Agreement compare(const PixelMoments& m, const Exact& exact) {
  Agreement a;
  const auto look = [&](const BatchMeans& series, double expected) {
    const double d = series.estimate().deviations(expected);
    a.beyond += d > 4.0;
    a.worst = std::max(a.worst, d);
    a.mean_square += d * d / (2.0 * static_cast<double>(exact.mean.size()));
  };
  for (std::size_t s = 0; s < exact.mean.size(); ++s) {
    look(m.mean[s], exact.mean[s]);
    look(m.square[s], exact.variance[s]);
  }
  return a;
}

void check_against_cholesky(int side, Connectivity connectivity, bool uneven, int sweeps) {
  INFO("side " << side << ", neighbours " << static_cast<int>(connectivity) << ", uneven "
               << uneven);
  const double lambda = 2e-3;
  const IntensityProblem p = make_problem(side, connectivity, uneven);
  const Exact exact = solve(p, lambda);
  IntensitySample sample(p, {20261201, 1}, lambda, 1.0);
  const Agreement a = compare(sample_pixels(sample, exact.mean, sweeps, 100), exact);
  // A correct value is beyond 4 standard errors with probability 1e-4 (100 to 200 batches:
  // Student's t): 0.06 of 512 values are expected there, and 0.2 of 2048; more than 2 with
  // probability 2e-3 at most, one beyond 5.5 with 1e-3.
  CHECK(a.beyond <= 2);
  CHECK(a.worst < 5.5);
  CHECK(a.mean_square > 0.7);
  CHECK(a.mean_square < 1.4);
}

}  // namespace

TEST_CASE("the smooth field has the mean and the marginal variances of a Cholesky factorisation") {
  for (const Connectivity connectivity : {Connectivity::kFour, Connectivity::kEight}) {
    for (const bool uneven : {false, true}) {
      check_against_cholesky(16, connectivity, uneven, 20000);
    }
    check_against_cholesky(32, connectivity, true, 10000);
  }
}

TEST_CASE("the smooth field has the cosines' mean, variances and sums on 128 x 128 pixels") {
  constexpr int kSide = 128;
  const double lambda = 2e-3, variance = 600.0;
  const IntensityProblem p = make_problem(kSide, Connectivity::kFour, false);
  const CosineField cosines(kSide, kSide);
  const std::vector<double>& m = cosines.eigenvalues();
  std::vector<double> c = cosines.to_cosines(p.value);
  std::vector<double> posterior(c.size());
  double differences = 0.0, residuals = 0.0;  // expectations of S and R
  for (std::size_t k = 0; k < c.size(); ++k) {
    posterior[k] = 1.0 / (lambda * m[k] + 1.0 / variance);
    const double mean = posterior[k] * c[k] / variance;
    differences += m[k] * (mean * mean + posterior[k]);
    residuals += ((c[k] - mean) * (c[k] - mean) + posterior[k]) / variance;
    c[k] = mean;
  }
  const Exact exact{cosines.to_pixels(c), cosines.pixel_variances(posterior)};
  IntensitySample sample(p, {20261201, 2}, lambda, 1.0);
  const Agreement a = compare(sample_pixels(sample, exact.mean, 4000, 50), exact);
  // 32768 values at 1.5e-4 each (80 batches: Student's t) make 5 expected; more than 16 are
  // improbable below 1e-4 even if they came in pairs.
  CHECK(a.beyond <= 16);
  CHECK(a.mean_square > 0.9);
  CHECK(a.mean_square < 1.15);
  BatchMeans s(50), r(50);
  for (int i = 0; i < 4000; ++i) {
    sample.sweep();
    s.add(sample.differences());
    r.add(sample.residuals());
  }
  CHECK(s.estimate().deviations(differences) <= 4.0);
  CHECK(r.estimate().deviations(residuals) <= 4.0);
}
