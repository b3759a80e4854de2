#include "model/patch_noise.h"

#include <Eigen/Dense>
#include <catch2/catch.hpp>
#include <cmath>

#include "core/error.h"
#include "model/correlated_noise.h"

using namespace stillfield;
using namespace stillfield::testing;

namespace {

Eigen::MatrixXd dense(const SquareMatrix& m) {
  Eigen::MatrixXd out(m.d, m.d);
  for (int r = 0; r < m.d; ++r) {
    for (int c = 0; c < m.d; ++c) out(r, c) = m(r, c);
  }
  return out;
}

// rho of white noise convolved with a Gaussian of deviation `blur`: Gaussian of deviation
// sqrt(2) blur; cut off beyond 2 it is no correlation function for a blur of 1.
NoiseCorrelationModel gaussian_model(double blur) {
  NoiseCorrelationModel model{2, {}};
  for (int dy = -2; dy <= 2; ++dy) {
    for (int dx = -2; dx <= 2; ++dx) {
      model.rho.push_back(std::exp(-(dx * dx + dy * dy) / (4.0 * blur * blur)));
    }
  }
  return model;
}

}  // namespace

TEST_CASE("the noise of a patch has the given correlations, and whitening undoes colouring") {
  for (const int side : {4, 6, 8}) {
    for (const double a : {0.3, -0.5, 0.9}) {
      for (const int reach : {1, 2}) {
        CAPTURE(side, a, reach);
        const PatchNoise noise = patch_noise(moving_average_model(a, reach), side);
        const Eigen::MatrixXd l = dense(noise.colour), w = dense(noise.whiten);
        Eigen::MatrixXd expected(side * side, side * side);
        for (int i = 0; i < side * side; ++i) {
          for (int j = 0; j < side * side; ++j) {
            expected(i, j) = moving_average_rho(a, i % side - j % side, i / side - j / side);
          }
        }
        const Eigen::MatrixXd identity = Eigen::MatrixXd::Identity(side * side, side * side);
        CHECK((l * l.transpose() - expected).cwiseAbs().maxCoeff() < 1e-12);
        CHECK((w * l - identity).cwiseAbs().maxCoeff() < 1e-10);
        CHECK((w * expected * w.transpose() - identity).cwiseAbs().maxCoeff() < 1e-9);
      }
    }
  }
}

TEST_CASE("a cut-off correlation is made positive definite with a mean variance of 1") {
  const NoiseCorrelationModel model = gaussian_model(1.0);
  const PatchNoise noise = patch_noise(model, 8);
  const Eigen::MatrixXd c = dense(noise.covariance);
  Eigen::MatrixXd raw(64, 64);
  for (int i = 0; i < 64; ++i) {
    for (int j = 0; j < 64; ++j) {
      const int dx = j % 8 - i % 8, dy = j / 8 - i / 8;
      const bool near = std::abs(dx) <= 2 && std::abs(dy) <= 2;
      raw(i, j) = near ? std::exp(-(dx * dx + dy * dy) / 4.0) : 0.0;
    }
  }
  REQUIRE(Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd>(raw).eigenvalues()[0] < 0.0);
  const double least = Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd>(c).eigenvalues()[0];
  CHECK(least > 0.5 * kLeastNoiseEigenvalue);
  CHECK(c.trace() == Approx(64.0).epsilon(1e-12));
  CHECK((c - c.transpose()).cwiseAbs().maxCoeff() == 0.0);
  CHECK((c - raw).cwiseAbs().maxCoeff() < 0.25);
  CHECK((dense(noise.colour) * dense(noise.colour).transpose() - c).cwiseAbs().maxCoeff() < 1e-12);
}

TEST_CASE("what is no correlation is refused") {
  CHECK_NOTHROW(check_noise_correlation({}));
  CHECK_NOTHROW(check_noise_correlation(gaussian_model(0.7)));
  NoiseCorrelationModel bad = gaussian_model(0.7);
  bad.rho.pop_back();
  CHECK_THROWS_AS(check_noise_correlation(bad), Error);
  bad = gaussian_model(0.7);
  bad.rho[0] += 0.1;  // no longer symmetric
  CHECK_THROWS_AS(check_noise_correlation(bad), Error);
  bad = gaussian_model(0.7);
  bad.rho[12] = 0.9;  // the centre
  CHECK_THROWS_AS(check_noise_correlation(bad), Error);
  bad = gaussian_model(0.7);
  bad.reach = 6;
  CHECK_THROWS_AS(check_noise_correlation(bad), Error);
}
