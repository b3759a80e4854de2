#include "model/patch_noise.h"

#include <Eigen/Eigenvalues>
#include <algorithm>
#include <cmath>
#include <cstdlib>

#include "core/error.h"

namespace stillfield {
namespace {

constexpr double kRounding = 1e-9;

SquareMatrix stationary(const NoiseCorrelationModel& model, int side) {
  const int reach = model.reach;
  SquareMatrix c(side * side);
  for (int i = 0; i < c.d; ++i) {
    for (int j = 0; j < c.d; ++j) {
      const int dx = j % side - i % side, dy = j / side - i / side;
      if (std::abs(dx) > reach || std::abs(dy) > reach) continue;
      c(i, j) = model.rho[static_cast<std::size_t>((dy + reach) * (2 * reach + 1) + dx + reach)];
    }
  }
  return c;
}

SquareMatrix repaired(const SquareMatrix& c) {
  const Eigen::Map<const Eigen::MatrixXd> matrix(c.value.data(), c.d, c.d);
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(matrix);
  if (solver.eigenvalues()[0] >= kLeastNoiseEigenvalue) return c;
  SquareMatrix out(c.d), vectors(c.d);
  double trace = 0.0;
  for (int i = 0; i < c.d; ++i) {
    out(i, i) = std::max(solver.eigenvalues()[i], kLeastNoiseEigenvalue);
    trace += out(i, i);
    for (int r = 0; r < c.d; ++r) vectors(r, i) = solver.eigenvectors()(r, i);
  }
  for (double& v : out.value) v *= c.d / trace;
  return congruent(vectors, out);
}

}  // namespace

void check_noise_correlation(const NoiseCorrelationModel& model) {
  if (model.white()) return;
  const std::size_t width = static_cast<std::size_t>(2 * std::clamp(model.reach, 0, 99) + 1);
  bool good = model.reach > 0 && model.reach <= kMaxNoiseReach && model.rho.size() == width * width;
  if (good) {
    good = model.rho[model.rho.size() / 2] == 1.0;
    for (std::size_t i = 0; i < model.rho.size(); ++i) {
      const double there = model.rho[i], back = model.rho[model.rho.size() - 1 - i];
      good = good && std::fabs(there) <= 1.0 && std::fabs(there - back) <= kRounding;
    }
  }
  if (!good) {
    throw Error(ErrorKind::kUsage,
                "the noise correlation is not a correlation: give (2 reach + 1)^2 symmetric values "
                "between -1 and 1 with 1 in the centre, reach at most 5");
  }
}

PatchNoise patch_noise(const NoiseCorrelationModel& model, int side) {
  PatchNoise noise;
  noise.covariance = repaired(stationary(model, side));
  noise.colour = cholesky(noise.covariance);
  noise.whiten = lower_inverse(noise.colour);
  return noise;
}

}  // namespace stillfield
