#include "diagnose/standard_error.h"

#include <cmath>
#include <limits>

#include "diagnose/effective_sample_size.h"
#include "diagnose/moments.h"

namespace stillfield {

double mcse_mean(const Draws& draws) {
  if (!can_be_diagnosed(draws)) return std::numeric_limits<double>::quiet_NaN();
  if (is_constant(draws)) return 0.0;
  return std::sqrt(variance_of(draws.values()) / ess_mean(draws));
}

}  // namespace stillfield
