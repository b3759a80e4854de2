// The coupling that predicts held-out pixels best.
//
// Why      A coupling fitted to the running labels (pseudo-likelihood) explains the labels of the
//          last sweep, speckles included, and is too small on noisy images of real shapes; one
//          fitted to the most probable labels feeds back on itself and is too large
//          (docs/accuracy.md has the figures).
// Maths    score(beta) = sum over held-out pixels s of log sum_k P(z_s = k | y without the held-out
//          pixels) f_k(y_s), the log predictive density of cross-validation (Geisser & Eddy 1979).
//          P is the mean of P(z_s = k | neighbours) over sweeps; alpha is fitted by
//          pseudo-likelihood at each beta. The choice averages beta and alpha over a ladder of
//          couplings with weights exp(score / 12): pseudo-Bayesian model averaging, softened for
//          the noise of the score.
// Method   every chain searches with its own eighth of the pixels held out; on images above
//          kWholeField pixels each chain searches in its own window of kWindow x kWindow.
#ifndef STILLFIELD_SAMPLER_COUPLING_SEARCH_H_
#define STILLFIELD_SAMPLER_COUPLING_SEARCH_H_

#include <vector>

#include "model/gaussian_draw.h"
#include "parallel/pool.h"
#include "sampler/label_chain.h"

namespace stillfield {

struct CouplingScore {
  double beta = 0.0;
  double score = 0.0;         // sum of log predictive densities
  std::vector<double> alpha;  // fitted at this beta
};

struct CouplingChoice {
  double beta = 0.0;
  std::vector<double> alpha;
  std::vector<CouplingScore> ladder;  // by rising beta
};

inline constexpr std::int64_t kWholeField = 320 * 320;
inline constexpr int kSearchWindow = 256;

// Chains give their labels and classes as the starting point and are not changed.
CouplingChoice search_coupling(const ObservedField& field, const GaussianPrior& prior,
                               const std::vector<LabelChain>& chains, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_COUPLING_SEARCH_H_
