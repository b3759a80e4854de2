#include "diagnose/rank_normal.h"

#include <algorithm>
#include <cmath>
#include <numeric>
#include <vector>

#include "diagnose/inverse_normal.h"
#include "diagnose/quantile.h"

namespace stillfield {

Draws rank_normalise(const Draws& draws) {
  const std::span<const double> x = draws.values();
  std::vector<std::size_t> order(x.size());
  std::iota(order.begin(), order.end(), std::size_t{0});
  std::sort(order.begin(), order.end(), [&](std::size_t a, std::size_t b) { return x[a] < x[b]; });

  Draws scores(draws.draws(), draws.chains());
  const double denominator = static_cast<double>(x.size()) + 0.25;
  for (std::size_t first = 0; first < order.size();) {
    std::size_t end = first + 1;
    while (end < order.size() && x[order[end]] == x[order[first]]) ++end;
    // The tied draws hold ranks first+1 .. end.
    const double rank = 0.5 * static_cast<double>(first + 1 + end);
    const double score = inverse_normal((rank - 0.375) / denominator);
    for (std::size_t i = first; i < end; ++i) scores.values()[order[i]] = score;
    first = end;
  }
  return scores;
}

Draws fold(const Draws& draws) {
  const std::vector<double> sorted = sorted_copy(draws.values());
  if (sorted.empty()) return draws;
  const double low = sorted[(sorted.size() - 1) / 2];
  const double high = sorted[sorted.size() / 2];
  Draws folded = draws;
  for (double& x : folded.values()) x = 0.5 * std::fabs((x - low) + (x - high));
  return folded;
}

}  // namespace stillfield
