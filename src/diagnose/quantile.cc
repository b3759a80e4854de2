#include "diagnose/quantile.h"

#include <algorithm>
#include <cmath>
#include <cstddef>
#include <limits>

namespace stillfield {

double quantile_of_sorted(std::span<const double> sorted, double p) {
  if (sorted.empty() || !(p >= 0.0 && p <= 1.0)) return std::numeric_limits<double>::quiet_NaN();
  const std::size_t last = sorted.size() - 1;
  const double h = static_cast<double>(last) * p;
  const std::size_t i = static_cast<std::size_t>(h);
  if (i >= last) return sorted[last];
  return sorted[i] + (h - static_cast<double>(i)) * (sorted[i + 1] - sorted[i]);
}

double quantile(std::span<const double> values, double p) {
  if (!std::all_of(values.begin(), values.end(), [](double x) { return std::isfinite(x); })) {
    return std::numeric_limits<double>::quiet_NaN();
  }
  return quantile_of_sorted(sorted_copy(values), p);
}

std::vector<double> sorted_copy(std::span<const double> values) {
  std::vector<double> sorted(values.begin(), values.end());
  std::sort(sorted.begin(), sorted.end());
  return sorted;
}

}  // namespace stillfield
