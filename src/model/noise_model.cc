#include "model/noise_model.h"

#include <algorithm>
#include <cmath>

#include "core/error.h"
#include "model/noise_rician.h"

namespace stillfield {
namespace {

double photon_variance(const NoiseModel& m, double intensity) {
  return std::max(m.gain * (intensity - m.offset) + m.variance, 0.0);
}

NoiseModel with_one_sd(NoiseKind kind, double sd) {
  if (!(sd > 0.0) || !std::isfinite(sd)) {
    throw Error(ErrorKind::kUsage, "the noise level must be a number above 0");
  }
  NoiseModel m;
  m.kind = kind;
  m.sd = sd;
  m.lower90 = m.upper90 = sd;
  return m;
}

}  // namespace

double NoiseModel::sd_at(double intensity) const {
  switch (kind) {
    case NoiseKind::kGaussian:
      return sd;
    case NoiseKind::kRician:
      return sd * std::sqrt(rician_variance(std::max(intensity, 0.0) / sd));
    case NoiseKind::kPhoton:
      break;
  }
  const double least =
      kLeastShareOfMid * kLeastShareOfMid * std::max(photon_variance(*this, mid_grey), gain * gain);
  return std::sqrt(std::max(photon_variance(*this, intensity), least));
}

NoiseModel given_gaussian_noise(double sd) {
  return with_one_sd(NoiseKind::kGaussian, sd);
}

NoiseModel given_rician_noise(double sd) {
  return with_one_sd(NoiseKind::kRician, sd);
}

NoiseModel given_photon_noise(double gain, double variance, double offset, double mid_grey) {
  if (!(gain > 0.0) || !(variance >= 0.0) || !std::isfinite(gain) || !std::isfinite(variance) ||
      !std::isfinite(offset)) {
    throw Error(ErrorKind::kUsage,
                "photon noise needs a gain above 0 and a read-noise variance of 0 or more");
  }
  NoiseModel m;
  m.kind = NoiseKind::kPhoton;
  m.gain = gain;
  m.variance = variance;
  m.offset = offset;
  m.mid_grey = mid_grey;
  m.lower90 = m.upper90 = m.sd_at(mid_grey);
  return m;
}

}  // namespace stillfield
