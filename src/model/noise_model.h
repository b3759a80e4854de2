// The noise of an image: how the standard deviation depends on the true intensity.
//
// Maths    gaussian  sd(x) = sd
//          photon    sd(x)^2 = gain (x - offset) + variance      (EMVA 1288; Foi et al. 2008)
//          rician    y = |x + n1 + i n2|, n1, n2 ~ N(0, sd^2); sd(x) is that of y  (Gudbjartsson &
//                    Patz 1995)
// Units    those of the image file; gain in file units an electron
// Ranges   sd > 0, gain > 0, variance >= 0. sd_at never falls below kLeastShareOfMid of mid_sd for
//          photon noise, so that a weight 1 / sd^2 stays finite where the line meets zero
#ifndef STILLFIELD_MODEL_NOISE_MODEL_H_
#define STILLFIELD_MODEL_NOISE_MODEL_H_

#include <string>

namespace stillfield {

enum class NoiseKind { kGaussian, kPhoton, kRician };

struct NoiseModel {
  static constexpr double kLeastShareOfMid = 0.01;

  NoiseKind kind = NoiseKind::kGaussian;
  double sd = 0.0;        // gaussian, rician
  double gain = 0.0;      // photon
  double variance = 0.0;  // photon: at x = offset
  double offset = 0.0;    // photon
  double mid_grey = 0.0;  // the median grey value of the image
  double lower90 = 0.0;   // 90 % interval of the sd at mid_grey; the ends are equal when given
  double upper90 = 0.0;
  bool estimated = false;
  double impulse_share = 0.0;
  std::string warning;  // one or more sentences; empty: nothing to say

  // Standard deviation of a pixel whose true intensity is `intensity`.
  double sd_at(double intensity) const;
};

// Models of a given noise level. Throw Error(kUsage) unless sd > 0, gain > 0, variance >= 0.
NoiseModel given_gaussian_noise(double sd);
NoiseModel given_rician_noise(double sd);
NoiseModel given_photon_noise(double gain, double variance, double offset, double mid_grey);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_MODEL_H_
