#include "random/stream.h"

#include <cmath>

#include "core/elementary.h"

namespace stillfield {

RandomStream::RandomStream(PhiloxKey key, Purpose purpose, std::uint32_t sweep, std::uint32_t lane)
    : key_(key), counter_{0, lane, sweep, counter_word3(purpose, 7, 0)} {}

std::uint32_t RandomStream::word() {
  if (used_ == 4) {
    block_ = philox4x32(counter_, key_);
    ++counter_[0];
    used_ = 0;
  }
  return block_[static_cast<std::size_t>(used_++)];
}

double RandomStream::uniform() {
  const std::uint64_t high = word();
  return open_uniform(high << 32 | word());
}

double RandomStream::normal() {
  for (;;) {
    const double u = 2.0 * uniform() - 1.0;
    const double v = 2.0 * uniform() - 1.0;
    const double s = u * u + v * v;
    if (s > 0.0 && s < 1.0) return u * std::sqrt(-2.0 * exact_log(s) / s);
  }
}

double RandomStream::gamma(double shape) {
  if (shape < 1.0) {
    const double boosted = gamma(shape + 1.0);
    return boosted * exact_exp(exact_log(uniform()) / shape);
  }
  const double d = shape - 1.0 / 3.0;
  const double c = 1.0 / std::sqrt(9.0 * d);
  for (;;) {
    const double x = normal();
    double v = 1.0 + c * x;
    if (v <= 0.0) continue;
    v = v * v * v;
    if (exact_log(uniform()) < 0.5 * x * x + d - d * v + d * exact_log(v)) return d * v;
  }
}

std::int64_t RandomStream::poisson(double mean) {
  std::int64_t count = 0;
  // The m-th arrival of a unit-rate process is Gamma(m): if it comes after `mean`, the earlier
  // m - 1 arrivals are uniform before it, and each falls before `mean` with the same chance.
  while (mean > 30.0) {
    const auto m = static_cast<std::int64_t>(mean * 7.0 / 8.0);
    const double arrival = gamma(static_cast<double>(m));
    if (arrival > mean) {
      const double p = mean / arrival;
      for (std::int64_t i = 1; i < m; ++i) count += uniform() < p ? 1 : 0;
      return count;
    }
    count += m;
    mean -= arrival;
  }
  for (double t = -exact_log(uniform()); t < mean; t -= exact_log(uniform())) ++count;
  return count;
}

}  // namespace stillfield
