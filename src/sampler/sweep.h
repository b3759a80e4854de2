// Gibbs sweeps over a label field.
//
// Maths    every pixel once, colour by colour:
//          P(z_s = k | rest) prop. to e^{alpha_k} f_k(y_s) e^{beta n_k(s)},
//          n_k(s) = sum over neighbours t of w_st [z_t = k]      (Geman & Geman 1984)
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_SAMPLER_SWEEP_H_
#define STILLFIELD_SAMPLER_SWEEP_H_

#include "parallel/pool.h"
#include "sampler/label_chain.h"
#include "sampler/path_sampling.h"

namespace stillfield {

// Fills the weight planes from the chain's current parameters.
void prepare_weights(const ObservedField& field, const LabelModel& model, const Pool& pool,
                     WeightPlanes& weights);

// The label kernels' exp(beta w_r n) tables. `two_labels` asks for exp(beta w_r (N_r - 2 n)).
void fill_ring_tables(const Neighbourhood& neighbourhood, double beta, bool two_labels,
                      LabelBand& band);

// `sweeps` sweeps of the chain's labels; counts visits when the chain has a visits plane.
void sweep_labels(const Colouring& colouring, const WeightPlanes& weights, int sweeps,
                  Purpose purpose, const Pool& pool, LabelChain& chain);

// Recomputes chain.totals from the labels.
void total_labels(const ObservedField& field, const Pool& pool, LabelChain& chain);

// The posterior of one field: what all chains share.
struct LabelPosterior {
  ObservedField field;
  GaussianPrior prior;
  const LogPartition* log_partition = nullptr;  // null: the coupling is not drawn
};

// One block of one chain: labels given the parameters, then parameters given the labels.
void advance_chain(const LabelPosterior& problem, int sweeps, const Pool& pool,
                   WeightPlanes& weights, LabelChain& chain);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_SWEEP_H_
