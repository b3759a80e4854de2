// A short analysis of one grey image from given labels and model: what the bootstrap repeats.
//
// One chain, `settling` sweeps that are not counted and `counted` sweeps that are. The coupling
// stays as given; the class field is fitted again while settling (pseudo-likelihood, gains
// 2 / (2 + block)) when `fit_class_field` is set. Observed and simulated images go through the same
// run, so that its own faults, Monte Carlo error among them, are part of the errors it measures.
#ifndef STILLFIELD_JOB_SHORT_RUN_H_
#define STILLFIELD_JOB_SHORT_RUN_H_

#include <cstdint>
#include <vector>

#include "core/volume.h"
#include "parallel/pool.h"
#include "random/philox.h"
#include "sampler/sweep.h"

namespace stillfield {

struct ShortRunSettings {
  Connectivity connectivity = Connectivity::kFour;
  bool fit_class_field = true;
  int sweeps_a_block = 4;
  int settling = 60;
  int counted = 140;  // at most 255, the visits of a pixel that a byte holds
};

struct ShortRun {
  Volume<std::uint8_t> labels;  // most probable, 1..K
  std::vector<double> share;    // mean over the counted sweeps, of the usable pixels; one a class
};

// `start` holds labels 1..K. An empty `usable`: all pixels are. `weights` is room to work in.
ShortRun run_shortly(const GreyLevels& grey, View<const std::uint8_t> usable,
                     View<const std::uint8_t> start, const LabelModel& model,
                     const ShortRunSettings& settings, PhiloxKey key, const Pool& pool,
                     WeightPlanes& weights);

}  // namespace stillfield

#endif  // STILLFIELD_JOB_SHORT_RUN_H_
