// A Gaussian mixture over clean patches, learned from noisy ones.
//
// Model    clean patch x ~ sum_k weight_k N(mean_k, covariance_k), noisy patch y = x + n,
//          n ~ N(0, sigma^2 C); the patch mean is kept
//          (Teodoro, Almeida & Figueiredo 2015; Houdard, Bouveyron & Delon 2018)
// Fit      EM on at most 20 000 patches; the covariance of the clean patches comes from the sample
//          covariance of the noisy ones by patch_shrinkage.h. Correlated noise: the patches are
//          whitened first (patch_noise.h), the mixture of whitened patches is mapped back
// Units    those of the image; d = side^2 elements, row by row
// Bytes    the same for any number of threads and any CPU target
#ifndef STILLFIELD_MODEL_PATCH_MIXTURE_H_
#define STILLFIELD_MODEL_PATCH_MIXTURE_H_

#include <span>
#include <vector>

#include "model/patch_settings.h"
#include "parallel/pool.h"
#include "random/philox.h"

namespace stillfield {

struct PatchComponent {
  double weight = 0.0;
  std::vector<double> mean;        // d
  std::vector<double> covariance;  // d x d
};

struct PatchMixture {
  int side = 0;
  std::vector<PatchComponent> components;

  int elements() const { return side * side; }
  int size() const { return static_cast<int>(components.size()); }
};

// Learns from all planes together, each patch with its own plane's noise. Components that lose
// their patches are dropped, so there may be fewer than asked for.
// Throws as resolved_settings does.
PatchMixture learn_patch_mixture(std::span<const PatchPlane> planes, const PatchSettings& settings,
                                 PhiloxKey key, const Pool& pool);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_MIXTURE_H_
