#include "sampler/coupling.h"

#include <algorithm>
#include <cmath>

#include "core/elementary.h"
#include "sampler/neighbour_sample.h"
#include "sampler/path_sampling.h"

namespace stillfield {
namespace {

constexpr int kSampledPixels = 16384;  // over all chains, a step
constexpr double kGainPower = 0.7;     // gains t^-0.7: their sum diverges, their squares' does not

// Fractional part of the golden ratio's multiples spreads the sampling patterns evenly.
double phase_of(int step) {
  const double x = step * 0.6180339887498949;
  return x - std::floor(x);
}

double distance(const LabelPrior& a, const LabelPrior& b) {
  double d = std::fabs(a.beta - b.beta);
  for (std::size_t k = 0; k < a.alpha.size(); ++k) {
    d = std::max(d, std::fabs(a.alpha[k] - b.alpha[k]));
  }
  return d;
}

}  // namespace

CouplingAdaptation::CouplingAdaptation(const ObservedField& field, const GaussianPrior& prior)
    : field_(&field), prior_(prior) {}

void CouplingAdaptation::adapt(std::vector<LabelChain>& chains, const Pool& pool) {
  const Colouring& colouring = *field_->colouring;
  NeighbourCounts counts;
  const int wanted = kSampledPixels / static_cast<int>(chains.size());
  for (const LabelChain& chain : chains) {
    sample_neighbours(colouring, chain, wanted, phase_of(steps_), counts);
  }
  ++steps_;
  LabelPrior prior = chains.front().model.prior;
  if (steps_ <= kFittingSteps) {
    climb_pseudo_likelihood(
        counts, 1.0, max_coupling(colouring.neighbourhood(), static_cast<int>(prior.alpha.size())),
        prior);
  } else {
    climb_class_field(counts, exact_exp(-kGainPower * exact_log(steps_ - kFittingSteps)), prior);
  }
  if (steps_ == kFittingSteps) {
    for (LabelChain& chain : chains) chain.model.prior = prior;
    choice_ = search_coupling(*field_, prior_, chains, pool);
    prior = {choice_.alpha, choice_.beta};
  }
  for (LabelChain& chain : chains) chain.model.prior = prior;
  recent_.push_back(prior);
  if (static_cast<int>(recent_.size()) > kWindow) recent_.erase(recent_.begin());
}

bool CouplingAdaptation::settled() const {
  if (steps_ >= kMaxSteps) return true;
  if (steps_ < kMinSteps) return false;
  return std::all_of(recent_.begin(), recent_.end(), [this](const LabelPrior& p) {
    return distance(p, recent_.back()) <= kSettled;
  });
}

}  // namespace stillfield
