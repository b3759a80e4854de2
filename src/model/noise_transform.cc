#include "model/noise_transform.h"

#include <algorithm>
#include <cmath>

#include "model/noise_rician_transform.h"
#include "model/photon_transform.h"

namespace stillfield {
namespace {

class Identity : public VarianceTransform {
 public:
  explicit Identity(double sd) : sd_(sd) {}
  double forward(double y) const override { return y; }
  double point_inverse(double z) const override { return z; }
  double slope(double) const override { return 1.0; }
  double sd() const override { return sd_; }

 private:
  double sd_;
};

}  // namespace

double VarianceTransform::mean_inverse(double z, double variance_of_z) const {
  const double step = std::sqrt(3.0 * std::max(variance_of_z, 0.0));
  return 2.0 / 3.0 * point_inverse(z) +
         (point_inverse(z - step) + point_inverse(z + step)) * (1.0 / 6.0);
}

std::unique_ptr<VarianceTransform> make_transform(const NoiseModel& model) {
  switch (model.kind) {
    case NoiseKind::kPhoton:
      return std::make_unique<PhotonTransform>(model.gain, model.variance, model.offset);
    case NoiseKind::kRician:
      return std::make_unique<RicianTransform>(model.sd);
    case NoiseKind::kGaussian:
      break;
  }
  return std::make_unique<Identity>(model.sd);
}

}  // namespace stillfield
