// Noise variance against grey value, v = a x + b, from a few noisy points.
//
// Maths    iteratively reweighted least squares of the relative residuals e = v / (a x + b) - 1
// with
//          weights w / (1 + (e / c)^2) (Cauchy), c = 3 s below the line and 1.5 s above it, s = the
//          residuals' scale by their median: texture only ever adds variance. a >= 0.
//          One image's (a, b) from scattered points: Foi, Trimeche, Katkovnik & Egiazarian 2008
// Input    flatness (noise_flat_set.h) of the blocks behind a point; points above kFlat lose weight
// Shapes   lists of equal length >= 2, v >= 0
#ifndef STILLFIELD_MODEL_NOISE_LINE_H_
#define STILLFIELD_MODEL_NOISE_LINE_H_

#include <vector>

namespace stillfield {

struct NoisePoints {
  static constexpr double kFlat = 1.1;
  std::vector<double> grey, variance, flatness;
};

struct NoiseLine {
  double slope = 0.0;
  double intercept = 0.0;
  double at(double grey) const { return slope * grey + intercept; }
};

// through_origin: the intercept is 0.
NoiseLine fit_noise_line(const NoisePoints& points, bool through_origin);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_LINE_H_
