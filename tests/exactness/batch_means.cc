#include "exactness/batch_means.h"

#include <cmath>
#include <limits>

namespace stillfield::exactness {

double Estimate::deviations(double exact) const {
  const double off = std::fabs(mean - exact);
  if (mcse > 0.0) return off / mcse;
  return off < 1e-9 ? 0.0 : std::numeric_limits<double>::infinity();
}

void BatchMeans::add(double value) {
  sum_ += value;
  if (++inside_ < batch_) return;
  add_batch(sum_ / batch_);
  sum_ = 0.0;
  inside_ = 0;
}

void BatchMeans::add_batch(double mean) {
  means_.push_back(mean);
}

Estimate BatchMeans::estimate() const {
  const auto n = static_cast<double>(means_.size());
  double mean = 0.0, squares = 0.0;
  for (const double m : means_) mean += m / n;
  for (const double m : means_) squares += (m - mean) * (m - mean);
  return {mean, std::sqrt(squares / (n - 1.0) / n)};
}

}  // namespace stillfield::exactness
