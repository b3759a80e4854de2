// Stationary correlation of the noise, and what it makes of the noise of a patch.
//
// Model    noise of a patch ~ N(0, sigma^2 C), C_ij = rho(pixel i - pixel j); rho = 0 beyond reach
// Repair   an estimated or cut-off rho need not be a correlation function: eigenvalues of C below
//          kLeastNoiseEigenvalue are raised to it, then C is scaled to a mean diagonal of 1
// Factors  C = L L'. Whitened patches L^-1 y have the noise sigma^2 I
// Shapes   rho: (2 reach + 1)^2 values, row by row from lag (-reach, -reach); the centre is 1
#ifndef STILLFIELD_MODEL_PATCH_NOISE_H_
#define STILLFIELD_MODEL_PATCH_NOISE_H_

#include <vector>

#include "model/square_matrix.h"

namespace stillfield {

inline constexpr double kLeastNoiseEigenvalue = 1e-3;
inline constexpr int kMaxNoiseReach = 5;

struct NoiseCorrelationModel {
  int reach = 0;  // 0: white
  std::vector<double> rho;

  bool white() const { return reach == 0; }
};

// Throws Error(kUsage) unless white, or reach, size, centre, symmetry and range of rho are right.
void check_noise_correlation(const NoiseCorrelationModel& model);

struct PatchNoise {
  SquareMatrix covariance;  // C, repaired
  SquareMatrix colour;      // L
  SquareMatrix whiten;      // L^-1
};

// For patches of side^2 pixels, row by row; not for white noise.
PatchNoise patch_noise(const NoiseCorrelationModel& model, int side);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_NOISE_H_
