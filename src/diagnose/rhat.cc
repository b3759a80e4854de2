#include "diagnose/rhat.h"

#include <algorithm>
#include <cmath>
#include <limits>
#include <vector>

#include "diagnose/moments.h"
#include "diagnose/rank_normal.h"

namespace stillfield {
namespace {

constexpr double kNaN = std::numeric_limits<double>::quiet_NaN();

// Chains as they are, already split.
double rhat_of(const Draws& split) {
  if (is_constant(split)) return kNaN;
  std::vector<double> means;
  double within = 0;
  for (std::size_t c = 0; c < split.chains(); ++c) {
    means.push_back(mean_of(split.chain(c)));
    within += variance_of(split.chain(c));
  }
  within /= static_cast<double>(split.chains());
  if (within == 0) return std::numeric_limits<double>::infinity();
  const double n = static_cast<double>(split.draws());
  return std::sqrt((n - 1) / n + variance_of(means) / within);
}

}  // namespace

double split_rhat(const Draws& draws) {
  if (!can_be_diagnosed(draws)) return kNaN;
  return rhat_of(split_chains(draws));
}

double rank_normalised_split_rhat(const Draws& draws) {
  if (!can_be_diagnosed(draws)) return kNaN;
  const double bulk = rhat_of(rank_normalise(split_chains(draws)));
  const double folded = rhat_of(rank_normalise(split_chains(fold(draws))));
  return std::isnan(folded) ? bulk : std::max(bulk, folded);
}

}  // namespace stillfield
