// The mixture posterior of one patch in double precision, label by label, with Eigen, given the
// covariance of its noise.
#ifndef STILLFIELD_TESTS_SAMPLER_PATCH_MOMENTS_REFERENCE_H_
#define STILLFIELD_TESTS_SAMPLER_PATCH_MOMENTS_REFERENCE_H_

#include <Eigen/Dense>
#include <cmath>
#include <vector>

#include "model/correlated_noise.h"
#include "model/patch_mixture.h"

namespace stillfield::testing {

struct PatchPosterior {
  std::vector<double> share;  // P(k | y)
  Eigen::VectorXd mean, variance;
};

inline PatchPosterior patch_posterior(const PatchMixture& mixture, const Eigen::MatrixXd& noise,
                                      const Eigen::VectorXd& y) {
  const int d = mixture.elements();
  std::vector<double> log_share;
  std::vector<Eigen::VectorXd> mean, variance;
  double most = -1e300;
  for (const PatchComponent& c : mixture.components) {
    const Eigen::Map<const Eigen::MatrixXd> covariance(c.covariance.data(), d, d);
    const Eigen::Map<const Eigen::VectorXd> centre(c.mean.data(), d);
    const Eigen::MatrixXd total = covariance + noise;
    const Eigen::MatrixXd inverse = total.inverse();
    const Eigen::VectorXd off = y - centre;
    log_share.push_back(std::log(c.weight) - 0.5 * std::log(total.determinant()) -
                        0.5 * off.dot(inverse * off));
    most = std::max(most, log_share.back());
    const Eigen::MatrixXd gain = covariance * inverse;
    mean.push_back(centre + gain * off);
    variance.push_back((covariance - gain * covariance).diagonal());
  }
  PatchPosterior out;
  double sum = 0.0;
  for (const double l : log_share) sum += std::exp(l - most);
  out.mean = Eigen::VectorXd::Zero(d);
  out.variance = Eigen::VectorXd::Zero(d);
  for (std::size_t k = 0; k < log_share.size(); ++k) {
    const double p = std::exp(log_share[k] - most) / sum;
    out.share.push_back(p);
    out.mean += p * mean[k];
  }
  for (std::size_t k = 0; k < log_share.size(); ++k) {
    const Eigen::VectorXd off = mean[k] - out.mean;
    out.variance += out.share[k] * (variance[k] + off.cwiseProduct(off));
  }
  return out;
}

// Covariance of the noise of a patch: white, or a moving average with a reach of 1.
inline Eigen::MatrixXd noise_covariance(int side, double sd, double average) {
  Eigen::MatrixXd c(side * side, side * side);
  for (int i = 0; i < side * side; ++i) {
    for (int j = 0; j < side * side; ++j) {
      c(i, j) = sd * sd * moving_average_rho(average, i % side - j % side, i / side - j / side);
    }
  }
  return c;
}

// A mixture of three smooth components around `level`.
inline PatchMixture smooth_mixture(int side, double level) {
  PatchMixture m;
  m.side = side;
  const int d = side * side;
  for (int k = 0; k < 3; ++k) {
    PatchComponent c;
    c.weight = 0.2 + 0.15 * k;
    for (int i = 0; i < d; ++i) c.mean.push_back(level + 8.0 * k + (k == 1 ? i % side : 0));
    for (int i = 0; i < d; ++i) {
      for (int j = 0; j < d; ++j) {
        const double dx = i % side - j % side, dy = i / side - j / side;
        c.covariance.push_back((40.0 + 60.0 * k) *
                                   std::exp(-(dx * dx + dy * dy) / (4.0 + 8.0 * k)) +
                               (i == j ? 0.5 : 0.0));
      }
    }
    m.components.push_back(c);
  }
  double total = 0.0;
  for (const PatchComponent& c : m.components) total += c.weight;
  for (PatchComponent& c : m.components) c.weight /= total;
  return m;
}

}  // namespace stillfield::testing

#endif  // STILLFIELD_TESTS_SAMPLER_PATCH_MOMENTS_REFERENCE_H_
