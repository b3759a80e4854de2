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

void RunningMoments::add(double value) {
  if (count_++ == 0) first_ = value;
  sum_ += value - first_;
  const double before = value - centre_;
  centre_ += before / static_cast<double>(count_);
  squares_ += before * (value - centre_);
}

double RunningMoments::mean() const {
  if (count_ == 0) return std::numeric_limits<double>::quiet_NaN();
  return first_ + sum_ / static_cast<double>(count_);
}

double RunningMoments::variance() const {
  if (count_ < 2) return std::numeric_limits<double>::quiet_NaN();
  return squares_ / static_cast<double>(count_ - 1);
}

}  // namespace stillfield
