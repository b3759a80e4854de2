#include "model/gaussian_draw.h"

#include <algorithm>
#include <cmath>

namespace stillfield {
namespace {

ClassMoments moments(const GreyLevels& grey, const ClassSums& s) {
  ClassMoments m;
  m.n = static_cast<double>(s.observed);
  m.weight = m.n;
  if (s.observed == 0) return m;
  // 128-bit integers keep n * sum(l^2) - (sum l)^2 exact for any image.
  using Wide = unsigned __int128;
  const Wide spread = Wide{s.observed} * s.level_square_sum - Wide{s.level_sum} * s.level_sum;
  m.mean = grey.origin + grey.step * (static_cast<double>(s.level_sum) / m.n);
  m.squares = grey.step * grey.step * (static_cast<double>(spread) / m.n);
  return m;
}

}  // namespace

bool draw_gaussian_classes(const GreyLevels& grey, const std::vector<ClassSums>& sums,
                           const GaussianPrior& prior, RandomStream& random,
                           GaussianClasses& classes) {
  std::vector<ClassMoments> of_class;
  for (const ClassSums& s : sums) of_class.push_back(moments(grey, s));
  return draw_gaussian_classes(of_class, prior, random, classes);
}

bool draw_gaussian_classes(const std::vector<ClassMoments>& m, const GaussianPrior& prior,
                           RandomStream& random, GaussianClasses& classes) {
  const std::size_t count = m.size();
  std::vector<double> shape(count), scale(count);
  double shared_shape = 0.5 * prior.nu;
  double shared_scale = 0.5 * prior.nu * prior.variance;
  for (std::size_t k = 0; k < count; ++k) {
    const double shift = m[k].mean - prior.mean;
    const double pull = prior.kappa * m[k].weight / (prior.kappa + m[k].weight) * shift * shift;
    const double squares = 0.5 * (m[k].squares + (m[k].n > 0.0 ? pull : 0.0));
    shape[k] = 0.5 * (prior.nu + m[k].n);
    scale[k] = 0.5 * prior.nu * prior.variance + squares;
    shared_shape += 0.5 * m[k].n;
    shared_scale += squares;
  }
  GaussianClasses drawn = classes;
  const double shared = classes.shared_variance ? shared_scale / random.gamma(shared_shape) : 0.0;
  for (std::size_t k = 0; k < count; ++k) {
    const double variance = classes.shared_variance ? shared : scale[k] / random.gamma(shape[k]);
    const double weight = prior.kappa + m[k].weight;
    const double centre = (prior.kappa * prior.mean + m[k].weight * m[k].mean) / weight;
    drawn.sd[k] = std::sqrt(variance);
    drawn.mean[k] = centre + std::sqrt(variance / weight) * random.normal();
  }
  if (!std::is_sorted(drawn.mean.begin(), drawn.mean.end())) return false;
  classes = drawn;
  return true;
}

}  // namespace stillfield
