// How the coupling and the class field are chosen.
//
//   auto      (alpha, beta) maximise the pseudo-likelihood of the running labels by stochastic
//             approximation over all chains; then beta is moved to where held-out pixels are
//             predicted best (coupling_search.h) and alpha follows by stochastic approximation;
//             then both stay fixed (docs/maths.md)
//   sampled   alpha = 0, beta drawn every block from its exact conditional by path sampling
//   fixed     alpha = 0, beta given
#ifndef STILLFIELD_SAMPLER_COUPLING_H_
#define STILLFIELD_SAMPLER_COUPLING_H_

#include <vector>

#include "sampler/coupling_search.h"
#include "sampler/label_chain.h"

namespace stillfield {

enum class CouplingMode { kAuto, kSampled, kFixed };

struct CouplingSettings {
  CouplingMode mode = CouplingMode::kAuto;
  double value = 0.0;  // for kFixed
};

// The choice of (alpha, beta) for --coupling auto, one step a block of sweeps.
class CouplingAdaptation {
 public:
  CouplingAdaptation(const ObservedField& field, const GaussianPrior& prior);

  // One step from the current labels of all chains; they all get the new values.
  void adapt(std::vector<LabelChain>& chains, const Pool& pool);

  // True when beta has been chosen and alpha has settled, or after kMaxSteps.
  bool settled() const;

  const CouplingChoice& choice() const { return choice_; }

  static constexpr int kFittingSteps = 30;  // pseudo-likelihood in alpha and beta, gain 1
  static constexpr int kMinSteps = 60;
  static constexpr int kMaxSteps = 160;
  static constexpr int kWindow = 15;
  static constexpr double kSettled = 0.02;  // largest change of alpha over kWindow steps

 private:
  const ObservedField* field_;
  GaussianPrior prior_;
  int steps_ = 0;
  std::vector<LabelPrior> recent_;
  CouplingChoice choice_;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_COUPLING_H_
