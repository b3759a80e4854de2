// Covariance of clean patches from the sample covariance of noisy ones.
//
// Maths    eigenvalues l = lambda / noise variance, gamma = d / n: below (1 + sqrt gamma)^2 an
//          eigenvalue cannot be told from noise and keeps v = 0.02 l; above,
//          v = (l + 1 - gamma + sqrt((l + 1 - gamma)^2 - 4 l)) / 2 - 1, both in noise variances:
//          the inverse of the spiked covariance model's bias (Baik & Silverstein 2006;
//          Donoho, Gavish & Johnstone 2018)
#ifndef STILLFIELD_MODEL_PATCH_SHRINKAGE_H_
#define STILLFIELD_MODEL_PATCH_SHRINKAGE_H_

#include <vector>

namespace stillfield {

// v for one eigenvalue, all in units of the noise variance; gamma > 0.
double shrunk_variance(double eigenvalue, double gamma);

// Shrinks every eigenvalue of the symmetric d x d sample covariance of `patches` (an effective
// number, above 0) noisy patches.
std::vector<double> shrunk_covariance(const std::vector<double>& sample, int d, double patches,
                                      double noise_variance);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_SHRINKAGE_H_
