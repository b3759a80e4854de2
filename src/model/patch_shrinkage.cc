#include "model/patch_shrinkage.h"

#include <Eigen/Eigenvalues>
#include <algorithm>
#include <cmath>

namespace stillfield {
namespace {

// Share of an eigenvalue kept when it cannot be told from noise.
constexpr double kResidualShare = 0.02;

}  // namespace

double shrunk_variance(double eigenvalue, double gamma) {
  const double edge = 1.0 + std::sqrt(gamma);
  if (!(eigenvalue > edge * edge)) return kResidualShare * std::max(eigenvalue, 0.1);
  const double b = eigenvalue + 1.0 - gamma;
  return 0.5 * (b + std::sqrt(std::max(b * b - 4.0 * eigenvalue, 0.0))) - 1.0;
}

std::vector<double> shrunk_covariance(const std::vector<double>& sample, int d, double patches,
                                      double noise_variance) {
  const Eigen::Map<const Eigen::MatrixXd> s(sample.data(), d, d);
  const Eigen::SelfAdjointEigenSolver<Eigen::MatrixXd> solver(s);
  const Eigen::MatrixXd& vectors = solver.eigenvectors();
  const double gamma = static_cast<double>(d) / patches;
  std::vector<double> out(sample.size(), 0.0);
  // Plain loops: a blocked product would follow the size of the CPU's caches.
  std::vector<double> variance(static_cast<std::size_t>(d));
  for (int i = 0; i < d; ++i) {
    const double l = solver.eigenvalues()[i] / noise_variance;
    variance[static_cast<std::size_t>(i)] = noise_variance * shrunk_variance(l, gamma);
  }
  for (int r = 0; r < d; ++r) {
    for (int c = 0; c <= r; ++c) {
      double sum = 0.0;
      for (int i = 0; i < d; ++i) {
        sum += vectors(r, i) * variance[static_cast<std::size_t>(i)] * vectors(c, i);
      }
      out[static_cast<std::size_t>(r * d + c)] = sum;
      out[static_cast<std::size_t>(c * d + r)] = sum;
    }
  }
  return out;
}

}  // namespace stillfield
