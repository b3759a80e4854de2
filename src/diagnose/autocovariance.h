// Autocovariance, averaged over chains.
//
// Maths    c_t = mean over chains of 1/n sum_{i=0}^{n-1-t} (x_i - mean)(x_{i+t} - mean); divided by
//          n, not n - t: biased and stable  [Geyer 1992, Statistical Science 7, 473-483]
// Input    draws that are already centred: every chain has its own mean subtracted; they must
//          outlive the object
// Output   0 at lags >= n
// Cost     O(S) a lag for the first kDirectLags, which is all that chains that mix ask for; beyond
//          them one Fourier transform gives all lags in O(S log n)
#ifndef STILLFIELD_DIAGNOSE_AUTOCOVARIANCE_H_
#define STILLFIELD_DIAGNOSE_AUTOCOVARIANCE_H_

#include <cstddef>
#include <vector>

#include "diagnose/draws.h"

namespace stillfield {

class MeanAutocovariance {
 public:
  static constexpr std::size_t kDirectLags = 64;

  explicit MeanAutocovariance(const Draws& centred) : centred_(centred) {}

  double at(std::size_t lag);

 private:
  const Draws& centred_;
  std::vector<double> all_lags_;  // empty until a lag beyond kDirectLags is asked for
};

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_AUTOCOVARIANCE_H_
