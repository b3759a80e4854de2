// Class field and coupling from the labels of some pixels and their neighbours.
//
// Maths    PL(alpha, beta) = sum_s log [ e^{alpha_{z_s} + beta n_{z_s}} / sum_k e^{alpha_k + beta
// n_k} ]
//          (Besag 1975), n_k = weighted number of neighbours with label k. It is concave; one step
//          adds gain * (H + R)^-1 (g - R (theta - theta_0)), H the sum of the covariances of
//          (1[k], n_k) under the conditionals, R a weak Gaussian prior (sd 10).
//          With gains that decrease over the sweeps of a chain this is stochastic approximation of
//          the maximum (Robbins & Monro 1951; Younes 1989).
#ifndef STILLFIELD_MODEL_PSEUDO_LIKELIHOOD_H_
#define STILLFIELD_MODEL_PSEUDO_LIKELIHOOD_H_

#include <cstdint>
#include <vector>

#include "model/label_model.h"

namespace stillfield {

// Labels and weighted neighbour counts of sampled pixels.
struct NeighbourCounts {
  int classes = 0;
  std::vector<std::uint8_t> label;  // one a pixel
  std::vector<float> count;         // [pixel * classes + k] = n_k
};

// One step of the climb in alpha and beta; components move by at most 0.5, beta stays in
// [0, max_beta].
void climb_pseudo_likelihood(const NeighbourCounts& counts, double gain, double max_beta,
                             LabelPrior& prior);

// The same in alpha alone.
void climb_class_field(const NeighbourCounts& counts, double gain, LabelPrior& prior);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PSEUDO_LIKELIHOOD_H_
