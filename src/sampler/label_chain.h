// One Markov chain over label fields: its labels, its parameters, its place in the random numbers.
#ifndef STILLFIELD_SAMPLER_LABEL_CHAIN_H_
#define STILLFIELD_SAMPLER_LABEL_CHAIN_H_

#include <cstdint>
#include <vector>

#include "core/aligned_buffer.h"
#include "model/gaussian_draw.h"
#include "model/grey_levels.h"
#include "model/label_model.h"
#include "model/weight_table.h"
#include "random/counters.h"
#include "sampler/colouring.h"

namespace stillfield {

// The image as the sampler sees it; shared by all chains.
struct ObservedField {
  const Colouring* colouring = nullptr;
  const GreyLevels* grey = nullptr;
  AlignedBuffer<std::uint16_t> level;  // colour-split, image order within rows
};

ObservedField observe(const Colouring& colouring, const GreyLevels& grey);

// What a sweep needs besides the chain; rebuilt when the parameters change, so that chains run
// one after the other can share it.
struct WeightPlanes {
  WeightTable table;
  AlignedBuffer<float> value;  // colour-split; the rows of all classes side by side (sweep.cc)
};

// Exact integer sums over a label field.
struct LabelTotals {
  std::vector<ClassSums> classes;
  std::vector<std::uint64_t> equal_pairs;  // one a ring: pairs of neighbours with equal labels

  // S(z) = sum over pairs of w_st [z_s = z_t].
  double weighted_pairs(const Neighbourhood& neighbourhood) const;
};

struct LabelChain {
  PhiloxKey key{};
  std::uint32_t sweeps_done = 0;
  LabelModel model;
  AlignedBuffer<std::uint8_t> labels;  // colour-split with guards
  LabelTotals totals;                  // of the current labels
  std::vector<double> light;           // of shaded_chain.h; empty: even
  // Visits to each class above the first since they were last emptied (< 256); empty while
  // warming up.
  AlignedBuffer<std::uint8_t> visits;
  int visits_pending = 0;
};

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_LABEL_CHAIN_H_
