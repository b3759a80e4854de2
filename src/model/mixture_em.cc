#include "model/mixture_em.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numeric>
#include <string>

#include "core/elementary.h"
#include "core/error.h"

namespace stillfield {
namespace {

constexpr std::size_t kMaxBins = 1024;
constexpr int kMaxIterations = 200;
constexpr double kTolerance = 1e-9;  // relative gain in log likelihood

struct Moments {
  double weight = 0.0, mean = 0.0, variance = 0.0;
};

Moments total_moments(const GreyHistogram& h) {
  Moments m;
  for (std::size_t i = 0; i < h.value.size(); ++i) {
    m.weight += h.weight[i];
    m.mean += h.weight[i] * h.value[i];
  }
  m.mean /= m.weight;
  for (std::size_t i = 0; i < h.value.size(); ++i) {
    const double d = h.value[i] - m.mean;
    m.variance += h.weight[i] * d * d;
  }
  m.variance /= m.weight;
  return m;
}

// Neighbouring levels pooled into bins of equal width, each at its mean value. The bins span the
// middle 99.8 % of the weight, so that a few outliers do not coarsen them; the end bins take the
// rest.
GreyHistogram binned(const GreyHistogram& h) {
  if (h.value.size() <= kMaxBins) return h;
  const double total = std::accumulate(h.weight.begin(), h.weight.end(), 0.0);
  const auto quantile = [&](double share) {
    double below = 0.0;
    std::size_t i = 0;
    while (i + 1 < h.value.size() && (below += h.weight[i]) < share * total) ++i;
    return h.value[i];
  };
  const double low = quantile(0.001);
  const double width = std::max((quantile(0.999) - low) / kMaxBins, h.step);
  std::vector<double> weight(kMaxBins), sum(kMaxBins);
  for (std::size_t i = 0; i < h.value.size(); ++i) {
    const double at = std::clamp((h.value[i] - low) / width, 0.0, kMaxBins - 1.0);
    const auto b = static_cast<std::size_t>(at);
    weight[b] += h.weight[i];
    sum[b] += h.weight[i] * h.value[i];
  }
  GreyHistogram out;
  out.step = width;
  for (std::size_t b = 0; b < kMaxBins; ++b) {
    if (weight[b] == 0.0) continue;
    out.value.push_back(sum[b] / weight[b]);
    out.weight.push_back(weight[b]);
  }
  return out;
}

double log_scale(const Mixture& m, std::size_t k) {
  return exact_log(m.proportion[k]) - exact_log(m.classes.sd[k]);
}

double log_density(const Mixture& m, std::size_t k, double scale, double value) {
  const double d = (value - m.classes.mean[k]) / m.classes.sd[k];
  return scale - 0.5 * d * d;
}

// One step; returns the log likelihood (up to a constant) before it.
double em_step(const GreyHistogram& h, double least_variance, Mixture& m) {
  const std::size_t classes = m.proportion.size();
  std::vector<double> weight(classes), sum(classes), square(classes), log_term(classes),
      scale(classes);
  for (std::size_t k = 0; k < classes; ++k) scale[k] = log_scale(m, k);
  const double centre = h.value[h.value.size() / 2];  // keeps the squares small
  double log_likelihood = 0.0, total = 0.0;
  for (std::size_t i = 0; i < h.value.size(); ++i) {
    for (std::size_t k = 0; k < classes; ++k) {
      log_term[k] = log_density(m, k, scale[k], h.value[i]);
    }
    const double top = *std::max_element(log_term.begin(), log_term.end());
    double z = 0.0;
    for (double& t : log_term) z += t = exact_exp(t - top);
    log_likelihood += h.weight[i] * (top + exact_log(z));
    total += h.weight[i];
    const double v = h.value[i] - centre;
    for (std::size_t k = 0; k < classes; ++k) {
      const double r = h.weight[i] * log_term[k] / z;
      weight[k] += r;
      sum[k] += r * v;
      square[k] += r * v * v;
    }
  }
  double shared = 0.0;
  std::vector<double> variance(classes);
  for (std::size_t k = 0; k < classes; ++k) {
    if (weight[k] < 1e-9 * total) continue;  // an empty class stays where it is
    const double mean = sum[k] / weight[k];
    variance[k] = std::max(square[k] / weight[k] - mean * mean, least_variance);
    shared += weight[k] * variance[k];
    m.classes.mean[k] = centre + mean;
    m.classes.sd[k] = std::sqrt(variance[k]);
  }
  for (std::size_t k = 0; k < classes; ++k) {
    m.proportion[k] = std::max(weight[k] / total, 1e-9);
    if (m.classes.shared_variance) m.classes.sd[k] = std::sqrt(shared / total);
  }
  return log_likelihood;
}

Mixture run_em(const GreyHistogram& h, std::vector<double> means, double sd, double least_variance,
               bool shared) {
  Mixture m;
  m.classes.mean = std::move(means);
  m.classes.sd.assign(m.classes.mean.size(), sd);
  m.classes.shared_variance = shared;
  m.proportion.assign(m.classes.mean.size(), 1.0 / static_cast<double>(m.classes.mean.size()));
  double last = -1e300;
  for (int i = 0; i < kMaxIterations; ++i) {
    m.log_likelihood = em_step(h, least_variance, m);
    if (m.log_likelihood - last <= kTolerance * std::fabs(m.log_likelihood)) break;
    last = m.log_likelihood;
  }
  return m;
}

void sort_by_mean(Mixture& m) {
  std::vector<std::size_t> order(m.proportion.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::stable_sort(order.begin(), order.end(), [&m](std::size_t a, std::size_t b) {
    return m.classes.mean[a] < m.classes.mean[b];
  });
  Mixture sorted = m;
  for (std::size_t k = 0; k < order.size(); ++k) {
    sorted.classes.mean[k] = m.classes.mean[order[k]];
    sorted.classes.sd[k] = m.classes.sd[order[k]];
    sorted.proportion[k] = m.proportion[order[k]];
  }
  m = sorted;
}

}  // namespace

Mixture fit_mixture(const GreyHistogram& histogram, int classes, bool shared_variance) {
  if (static_cast<int>(histogram.value.size()) < classes) {
    throw Error(ErrorKind::kInput,
                "of the grey levels only " + std::to_string(histogram.value.size()) +
                    " occur, fewer than the " + std::to_string(classes) + " classes asked for");
  }
  const GreyHistogram h = binned(histogram);
  const Moments all = total_moments(h);
  const double least = std::max(1e-6 * all.variance, h.step * h.step / 12.0);
  const double low = h.value.front(), high = h.value.back();
  std::vector<double> by_quantile, by_distance;
  double below = 0.0;
  std::size_t at = 0;
  for (int k = 0; k < classes; ++k) {
    const double share = (k + 0.5) / classes;
    while (at + 1 < h.value.size() && below + h.weight[at] < share * all.weight) {
      below += h.weight[at++];
    }
    // Equal quantiles of a lumpy histogram coincide: keep the starting means apart.
    by_quantile.push_back(h.value[at] + (high - low) * 1e-3 * k);
    by_distance.push_back(low + (high - low) * share);
  }
  const double sd = std::sqrt(all.variance) / classes + std::sqrt(least);
  Mixture best = run_em(h, by_quantile, sd, least, shared_variance);
  const Mixture other = run_em(h, by_distance, sd, least, shared_variance);
  if (other.log_likelihood > best.log_likelihood) best = other;
  sort_by_mean(best);
  return best;
}

int most_likely_class(const Mixture& mixture, double value) {
  int best = 0;
  double largest = -std::numeric_limits<double>::infinity();
  for (std::size_t k = 0; k < mixture.proportion.size(); ++k) {
    const double density = log_density(mixture, k, log_scale(mixture, k), value);
    if (density <= largest) continue;
    largest = density;
    best = static_cast<int>(k);
  }
  return best;
}

}  // namespace stillfield
