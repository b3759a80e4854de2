#include "diagnose/reference.h"

#include <algorithm>
#include <cmath>
#include <cstddef>

namespace stillfield::testing {
namespace {

long double mean(const std::vector<long double>& x) {
  long double sum = 0;
  for (const long double v : x) sum += v;
  return sum / static_cast<long double>(x.size());
}

long double variance(const std::vector<long double>& x) {
  long double sum = 0;
  for (const long double v : x) sum += (v - mean(x)) * (v - mean(x));
  return sum / static_cast<long double>(x.size() - 1);
}

std::vector<long double> pooled(const Chains& x) {
  std::vector<long double> all;
  for (const auto& chain : x) all.insert(all.end(), chain.begin(), chain.end());
  return all;
}

long double mean_variance(const Chains& x) {
  std::vector<long double> variances;
  for (const auto& chain : x) variances.push_back(variance(chain));
  return mean(variances);
}

long double variance_of_means(const Chains& x) {
  std::vector<long double> means;
  for (const auto& chain : x) means.push_back(mean(chain));
  return variance(means);
}

long double normal_quantile(long double p) {
  long double low = -40;
  long double high = 40;
  for (int i = 0; i < 200; ++i) {
    const long double z = 0.5L * (low + high);
    (0.5L * std::erfc(-z / std::sqrt(2.0L)) < p ? low : high) = z;
  }
  return 0.5L * (low + high);
}

template <typename F>
Chains transformed(const Chains& x, F f) {
  Chains out = x;
  for (auto& chain : out) {
    for (long double& v : chain) v = f(v);
  }
  return out;
}

}  // namespace

Chains reference_split(const Chains& x) {
  Chains out;
  for (const auto& chain : x) {
    const auto half = static_cast<std::ptrdiff_t>(chain.size() / 2);
    out.emplace_back(chain.begin(), chain.begin() + half);
    out.emplace_back(chain.end() - half, chain.end());
  }
  return out;
}

Chains reference_normal_scores(const Chains& x) {
  const std::vector<long double> all = pooled(x);
  return transformed(x, [&](long double v) {
    long double below = 0;
    long double equal = 0;
    for (const long double other : all) {
      if (other < v) ++below;
      if (other == v) ++equal;
    }
    const long double rank = below + (equal + 1) / 2;
    return normal_quantile((rank - 0.375L) / (static_cast<long double>(all.size()) + 0.25L));
  });
}

Chains reference_folded(const Chains& x) {
  // Twice the distance, which has the same ranks: the draws on both sides of the median tie
  // exactly.
  std::vector<long double> all = pooled(x);
  std::sort(all.begin(), all.end());
  const long double low = all[(all.size() - 1) / 2];
  const long double high = all[all.size() / 2];
  return transformed(x, [&](long double v) { return std::fabs((v - low) + (v - high)); });
}

long double reference_quantile(const Chains& x, long double p) {
  std::vector<long double> all = pooled(x);
  std::sort(all.begin(), all.end());
  const long double h = static_cast<long double>(all.size() - 1) * p;
  const auto i = static_cast<std::size_t>(h);
  if (i + 1 == all.size()) return all.back();
  return all[i] + (h - static_cast<long double>(i)) * (all[i + 1] - all[i]);
}

long double reference_rhat(const Chains& x) {
  const long double n = static_cast<long double>(x.front().size());
  const long double b = n * variance_of_means(x);
  const long double w = mean_variance(x);
  return std::sqrt(((n - 1) / n * w + b / n) / w);
}

long double reference_ess(const Chains& x) {
  const std::size_t n = x.front().size();
  const long double divisor = static_cast<long double>(n);
  const long double w = mean_variance(x);
  const long double var_plus = (divisor - 1) / divisor * w + variance_of_means(x);

  std::vector<long double> rho;
  for (std::size_t t = 0; t < n; ++t) {
    long double c = 0;
    for (const auto& chain : x) {
      const long double centre = mean(chain);
      for (std::size_t i = 0; i + t < n; ++i) c += (chain[i] - centre) * (chain[i + t] - centre);
    }
    c /= divisor * static_cast<long double>(x.size());
    rho.push_back(t == 0 ? 1 : 1 - (w - c) / var_plus);
  }
  std::vector<long double> pairs;
  for (std::size_t k = 0; 2 * k + 1 < n; ++k) pairs.push_back(rho[2 * k] + rho[2 * k + 1]);

  // Kept up to the first pair that is not positive, and no further than lag n - 4.
  const auto end = std::find_if(pairs.begin(), pairs.end(), [](long double p) { return p <= 0; });
  const std::size_t room = std::max<std::size_t>(n < 4 ? 0 : (n - 4) / 2, 1);
  const std::size_t kept = std::min(static_cast<std::size_t>(end - pairs.begin()), room);
  long double tau = -1;
  for (std::size_t k = 0; k < kept; ++k) {
    tau += 2 * *std::min_element(pairs.begin(), pairs.begin() + static_cast<std::ptrdiff_t>(k) + 1);
  }
  if (kept < pairs.size()) tau += std::max(0.0L, rho[2 * kept]);
  const long double s = divisor * static_cast<long double>(x.size());
  return std::min(s / tau > 0 ? s / tau : s * std::log10(s), s * std::log10(s));
}

long double reference_rank_normalised_split_rhat(const Chains& x) {
  return std::max(reference_rhat(reference_normal_scores(reference_split(x))),
                  reference_rhat(reference_normal_scores(reference_split(reference_folded(x)))));
}

long double reference_bulk_ess(const Chains& x) {
  return reference_ess(reference_normal_scores(reference_split(x)));
}

long double reference_tail_ess(const Chains& x) {
  long double smallest = INFINITY;
  for (const long double p : {0.05L, 0.95L}) {
    const long double q = reference_quantile(x, p);
    const Chains indicator = transformed(x, [q](long double v) { return v <= q ? 1.0L : 0.0L; });
    smallest = std::min(smallest, reference_ess(reference_split(indicator)));
  }
  return smallest;
}

long double reference_mcse_mean(const Chains& x) {
  return std::sqrt(variance(pooled(x)) / reference_ess(reference_split(x)));
}

}  // namespace stillfield::testing
