// What the patch kernels eat: each component's matrices for one noise level.
//
// Units    of the noise's standard deviation, after subtracting `centre`: noise is N(0, C), C = I
//          when white, else L L' (model/patch_noise.h)
// Density  log weight_k N(y; mean_k, S_k), S_k = covariance_k + C, as constant and H (H'H = S^-1)
// Gain     G_k = covariance_k S_k^-1: conditional mean mean_k + G_k (y - mean_k), covariance
//          V_k = G_k C
// Prior    nu (L^-1 covariance_k L'^-1 + 1e-3 I), the scale of a group's inverse Wishart for
//          whitened patches; eigenvalues are bent below 10^4 so that single precision can factor it
// Layout   simd/patch_density.h (row blocks, patch-major columns), simd/patch_group.h (triangles)
#ifndef STILLFIELD_MODEL_PATCH_TABLES_H_
#define STILLFIELD_MODEL_PATCH_TABLES_H_

#include <vector>

#include "model/patch_mixture.h"
#include "model/patch_noise.h"
#include "parallel/pool.h"

namespace stillfield {

// Prior degrees of freedom of a group's covariance above d + 1, so that its prior mean is the
// component's covariance.
inline constexpr int kGroupPriorDegrees = 10;

struct ComponentTables {
  std::vector<float> mean;  // patch-major row
  float constant = 0.0f;
  std::vector<float> row_blocks;   // H
  std::vector<float> gain;         // G, patch-major columns
  std::vector<float> variance;     // diag V, patch-major row; 1 in the padding
  std::vector<float> precision;    // 1 / variance
  std::vector<float> draw;         // lower Cholesky factor of V, patch-major columns
  std::vector<float> group_prior;  // triangle
};

struct PatchTables {
  int side = 0;
  double centre = 0.0;    // in image units
  double noise_sd = 1.0;  // in image units
  std::vector<ComponentTables> components;
  std::vector<float> whiten;  // L^-1, patch-major columns; empty when the noise is white
  SquareMatrix colour;        // L, likewise

  int elements() const { return side * side; }
  int size() const { return static_cast<int>(components.size()); }
};

enum class TableParts { kDensityOnly, kAll };

// noise: of patches of the mixture's side, or null when white.
PatchTables make_patch_tables(const PatchMixture& mixture, double noise_sd, double centre,
                              TableParts parts, const Pool& pool,
                              const PatchNoise* noise = nullptr);

}  // namespace stillfield

#endif  // STILLFIELD_MODEL_PATCH_TABLES_H_
