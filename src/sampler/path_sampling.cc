#include "sampler/path_sampling.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "sampler/sweep.h"

namespace stillfield {
namespace {

constexpr int kLargestSide = 256;
constexpr int kCoarsePoints = 24;  // over [0, max_beta]
constexpr int kDensePoints = 48;   // over +-25 % of the transition

// A field of ones: no likelihood, every class alike.
struct PriorField {
  PriorField(Extent extent, const Neighbourhood& neighbourhood, int classes)
      : colouring(extent, neighbourhood) {
    grey.level = Volume<std::uint16_t>(extent);
    grey.levels = 1;
    grey.histogram = {extent.sites()};
    grey.observed = extent.sites();
    field = observe(colouring, grey);
    model.prior.alpha.assign(static_cast<std::size_t>(classes), 0.0);
    model.classes.mean.assign(static_cast<std::size_t>(classes), 0.0);
    model.classes.sd.assign(static_cast<std::size_t>(classes), 1.0);
  }

  Colouring colouring;
  GreyLevels grey;
  ObservedField field;
  LabelModel model;
};

std::vector<double> coupling_grid(double last, double transition) {
  std::vector<double> grid;
  for (int i = 0; i <= kCoarsePoints; ++i) grid.push_back(last * i / kCoarsePoints);
  for (int i = 0; i <= kDensePoints; ++i) {
    grid.push_back(transition * (0.75 + 0.5 * i / kDensePoints));
  }
  std::sort(grid.begin(), grid.end());
  grid.erase(std::remove_if(grid.begin(), grid.end(), [last](double b) { return b > last; }),
             grid.end());
  return grid;
}

double pairs_of(Extent e, const Neighbourhood& neighbourhood) {
  double sum = 0.0;
  for (const NeighbourRing& ring : neighbourhood.rings) {
    for (const Displacement& d : ring.neighbours) {
      sum += 0.5 * ring.weight * std::max(0, e.width - std::abs(d.x)) *
             std::max(0, e.height - std::abs(d.y)) * std::max(0, e.depth - std::abs(d.z));
    }
  }
  return sum;
}

// E[S] at each coupling, walking the grid in the given order with one chain.
std::vector<double> walk(PriorField& prior, const std::vector<double>& grid, bool upwards,
                         std::uint64_t seed, int sweeps, const Pool& pool) {
  LabelChain chain;
  chain.key = chain_key(seed, upwards ? 1u : 2u);
  chain.model = prior.model;
  chain.labels = guarded_labels(prior.colouring);
  Volume<std::uint8_t> start(prior.colouring.extent());
  scatter_labels(prior.colouring, start.view(), chain.labels);
  std::vector<double> mean(grid.size());
  WeightPlanes weights;
  for (std::size_t step = 0; step < grid.size(); ++step) {
    const std::size_t i = upwards ? step : grid.size() - 1 - step;
    chain.model.prior.beta = grid[i];
    prepare_weights(prior.field, chain.model, pool, weights);
    sweep_labels(prior.colouring, weights, sweeps / 4, Purpose::kLogZ, pool, chain);
    double sum = 0.0;
    int draws = 0;
    for (int s = 0; s < sweeps; s += 2, ++draws) {
      sweep_labels(prior.colouring, weights, 2, Purpose::kLogZ, pool, chain);
      total_labels(prior.field, pool, chain);
      sum += chain.totals.weighted_pairs(prior.colouring.neighbourhood());
    }
    mean[i] = sum / draws;
  }
  return mean;
}

}  // namespace

double transition_coupling(const Neighbourhood& neighbourhood, int classes) {
  return exact_log(1.0 + std::sqrt(static_cast<double>(classes))) * 4.0 /
         neighbourhood.total_weight();
}

double max_coupling(const Neighbourhood& neighbourhood, int classes) {
  return 2.5 * transition_coupling(neighbourhood, classes);
}

LogPartition integrate_log_partition(Extent extent, const Neighbourhood& neighbourhood, int classes,
                                     std::uint64_t seed, const Pool& pool, int sweeps_a_point) {
  const Extent cell{std::min(extent.width, kLargestSide), std::min(extent.height, kLargestSide),
                    extent.depth};
  PriorField prior(cell, neighbourhood, classes);
  LogPartition result;
  result.beta = coupling_grid(max_coupling(neighbourhood, classes),
                              transition_coupling(neighbourhood, classes));
  const auto up = walk(prior, result.beta, true, seed, sweeps_a_point, pool);
  const auto down = walk(prior, result.beta, false, seed, sweeps_a_point, pool);
  const double cell_pairs = std::max(pairs_of(cell, neighbourhood), 1e-300);
  const double scale = pairs_of(extent, neighbourhood) / cell_pairs;
  double log_z = 0.0;
  for (std::size_t i = 0; i < result.beta.size(); ++i) {
    // At beta = 0 labels are independent: E[S] is known.
    const double mean = i == 0 ? cell_pairs / classes : 0.5 * (up[i] + down[i]);
    result.mean_pairs.push_back(mean * scale);
    result.hysteresis = std::max(result.hysteresis, std::fabs(up[i] - down[i]) / cell_pairs);
    if (i > 0) {
      log_z += 0.5 * (result.mean_pairs[i] + result.mean_pairs[i - 1]) *
               (result.beta[i] - result.beta[i - 1]);
    }
    result.log_z.push_back(log_z);
  }
  return result;
}

const LogPartition& LogPartitionMemo::get(Extent extent, const Neighbourhood& neighbourhood,
                                          int classes, std::uint64_t seed, const Pool& pool) {
  for (const Entry& e : entries_) {
    if (e.extent == extent && e.connectivity == neighbourhood.connectivity &&
        e.total_weight == neighbourhood.total_weight() && e.classes == classes && e.seed == seed) {
      return e.value;
    }
  }
  entries_.push_back({extent, neighbourhood.connectivity, neighbourhood.total_weight(), classes,
                      seed, integrate_log_partition(extent, neighbourhood, classes, seed, pool)});
  return entries_.back().value;
}

double LogPartition::log_z_at(double b) const {
  if (b <= 0.0) return 0.0;
  const auto above = std::lower_bound(beta.begin() + 1, beta.end() - 1, b);
  const auto i = static_cast<std::size_t>(above - beta.begin());
  const double width = beta[i] - beta[i - 1];
  if (width <= 0.0) return log_z[i];
  const double t = b - beta[i - 1];
  const double slope = (mean_pairs[i] - mean_pairs[i - 1]) / width;
  return log_z[i - 1] + t * (mean_pairs[i - 1] + 0.5 * slope * t);
}

double draw_coupling(const LogPartition& lp, double weighted_pairs, RandomStream& random) {
  const auto log_density = [&](double b) { return b * weighted_pairs - lp.log_z_at(b); };
  // The density is log-concave up to the noise of E[S]: find the mode on the grid, then a window
  // that holds all but e^-40 of it, then invert the distribution function on a fine grid.
  std::size_t best = 0;
  for (std::size_t i = 1; i < lp.beta.size(); ++i) {
    if (log_density(lp.beta[i]) > log_density(lp.beta[best])) best = i;
  }
  double low = lp.beta[best > 0 ? best - 1 : 0];
  double high = lp.beta[std::min(best + 1, lp.beta.size() - 1)];
  for (int refine = 0; refine < 60; ++refine) {  // golden-section-like narrowing to the mode
    const double a = low + (high - low) / 3.0, b = high - (high - low) / 3.0;
    if (log_density(a) < log_density(b)) {
      low = a;
    } else {
      high = b;
    }
  }
  const double mode = 0.5 * (low + high);
  const double top = log_density(mode);
  const auto reach = [&](double direction) {
    double step = 1e-6;
    while (step < lp.max_beta() &&
           log_density(std::clamp(mode + direction * step, 0.0, lp.max_beta())) > top - 40.0) {
      step *= 1.5;
    }
    return std::clamp(mode + direction * step, 0.0, lp.max_beta());
  };
  low = reach(-1.0);
  high = reach(1.0);
  constexpr int kPoints = 400;  // some 20 for each standard deviation of beta
  std::vector<double> cumulative(kPoints + 1);
  double last = exact_exp(log_density(low) - top);
  for (int i = 1; i <= kPoints; ++i) {
    const double next = exact_exp(log_density(low + (high - low) * i / kPoints) - top);
    cumulative[static_cast<std::size_t>(i)] =
        cumulative[static_cast<std::size_t>(i - 1)] + 0.5 * (last + next);
    last = next;
  }
  const double u = random.uniform() * cumulative.back();
  const auto at = std::lower_bound(cumulative.begin() + 1, cumulative.end() - 1, u);
  const auto i = static_cast<double>(at - cumulative.begin());
  const double inside = (u - *(at - 1)) / std::max(*at - *(at - 1), 1e-300);
  return low + (high - low) * (i - 1.0 + inside) / kPoints;
}

}  // namespace stillfield
