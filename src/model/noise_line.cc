#include "model/noise_line.h"

#include <algorithm>
#include <cmath>

#include "model/noise_quantile.h"

namespace stillfield {
namespace {

constexpr int kRounds = 50;
constexpr double kLeastScale = 0.02;  // of the relative residuals

double square(double x) {
  return x * x;
}

NoiseLine weighted_line(const NoisePoints& p, const std::vector<double>& weight,
                        bool through_origin) {
  double w = 0.0, x = 0.0, v = 0.0, xx = 0.0, xv = 0.0;
  for (std::size_t i = 0; i < weight.size(); ++i) {
    w += weight[i];
    x += weight[i] * p.grey[i];
    v += weight[i] * p.variance[i];
  }
  const double mean_x = through_origin ? 0.0 : x / w;
  const double mean_v = through_origin ? 0.0 : v / w;
  for (std::size_t i = 0; i < weight.size(); ++i) {
    xx += weight[i] * square(p.grey[i] - mean_x);
    xv += weight[i] * (p.grey[i] - mean_x) * (p.variance[i] - mean_v);
  }
  const double slope = xx > 0.0 ? std::max(xv / xx, 0.0) : 0.0;
  return {slope, mean_v - slope * mean_x};
}

}  // namespace

NoiseLine fit_noise_line(const NoisePoints& p, bool through_origin) {
  const std::size_t n = p.grey.size();
  const double least = 1e-6 * *std::max_element(p.variance.begin(), p.variance.end()) + 1e-300;
  NoiseLine line{0.0, sample_median(p.variance)};
  std::vector<double> residual(n), magnitude(n), weight(n);
  for (int round = 0; round < kRounds; ++round) {
    for (std::size_t i = 0; i < n; ++i) {
      residual[i] = p.variance[i] / std::max(line.at(p.grey[i]), least) - 1.0;
      magnitude[i] = std::fabs(residual[i]);
    }
    const double scale = std::max(1.4826 * sample_median(magnitude), kLeastScale);
    for (std::size_t i = 0; i < n; ++i) {
      const double cut = (residual[i] > 0.0 ? 1.5 : 3.0) * scale;
      const double textured = std::max(p.flatness[i] - NoisePoints::kFlat, 0.0) / 0.7;
      weight[i] = 1.0 / ((1.0 + square(textured)) * (1.0 + square(residual[i] / cut)) *
                         square(std::max(line.at(p.grey[i]), least)));
    }
    const double top = *std::max_element(weight.begin(), weight.end());
    for (double& w : weight) w /= top;
    line = weighted_line(p, weight, through_origin);
  }
  return line;
}

}  // namespace stillfield
