// The Gibbs sampler of 16 groups of similar patches at once, one group a lane.
//
// Model    y_i = x_i + n_i,  x_i ~ N(mu, Sigma),  n_i ~ N(0, I),  i < members: all in units of the
//          noise's standard deviation. Sigma ~ inverse Wishart(d + 1 + nu, A0) and
//          mu | Sigma ~ N(m0, Sigma / kappa); kappa = 0 is the flat limit.
// Update   Sigma | x ~ inverse Wishart(d + 1 + nu + members, A),
//            A = A0 + sum (x_i - xbar)(x_i - xbar)' + kappa members / (kappa + members) *
//                (xbar - m0)(xbar - m0)'
//          mu | Sigma, x ~ N((kappa m0 + members xbar) / (kappa + members),
//                            Sigma / (kappa + members))
//          x_i | mu, Sigma ~ N(mu + G (y_i - mu), G),  G = Sigma (Sigma + I)^-1
//          (normal-inverse-Wishart conjugacy: Gelman et al. 2013, section 3.6)
// Algebra  A = L L'; B lower triangular with standard normals below the diagonal and
//          B(i,i)^2 ~ chi-square(degrees - (d-1-i)) (Bartlett 1933); D = B L^-1, so that the
//          precision is Sigma^-1 = D'D; I + D'D = R R'; V = R^-1. Then G = V'V,
//          mu = centre + D^-1 e / sqrt(kappa + members), x_i = mu + V'(V(y_i - mu) + e_i).
// Layout   element-major: element e of group g at e * kPatchLanes + g. A patch has d elements, d a
//          multiple of 4; patch i starts at element i d. Triangles: tiles of 4 x 4 by rows of
//          tiles, tile (i, j), j <= i, at element 16 (i (i + 1) / 2 + j), rows inside a tile.
// Bytes    the same on every CPU target; tests/simd/patch_group_test.cc
#ifndef STILLFIELD_SIMD_PATCH_GROUP_H_
#define STILLFIELD_SIMD_PATCH_GROUP_H_

#include <cstddef>

namespace stillfield {

inline constexpr int kPatchLanes = 16;
inline constexpr int kMaxPatchElements = 64;

// The diagonal of A is raised by this share, about d roundings, so that single precision can factor
// it however large the contrast is beside the noise: such groups then stay as they are.
inline constexpr float kPivotRidge = 4e-6f;

// Pivots are kept above this, in squared noise units; the prior's scale is far above it.
inline constexpr float kLeastPivot = 1e-6f;

// First element of tile (i, j) of a triangle.
constexpr std::ptrdiff_t tile_start(int i, int j) {
  return 16 * (i * (i + 1) / 2 + j);
}

// Elements of a triangle of d x d stored as tiles.
constexpr std::ptrdiff_t triangle_elements(int d) {
  return tile_start(d / 4, 0);
}

// Where element (r, c), c <= r, of a triangle lies.
constexpr std::ptrdiff_t triangle_at(int r, int c) {
  return tile_start(r / 4, c / 4) + 4 * (r % 4) + c % 4;
}

struct PatchGroups {
  int elements = 0;                   // d
  int members = 0;                    // a multiple of 4
  const float* value = nullptr;       // y: members x d
  float* clean = nullptr;             // x: members x d
  float* scale = nullptr;             // A0 in, used up
  float* factor = nullptr;            // B in, V out
  float* centre = nullptr;            // d standard normals in, mu out
  float prior_weight = 0.0f;          // kappa
  const float* prior_mean = nullptr;  // m0: d; may be null when kappa = 0
  float* mean_sum = nullptr;          // members x d: sums of mu + G (y_i - mu)
  float* variance_sum = nullptr;      // d: sums of diag G
};

// Draws Sigma and mu given the clean patches (whose values are lost).
void draw_group_parameters(const PatchGroups& groups);

// Given mu and V: adds the conditional means and variances to the sums when `summing`, and draws
// the clean patches when `drawing`; `clean` then holds standard normals in and draws out.
void update_group_patches(const PatchGroups& groups, bool summing, bool drawing);

}  // namespace stillfield

#endif  // STILLFIELD_SIMD_PATCH_GROUP_H_
