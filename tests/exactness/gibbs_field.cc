#include "exactness/gibbs_field.h"

#include <algorithm>
#include <cmath>

namespace stillfield::exactness {

double weighted_pairs(const GibbsField& f, const Labels& z) {
  const auto at = [&](int x, int y) { return z[static_cast<std::size_t>(y * f.width + x)]; };
  int straight = 0, diagonal = 0;
  for (int y = 0; y < f.height; ++y) {
    for (int x = 0; x < f.width; ++x) {
      const bool right = x + 1 < f.width, down = y + 1 < f.height;
      straight += right && at(x, y) == at(x + 1, y);
      straight += down && at(x, y) == at(x, y + 1);
      diagonal += right && down && at(x, y) == at(x + 1, y + 1);
      diagonal += right && down && at(x + 1, y) == at(x, y + 1);
    }
  }
  return straight + (f.diagonals ? diagonal / std::sqrt(2.0) : 0.0);
}

double log_potential(const GibbsField& f, const Labels& z) {
  double sum = f.beta * weighted_pairs(f, z);
  for (int s = 0; s < f.pixels(); ++s) sum += f.weight_of(s, z[static_cast<std::size_t>(s)]);
  return sum;
}

ExactSums sum_all_states(const GibbsField& f) {
  double top = -1e300;
  for_each_state(f.pixels(), f.classes,
                 [&](const Labels& z) { top = std::max(top, log_potential(f, z)); });
  ExactSums sums;
  sums.marginal.assign(f.log_weight.size(), 0.0);
  double total = 0.0;
  for_each_state(f.pixels(), f.classes, [&](const Labels& z) {
    const double p = std::exp(log_potential(f, z) - top);
    total += p;
    sums.mean_pairs += p * weighted_pairs(f, z);
    for (std::size_t s = 0; s < z.size(); ++s) {
      sums.marginal[s * static_cast<std::size_t>(f.classes) + z[s]] += p;
    }
  });
  for (double& m : sums.marginal) m /= total;
  sums.mean_pairs /= total;
  sums.log_z = top + std::log(total);
  return sums;
}

}  // namespace stillfield::exactness
