// A short run with a given number of classes from one start, judged on pixels held out of it.
//
// Method   the coupling is given and rises from half of it over the first blocks, so that labels
//          can move far first; the class field is fitted by pseudo-likelihood on the running
//          labels (model/pseudo_likelihood.h); classes are drawn from their conditionals.
// Pixels   the held-out ones depend on `parts_key` and `part` alone: trials of several numbers of
//          classes can be compared pixel by pixel
#ifndef STILLFIELD_SAMPLER_CLASS_TRIAL_H_
#define STILLFIELD_SAMPLER_CLASS_TRIAL_H_

#include <cstdint>
#include <vector>

#include "model/smoothed_start.h"
#include "parallel/pool.h"
#include "sampler/held_out.h"

namespace stillfield {

struct TrialSettings {
  double beta = 1.0;
  int settling_blocks = 10;
  int counting_blocks = 10;
  std::uint32_t part = 0;
  std::uint32_t parts = 8;
  PhiloxKey parts_key{};
  PhiloxKey chain_key{};  // a key of its own for each trial
};

struct ClassTrial {
  std::vector<double> log_density;  // of each held-out pixel given the others, in nats
  LabelStart end;                   // last labels, mean classes of the counted blocks
};

ClassTrial try_classes(const GreyLevels& grey, const Neighbourhood& neighbourhood,
                       const LabelStart& start, const TrialSettings& settings, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_CLASS_TRIAL_H_
