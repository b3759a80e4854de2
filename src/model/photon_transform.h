// Generalised Anscombe transform of photon and read noise, and its unbiased inverse.
//
// Model    y = offset + gain k + n, k ~ Poisson((x - offset) / gain), n ~ N(0, variance), so that
//          Var y = gain (x - offset) + variance
// Maths    with v = (y - offset) / gain and s^2 = variance / gain^2:
//          z = 2 sqrt(max(v + 3/8 + s^2, 0)), sd about 1               (Starck & Murtagh 1994)
//          inverse of E[z | x], closed form of Makitalo & Foi 2013 ("Optimal inversion of the
//          generalized Anscombe transformation for Poisson-Gaussian noise"):
//          v = z^2/4 + sqrt(3/2)/(4 z) - 11/(8 z^2) + 5 sqrt(3/2)/(8 z^3) - 1/8 - s^2,
//          0 where that is below 0
// Ranges   gain > 0, variance >= 0; x >= offset comes back
// Accuracy the measured errors stand in tests/model/photon_transform_test.cc
#ifndef STILLFIELD_MODEL_PHOTON_TRANSFORM_H_
#define STILLFIELD_MODEL_PHOTON_TRANSFORM_H_

#include "model/noise_transform.h"

namespace stillfield {

class PhotonTransform : public VarianceTransform {
 public:
  PhotonTransform(double gain, double variance, double offset);

  double forward(double y) const override;
  double point_inverse(double z) const override;
  double slope(double z) const override;
  double sd() const override { return 1.0; }

 private:
  double gain_, offset_;
  double read_;   // s^2
  double least_;  // z whose inverse is 0
};

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PHOTON_TRANSFORM_H_
