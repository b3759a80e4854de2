// How much each part of a bootstrap counts in an interval, by what was measured.
//
// Why      the parts of u^2 (measure/bootstrap_interval.h) are known for the image at hand; how far
//          they explain the error on real shapes is not a matter of theory, because the simulated
//          truths are not the scene
// Values   fitted by tests/study/bootstrap_shares.py to images of known truth (docs/trust.md names
//          them); the coverage table there is of other images
#ifndef STILLFIELD_MEASURE_BOOTSTRAP_SHARES_H_
#define STILLFIELD_MEASURE_BOOTSTRAP_SHARES_H_

#include <string>

#include "measure/bootstrap_interval.h"

namespace stillfield {

// `measurement`: a name of measure_labels.
BootstrapShares bootstrap_shares(const std::string& measurement);

}  // namespace stillfield

#endif  // STILLFIELD_MEASURE_BOOTSTRAP_SHARES_H_
