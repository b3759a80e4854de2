#include "model/patch_shrinkage.h"

#include <Eigen/Dense>
#include <catch2/catch.hpp>
#include <cmath>

using namespace stillfield;

TEST_CASE("the shrinkage undoes the bias of a spiked covariance's eigenvalues") {
  // Baik & Silverstein 2006, from memory: a population eigenvalue t > 1 + sqrt(gamma) of unit
  // noise appears at t (1 + gamma / (t - 1)) in the sample covariance.
  for (const double gamma : {0.01, 0.1, 0.5, 1.0}) {
    for (const double t : {1.0 + 1.05 * std::sqrt(gamma), 3.0, 10.0, 1000.0}) {
      if (t <= 1.0 + std::sqrt(gamma)) continue;
      CAPTURE(gamma, t);
      const double seen = t * (1.0 + gamma / (t - 1.0));
      CHECK(shrunk_variance(seen, gamma) == Approx(t - 1.0).epsilon(1e-9));
    }
  }
}

TEST_CASE("eigenvalues that noise alone can reach keep a small share") {
  // The upper end of the Marchenko-Pastur distribution is (1 + sqrt gamma)^2.
  CHECK(shrunk_variance(1.0, 0.25) == Approx(0.02));
  CHECK(shrunk_variance(2.24, 0.25) == Approx(0.02 * 2.24));
  CHECK(shrunk_variance(2.26, 0.25) > 0.3);
  CHECK(shrunk_variance(-1e-9, 0.25) > 0.0);
}

TEST_CASE("the covariance keeps its eigenvectors") {
  constexpr int kSize = 5;
  Eigen::MatrixXd mixing(kSize, kSize);
  for (int r = 0; r < kSize; ++r) {
    for (int c = 0; c < kSize; ++c) mixing(r, c) = (r * r * 7 + c * 3 + r * c) % 5 - 1.5;
  }
  const Eigen::HouseholderQR<Eigen::MatrixXd> qr(mixing);
  const Eigen::MatrixXd q = qr.householderQ();
  const Eigen::VectorXd seen = (Eigen::VectorXd(kSize) << 40.0, 9.0, 4.4, 3.6, 2.0).finished();
  const Eigen::MatrixXd sample = q * seen.asDiagonal() * q.transpose();
  const std::vector<double> flat(sample.data(), sample.data() + sample.size());
  const std::vector<double> out = shrunk_covariance(flat, kSize, 500.0, 4.0);
  const Eigen::Map<const Eigen::MatrixXd> got(out.data(), kSize, kSize);
  Eigen::VectorXd wanted(kSize);
  for (int i = 0; i < kSize; ++i) wanted[i] = 4.0 * shrunk_variance(seen[i] / 4.0, 0.01);
  const Eigen::MatrixXd expected = q * wanted.asDiagonal() * q.transpose();
  CHECK((got - expected).cwiseAbs().maxCoeff() < 1e-9);
}
