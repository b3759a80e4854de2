#include "diagnose/summary.h"

#include <cmath>
#include <vector>

#include "diagnose/effective_sample_size.h"
#include "diagnose/moments.h"
#include "diagnose/quantile.h"
#include "diagnose/rhat.h"
#include "diagnose/standard_error.h"

namespace stillfield {

TraceSummary summarise(const Draws& draws) {
  TraceSummary s;
  if (!can_be_diagnosed(draws)) return s;
  s.mean = mean_of(draws.values());
  s.sd = std::sqrt(variance_of(draws.values()));
  const std::vector<double> sorted = sorted_copy(draws.values());
  s.lower90 = quantile_of_sorted(sorted, 0.05);
  s.upper90 = quantile_of_sorted(sorted, 0.95);
  s.lower95 = quantile_of_sorted(sorted, 0.025);
  s.upper95 = quantile_of_sorted(sorted, 0.975);
  s.mcse = mcse_mean(draws);
  s.rhat = rank_normalised_split_rhat(draws);
  s.ess_bulk = bulk_ess(draws);
  s.ess_tail = tail_ess(draws);
  return s;
}

}  // namespace stillfield
