#include "diagnose/autocovariance.h"

#include <algorithm>
#include <bit>
#include <span>

#include "diagnose/fourier.h"

namespace stillfield {
namespace {

// sum_i x_i x_{i+lag}
double lagged_product(std::span<const double> x, std::size_t lag) {
  const std::span<const double> later = x.subspan(lag);
  // Four sums side by side: a fixed order that still keeps the adders busy.
  double sum[4] = {0, 0, 0, 0};
  std::size_t i = 0;
  for (; i + 4 <= later.size(); i += 4) {
    for (std::size_t k = 0; k < 4; ++k) sum[k] += x[i + k] * later[i + k];
  }
  for (; i < later.size(); ++i) sum[0] += x[i] * later[i];
  return (sum[0] + sum[1]) + (sum[2] + sum[3]);
}

// The same for all lags at once, summed over the chains: the transform of the power spectrum.
std::vector<double> all_lagged_products(const Draws& x) {
  const std::size_t length = std::bit_ceil(2 * x.draws());  // no product wraps around
  const FourierTransform transform(length);
  ComplexSignal power(length);
  // Two real chains share a complex signal; the real part of its autocorrelation is their sum.
  for (std::size_t c = 0; c < x.chains(); c += 2) {
    ComplexSignal z(length);
    std::ranges::copy(x.chain(c), z.re.begin());
    if (c + 1 < x.chains()) std::ranges::copy(x.chain(c + 1), z.im.begin());
    transform.forward(z);
    for (std::size_t k = 0; k < length; ++k) power.re[k] += z.re[k] * z.re[k] + z.im[k] * z.im[k];
  }
  transform.backward(power);
  power.re.resize(x.draws());
  return power.re;
}

}  // namespace

double MeanAutocovariance::at(std::size_t lag) {
  if (lag >= centred_.draws()) return 0.0;
  const double divisor = static_cast<double>(centred_.size());
  if (lag >= kDirectLags) {
    if (all_lags_.empty()) all_lags_ = all_lagged_products(centred_);
    return all_lags_[lag] / divisor;
  }
  double sum = 0;
  for (std::size_t c = 0; c < centred_.chains(); ++c) sum += lagged_product(centred_.chain(c), lag);
  return sum / divisor;
}

}  // namespace stillfield
