#include "model/pseudo_likelihood.h"

#include <Eigen/Dense>
#include <algorithm>
#include <cmath>

#include "simd/exponentials.h"

namespace stillfield {
namespace {

constexpr double kPriorPrecision = 0.01;  // sd 10, for alpha_k around 0 and beta around 1
constexpr double kMaxStep = 0.5;
constexpr std::size_t kBatch = 256;  // pixels at a time
static_assert(kBatch % kExponentialsBatch == 0);

struct Score {
  Eigen::VectorXd gradient;  // alpha_2 .. alpha_K (alpha_1 = 0 fixes the scale), then beta
  Eigen::MatrixXd information;
};

// Weights of the pixels from `first` on, at most kBatch of them.
void fill_weights(const NeighbourCounts& counts, const LabelPrior& prior, std::size_t first,
                  std::vector<double>& weight) {
  const auto width = static_cast<std::size_t>(counts.classes);
  const std::size_t pixels = std::min(kBatch, counts.label.size() - first);
  for (std::size_t i = 0; i < pixels; ++i) {
    const float* n = counts.count.data() + (first + i) * width;
    double top = -1e300;
    for (std::size_t k = 0; k < width; ++k) {
      const double v = prior.alpha[k] + prior.beta * static_cast<double>(n[k]);
      weight[k * kBatch + i] = v;
      top = std::max(top, v);
    }
    for (std::size_t k = 0; k < width; ++k) weight[k * kBatch + i] -= top;
  }
  for (std::size_t k = 0; k < width; ++k) {
    exponentials(weight.data() + k * kBatch, static_cast<std::ptrdiff_t>(pixels));
  }
}

Score score(const NeighbourCounts& counts, const LabelPrior& prior) {
  const int classes = counts.classes;
  const auto width = static_cast<std::size_t>(classes);
  const int unknowns = classes;
  const int beta_at = classes - 1;
  Eigen::VectorXd gradient = Eigen::VectorXd::Zero(unknowns);
  Eigen::MatrixXd information = Eigen::MatrixXd::Zero(unknowns, unknowns);
  std::vector<double> p(width);
  std::vector<double> weight(width * kBatch);  // e^{alpha_k + beta n_k - top}, [k * kBatch + pixel]

  for (std::size_t s = 0; s < counts.label.size(); ++s) {
    const float* n = counts.count.data() + s * width;
    if (s % kBatch == 0) fill_weights(counts, prior, s, weight);
    double sum = 0.0;
    for (std::size_t k = 0; k < width; ++k) sum += p[k] = weight[k * kBatch + s % kBatch];
    double mean_n = 0.0, mean_square = 0.0;
    for (std::size_t k = 0; k < width; ++k) {
      p[k] /= sum;
      mean_n += p[k] * n[k];
      mean_square += p[k] * n[k] * n[k];
    }
    const std::size_t z = counts.label[s];
    gradient(beta_at) += n[z] - mean_n;
    information(beta_at, beta_at) += mean_square - mean_n * mean_n;
    for (int k = 1; k < classes; ++k) {
      const double pk = p[static_cast<std::size_t>(k)];
      gradient(k - 1) += (static_cast<int>(z) == k ? 1.0 : 0.0) - pk;
      information(k - 1, beta_at) += pk * (n[k] - mean_n);
      information(k - 1, k - 1) += pk;
      for (int j = 1; j <= k; ++j) information(k - 1, j - 1) -= pk * p[static_cast<std::size_t>(j)];
    }
  }
  for (int k = 1; k < classes; ++k) {
    gradient(k - 1) -= kPriorPrecision * prior.alpha[static_cast<std::size_t>(k)];
    information(beta_at, k - 1) = information(k - 1, beta_at);
    for (int j = 1; j < k; ++j) information(j - 1, k - 1) = information(k - 1, j - 1);
  }
  gradient(beta_at) -= kPriorPrecision * (prior.beta - 1.0);
  information.diagonal().array() += kPriorPrecision;
  return {gradient, information};
}

double limited(double step) {
  return std::clamp(step, -kMaxStep, kMaxStep);
}

}  // namespace

void climb_pseudo_likelihood(const NeighbourCounts& counts, double gain, double max_beta,
                             LabelPrior& prior) {
  const Score s = score(counts, prior);
  const Eigen::VectorXd step = gain * s.information.ldlt().solve(s.gradient);
  const int last = counts.classes - 1;
  for (int k = 0; k < last; ++k) prior.alpha[static_cast<std::size_t>(k + 1)] += limited(step(k));
  prior.beta = std::clamp(prior.beta + limited(step(last)), 0.0, max_beta);
}

void climb_class_field(const NeighbourCounts& counts, double gain, LabelPrior& prior) {
  const Score s = score(counts, prior);
  const int last = counts.classes - 1;
  const Eigen::MatrixXd information = s.information.topLeftCorner(last, last);
  const Eigen::VectorXd step = gain * information.ldlt().solve(s.gradient.head(last));
  for (int k = 0; k < last; ++k) prior.alpha[static_cast<std::size_t>(k + 1)] += limited(step(k));
}

}  // namespace stillfield
