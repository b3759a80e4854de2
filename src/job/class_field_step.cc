#include "job/class_field_step.h"

#include "core/elementary.h"
#include "sampler/neighbour_sample.h"

namespace stillfield {
namespace {

constexpr int kSampledPixels = 16384;  // a step, over all chains
constexpr double kGainPower = 0.7;     // as sampler/coupling.cc

}  // namespace

void step_class_field(int block, LabelSampling& run) {
  NeighbourCounts counts;
  const int wanted = kSampledPixels / static_cast<int>(run.chains.size());
  for (const LabelChain& chain : run.chains) {
    sample_neighbours(*run.colouring, chain, wanted, (block % 8) / 8.0, counts);
  }
  LabelPrior prior = run.chains.front().model.prior;
  climb_class_field(counts, exact_exp(-kGainPower * exact_log(1.0 + block)), prior);
  for (LabelChain& chain : run.chains) chain.model.prior = prior;
}

}  // namespace stillfield
