// Variance-stabilising transforms: after `forward`, noise of any kind is nearly white and Gaussian
// with standard deviation sd(), and the restored value is brought back without bias.
//
// forward        z = f(y) of a measured value y
// point_inverse  the intensity x whose E[f(y) | x] is z: monotone, for interval bounds and modes
// slope          d point_inverse / dz: turns standard deviations of z into those of x
// mean_inverse   E[x] when z ~ N(mean, variance): three-point Gauss-Hermite quadrature of
//                point_inverse (exact for polynomials of degree 5; Abramowitz & Stegun 25.4.46)
// Transforms     gaussian  the identity, sd() = the noise's
//                photon    photon_transform.h, sd() = 1
//                rician    noise_rician_transform.h, sd() = 1
#ifndef STILLFIELD_MODEL_NOISE_TRANSFORM_H_
#define STILLFIELD_MODEL_NOISE_TRANSFORM_H_

#include <memory>

#include "model/noise_model.h"

namespace stillfield {

class VarianceTransform {
 public:
  virtual ~VarianceTransform() = default;

  virtual double forward(double y) const = 0;
  virtual double point_inverse(double z) const = 0;
  virtual double slope(double z) const = 0;
  virtual double sd() const = 0;

  double mean_inverse(double z, double variance_of_z) const;
};

std::unique_ptr<VarianceTransform> make_transform(const NoiseModel& model);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_TRANSFORM_H_
