#include "model/photon_transform.h"

#include <algorithm>
#include <cmath>

namespace stillfield {
namespace {

constexpr double kRoot32 = 1.2247448713915890;  // sqrt(3/2), also z of v = 0 without read noise

double inverse_of_counts(double z, double read) {
  const double t = 1.0 / z;
  return 0.25 * z * z - 0.125 - read +
         t * (0.25 * kRoot32 - t * (11.0 / 8.0 - t * (5.0 / 8.0 * kRoot32)));
}

}  // namespace

PhotonTransform::PhotonTransform(double gain, double variance, double offset)
    : gain_(gain), offset_(offset), read_(variance / (gain * gain)) {
  double low = kRoot32;
  double high = kRoot32 + 2.0 * std::sqrt(read_ + 1.0);
  for (int i = 0; i < 60; ++i) {
    const double middle = 0.5 * (low + high);
    (inverse_of_counts(middle, read_) < 0.0 ? low : high) = middle;
  }
  least_ = low;
}

double PhotonTransform::forward(double y) const {
  return 2.0 * std::sqrt(std::max((y - offset_) / gain_ + 0.375 + read_, 0.0));
}

double PhotonTransform::point_inverse(double z) const {
  if (!(z > least_)) return offset_;
  return offset_ + gain_ * std::max(inverse_of_counts(z, read_), 0.0);
}

double PhotonTransform::slope(double z) const {
  const double t = 1.0 / std::max(z, least_);
  return gain_ * (0.5 * std::max(z, least_) -
                  t * t * (0.25 * kRoot32 - t * (11.0 / 4.0 - t * (15.0 / 8.0 * kRoot32))));
}

}  // namespace stillfield
