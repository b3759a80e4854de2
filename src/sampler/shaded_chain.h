// Label chains under uneven light: labels, classes and surface drawn jointly.
//
// Model    y_s = g(s) mean_k + sd_k e_s (model/surface_draw.h), the labels' prior as in sweep.h.
//          Means and standard deviations are those under a light of one, the mean over the frame
// Draws    labels by the kernels of sweep.h from weights that each pixel has of its own; classes
//          given labels and surface (model/gaussian_draw.h); surface given labels and classes
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_SAMPLER_SHADED_CHAIN_H_
#define STILLFIELD_SAMPLER_SHADED_CHAIN_H_

#include "model/surface_draw.h"
#include "sampler/sweep.h"

namespace stillfield {

struct Shading {
  SurfaceBasis basis;
  SurfacePrior prior;
};

// Fills the weight planes from the chain's parameters and its light.
void prepare_shaded_weights(const ObservedField& field, const Shading& shading,
                            const LabelChain& chain, const Pool& pool, WeightPlanes& weights);

// The labels of a chain in image order, 0-based.
Volume<std::uint8_t> image_labels(const Colouring& colouring, const LabelChain& chain);

// The two halves of the parameters, given labels in image order.
void draw_shaded_classes(const LabelPosterior& problem, const Shading& shading,
                         View<const std::uint8_t> labels, const Pool& pool, RandomStream& random,
                         LabelChain& chain);
void draw_light(const ObservedField& field, const Shading& shading, View<const std::uint8_t> labels,
                const Pool& pool, RandomStream& random, LabelChain& chain);

// One block of one chain, whose light must have its coefficients.
void advance_shaded_chain(const LabelPosterior& problem, const Shading& shading, int sweeps,
                          const Pool& pool, WeightPlanes& weights, LabelChain& chain);

}  // namespace stillfield

#endif  // STILLFIELD_SAMPLER_SHADED_CHAIN_H_
