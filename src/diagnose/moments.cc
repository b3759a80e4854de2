#include "diagnose/moments.h"

#include <limits>

namespace stillfield {

double mean_of(std::span<const double> values) {
  if (values.empty()) return std::numeric_limits<double>::quiet_NaN();
  // Differences from the first value: exactly zero when all values are equal.
  double sum = 0;
  for (const double x : values) sum += x - values.front();
  return values.front() + sum / static_cast<double>(values.size());
}

double variance_of(std::span<const double> values) {
  if (values.size() < 2) return std::numeric_limits<double>::quiet_NaN();
  const double mean = mean_of(values);
  double sum = 0;
  for (const double x : values) sum += (x - mean) * (x - mean);
  return sum / static_cast<double>(values.size() - 1);
}

}  // namespace stillfield
