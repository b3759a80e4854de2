// Pixels held out of a label field, and how well the field predicts them.
//
// Maths    score = sum over held-out pixels s of log sum_k P(z_s = k | y without the held-out
//          pixels) f_k(y_s), the log predictive density of cross-validation (Geisser & Eddy 1979).
//          P is the mean over sweeps of P(z_s = k | neighbours): far less noisy than the share of
//          sweeps with label k (Rao-Blackwell).
// Folds    a random word of the pixel decides to which of `folds` parts it belongs; held-out
//          pixels are missing ones to the chain
#ifndef STILLFIELD_SAMPLER_HELD_OUT_H_
#define STILLFIELD_SAMPLER_HELD_OUT_H_

#include <cstdint>
#include <vector>

#include "sampler/label_chain.h"

namespace stillfield {

struct HeldOut {
  std::vector<double> value;           // grey values
  std::vector<std::size_t> neighbour;  // [pixel * neighbours + i]: label bytes
  std::vector<double> weight;          // [i], the same for all pixels
  std::vector<double> probability;     // [pixel * classes + k]: sums over the counted states
  int counted = 0;
};

// Marks the pixels of part `fold` as missing in `grey`, whose levels lie as `colouring` says.
HeldOut hold_out(const Colouring& colouring, PhiloxKey key, std::uint32_t fold, std::uint32_t folds,
                 int classes, GreyLevels& grey);

// Adds P(z_s = k | neighbours) of the chain's current labels.
void predict_held_out(const LabelChain& chain, HeldOut& held);

// Log predictive density of each held-out pixel; the counts are emptied.
std::vector<double> take_log_densities(const GaussianClasses& classes, HeldOut& held);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_HELD_OUT_H_
