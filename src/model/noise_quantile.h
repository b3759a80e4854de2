// Quantile of a short list by linear interpolation of its order statistics (definition 7 of Hyndman
// & Fan 1996). The list is taken by value and reordered; not empty, share in [0, 1].
#ifndef STILLFIELD_MODEL_NOISE_QUANTILE_H_
#define STILLFIELD_MODEL_NOISE_QUANTILE_H_

#include <algorithm>
#include <cstddef>
#include <utility>
#include <vector>

namespace stillfield {

inline double sample_quantile(std::vector<double> values, double share) {
  const double h = share * static_cast<double>(values.size() - 1);
  const auto i = static_cast<std::ptrdiff_t>(h);
  const auto at = values.begin() + i;
  std::nth_element(values.begin(), at, values.end());
  if (at + 1 == values.end()) return *at;
  const double next = *std::min_element(at + 1, values.end());
  return *at + (h - static_cast<double>(i)) * (next - *at);
}

inline double sample_median(std::vector<double> values) {
  return sample_quantile(std::move(values), 0.5);
}

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_NOISE_QUANTILE_H_
