#include "exactness/blurred_likelihood.h"

#include <algorithm>
#include <cmath>

namespace stillfield::exactness {

double plain_log_likelihood(const FieldSpec& spec, double blur, const Volume<float>& weight,
                            const Labels& z) {
  const int r = static_cast<int>(std::ceil(2.5 * blur));
  double sum = 0.0;
  for (int y = 0; y < spec.height; ++y) {
    for (int x = 0; x < spec.width; ++x) {
      const std::uint16_t level = spec.level[static_cast<std::size_t>(y * spec.width + x)];
      if (level == spec.levels) continue;
      double mean = 0.0, total = 0.0;
      for (int v = std::max(0, y - r); v <= std::min(spec.height - 1, y + r); ++v) {
        for (int u = std::max(0, x - r); u <= std::min(spec.width - 1, x + r); ++u) {
          const double h = std::exp(-((u - x) * (u - x) + (v - y) * (v - y)) / (2.0 * blur * blur));
          total += h;
          mean += h * spec.model.classes.mean[z[static_cast<std::size_t>(v * spec.width + u)]];
        }
      }
      const double sd = spec.model.classes.sd[z[static_cast<std::size_t>(y * spec.width + x)]];
      const double d = (spec.origin + spec.step * level - mean / total) / sd;
      sum += -std::log(sd) - 0.5 * static_cast<double>(weight.at(x, y)) * d * d;
    }
  }
  return sum;
}

}  // namespace stillfield::exactness
