#include "model/noise_rician_transform.h"

#include <algorithm>
#include <cmath>

#include "model/noise_rician.h"

namespace stillfield {
namespace {

constexpr double kStep = 0.1;   // between tabulated signals
constexpr int kSignals = 301;   // up to s = 30
constexpr double kGrid = 0.05;  // of the integral over y / sd
constexpr double kReach = 8.0;  // of the integral, in standard deviations

// Linear interpolation of y(x) at `at`; straight on beyond the ends. x ascends.
double interpolate(const std::vector<double>& x, const std::vector<double>& y, double at) {
  const auto above = std::upper_bound(x.begin() + 1, x.end() - 1, at);
  const auto i = static_cast<std::size_t>(above - x.begin());
  return y[i - 1] + (y[i] - y[i - 1]) / (x[i] - x[i - 1]) * (at - x[i - 1]);
}

}  // namespace

RicianTransform::RicianTransform(double sd) : scale_(sd) {
  double last_slope = 0.0;
  for (int i = 0; i < kSignals; ++i) {
    const double s = kStep * i;
    const double slope = 1.0 / std::sqrt(rician_variance(s));
    mean_.push_back(rician_mean(s));
    const std::size_t k = mean_.size() - 1;
    value_.push_back(k == 0
                         ? slope * mean_[0]
                         : value_[k - 1] + 0.5 * (slope + last_slope) * (mean_[k] - mean_[k - 1]));
    last_slope = slope;
  }
  for (int i = 0; i < kSignals; ++i) {
    const double s = kStep * i;
    double sum = 0.0, weight = 0.0;
    for (double r = std::max(s - kReach, 0.0) + 0.5 * kGrid; r < s + kReach; r += kGrid) {
      const double density = rician_density(r, s);
      weight += density;
      sum += density * stabilised(r);
    }
    signal_.push_back(s);
    expected_.push_back(sum / weight);
  }
}

double RicianTransform::stabilised(double r) const {
  if (r < mean_[0]) return value_[0] / mean_[0] * r;
  return interpolate(mean_, value_, r);
}

double RicianTransform::forward(double y) const {
  return stabilised(std::max(y, 0.0) / scale_);
}

double RicianTransform::point_inverse(double z) const {
  if (!(z > expected_[0])) return 0.0;
  // E f rises as s^2 near s = 0: interpolate s^2 there, which keeps the inverse monotone.
  if (z < expected_[1]) {
    return scale_ * kStep * std::sqrt((z - expected_[0]) / (expected_[1] - expected_[0]));
  }
  return scale_ * interpolate(expected_, signal_, z);
}

double RicianTransform::slope(double z) const {
  const auto above =
      std::upper_bound(expected_.begin() + 1, expected_.end() - 1, std::max(z, expected_[0]));
  const auto i = static_cast<std::size_t>(above - expected_.begin());
  return scale_ * kStep / (expected_[i] - expected_[i - 1]);
}

}  // namespace stillfield
