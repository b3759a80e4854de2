#include "measure/bootstrap_shares.h"

namespace stillfield {

BootstrapShares bootstrap_shares(const std::string& measurement) {
  if (measurement == "area_fraction") return {1.0, 1.0, 1.0, 0.5, 1.0, 0.0};
  return {1.0, 1.0, 1.0, 1.0, 1.0, 1.0};
}

}  // namespace stillfield
