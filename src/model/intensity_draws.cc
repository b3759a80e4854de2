#include "model/intensity_draws.h"

namespace stillfield {

double draw_strength(IntensityPrior prior, const ShapeRate& hyper, std::int64_t sites,
                     double difference_sum, RandomStream& random) {
  const double share = prior == IntensityPrior::kSmooth ? 0.5 : 1.0;
  const double shape = hyper.shape + share * static_cast<double>(sites - 1);
  return random.gamma(shape) / (hyper.rate + share * difference_sum);
}

double draw_noise_variance(const ShapeRate& hyper, std::int64_t observed, double residual_sum,
                           RandomStream& random) {
  const double shape = hyper.shape + 0.5 * static_cast<double>(observed);
  return (hyper.rate + 0.5 * residual_sum) / random.gamma(shape);
}

}  // namespace stillfield
