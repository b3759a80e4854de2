#include "diagnose/effective_sample_size.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "core/elementary.h"
#include "diagnose/autocovariance.h"
#include "diagnose/moments.h"
#include "diagnose/quantile.h"
#include "diagnose/rank_normal.h"

namespace stillfield {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();
constexpr double kLn10 = 2.302585092994045684;

// Subtracts each chain's mean and returns the means.
std::vector<double> centre(Draws& draws) {
  std::vector<double> means;
  for (std::size_t c = 0; c < draws.chains(); ++c) {
    means.push_back(mean_of(draws.chain(c)));
    for (double& x : draws.chain(c)) x -= means.back();
  }
  return means;
}

// The last even lag that still averages four products; the truncation comes there at the latest.
std::size_t last_even_lag(std::size_t n) {
  return n < 6 ? 2 : (n - 4) / 2 * 2;
}

// Chains already split; takes its own copy to centre.
double ess_of(Draws split) {
  const std::size_t lags = split.draws();
  const double n = static_cast<double>(lags);
  const double total = static_cast<double>(split.size());
  const std::vector<double> means = centre(split);
  MeanAutocovariance covariance(split);
  const double c0 = covariance.at(0);
  if (c0 == 0) return kNaN;
  const double within = c0 * n / (n - 1);
  const double var_plus = c0 + variance_of(means);
  const auto rho = [&](std::size_t t) {
    return t == 0 ? 1.0 : 1.0 - (within - covariance.at(t)) / var_plus;
  };

  double tau = -1;
  double smallest_pair = std::numeric_limits<double>::infinity();
  const std::size_t last = last_even_lag(lags);
  for (std::size_t t = 0; t + 1 < lags; t += 2) {
    const double even = rho(t);
    const double pair = even + rho(t + 1);
    if (pair <= 0 || t == last) {
      tau += std::max(0.0, even);
      break;
    }
    smallest_pair = std::min(smallest_pair, pair);
    tau += 2 * smallest_pair;
  }
  return total / std::max(tau, kLn10 / exact_log(total));
}

}  // namespace

double ess_mean(const Draws& draws) {
  if (!can_be_diagnosed(draws)) return kNaN;
  return ess_of(split_chains(draws));
}

double bulk_ess(const Draws& draws) {
  if (!can_be_diagnosed(draws)) return kNaN;
  return ess_of(rank_normalise(split_chains(draws)));
}

double quantile_ess(const Draws& draws, double p) {
  if (!can_be_diagnosed(draws)) return kNaN;
  const std::vector<double> sorted = sorted_copy(draws.values());
  const double bound = quantile_of_sorted(sorted, p);
  const bool at_largest = bound == sorted.back();
  Draws indicator = draws;
  for (double& x : indicator.values()) x = (at_largest ? x < bound : x <= bound) ? 1.0 : 0.0;
  return ess_of(split_chains(indicator));
}

double tail_ess(const Draws& draws) {
  const double lower = quantile_ess(draws, 0.05);
  const double upper = quantile_ess(draws, 0.95);
  return std::isnan(lower) || std::isnan(upper) ? kNaN : std::min(lower, upper);
}

}  // namespace stillfield
