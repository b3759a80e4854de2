#include "measure/bootstrap_shares.h"

namespace stillfield {

// Order: correction, within, between, bias, posterior, floor.
BootstrapShares bootstrap_shares(const std::string& measurement) {
  if (measurement == "area_fraction") return {1.14, 1.02, 0.30, 0.39, 0.07, 0.0};
  if (measurement == "interface_length") return {0.73, 0.19, 4.0, 0.10, 6.6, 0.0};
  if (measurement == "particle_count") return {1.13, 0.13, 2.55, 0.24, 1.7, 2.8};
  if (measurement == "mean_intensity") return {1.27, 3.05, 0.46, 0.01, 0.08, 0.0};
  return {1.08, 0.08, 15.0, 0.06, 1.7, 0.19};  // mean area and percentiles of the diameter
}

}  // namespace stillfield
