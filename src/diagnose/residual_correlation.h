// Is the noise of neighbouring pixels correlated?
//
// noise_correlation looks at the noisy image itself, because residuals y - restored are correlated
// on their own account: the restoration has taken part of the noise. It takes blocks of
// kCorrelationBlock^2 usable pixels, subtracts a plane from each, and keeps the kQuietShare of them
// with the smallest remaining norm.
//   Maths   rho(lag) = sum over blocks of sum e_s e_{s+lag} / (mean square * pairs), plus what
//           fitting the plane takes off it. For white Gaussian noise the direction of a block's
//           residual is independent of its norm, so choosing by norm leaves the distribution of
//           rho as it is, with standard error 1 / sqrt(pairs)
//   Test    two-sided normal tail of the largest |rho| / error among the lags (1,0), (0,1), (1,1),
//           (-1,1), times 4 (Bonferroni). Correlated when p < kCorrelationLevel, the false-alarm
//           level for white noise, and some |rho| > kLeastCorrelation, which faint texture in quiet
//           blocks stays below
//   Use     rho fills the covariance matrix of a patch of noise
//
// residual_autocorrelation is the plain correlation of standardised residuals, without a verdict.
//
// Shapes   rho: (2 reach + 1)^2 values, row by row from lag (-reach, -reach); the centre is 1
// Errors   p = NaN and no verdict when fewer than kFewestBlocksForTest blocks are usable
#ifndef STILLFIELD_DIAGNOSE_RESIDUAL_CORRELATION_H_
#define STILLFIELD_DIAGNOSE_RESIDUAL_CORRELATION_H_

#include <cstdint>
#include <string>
#include <vector>

#include "core/volume.h"

namespace stillfield {

inline constexpr int kCorrelationBlock = 12;
inline constexpr double kQuietShare = 0.1;
inline constexpr int kFewestBlocksForTest = 10;
inline constexpr double kCorrelationLevel = 0.001;
inline constexpr double kLeastCorrelation = 0.15;

struct NoiseCorrelation {
  int reach = 2;
  std::vector<double> rho;
  std::vector<double> error;  // standard error of rho for white noise
  double p_value = 0.0;
  bool correlated = false;
  std::string sentence;  // empty: nothing to say

  double at(int dx, int dy) const { return rho[index(dx, dy)]; }
  std::size_t index(int dx, int dy) const {
    return static_cast<std::size_t>((dy + reach) * (2 * reach + 1) + dx + reach);
  }
};

// reach: 1 to 5.
NoiseCorrelation noise_correlation(View<const float> image, View<const std::uint8_t> usable,
                                   int reach);

NoiseCorrelation residual_autocorrelation(View<const float> standardised,
                                          View<const std::uint8_t> usable, int reach);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_RESIDUAL_CORRELATION_H_
