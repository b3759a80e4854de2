// Formulas and layout: simd/patch_group.h.
#include "simd/patch_group.h"

#include <cmath>

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/patch_group.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/patch_triangles-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

// x - mean of the members in place of x; the mean goes to `mean`.
HWY_INLINE void subtract_mean(float* x, int members, int d, float* mean) {
  const LaneVec inverse = hn::Set(LaneTag(), 1.0f / static_cast<float>(members));
  for (int e = 0; e < d; ++e) {
    LaneVec sum = load_lane(x, e);
    for (int m = 1; m < members; ++m) sum = hn::Add(sum, load_lane(x, m * d + e));
    const LaneVec average = hn::Mul(sum, inverse);
    store_lane(average, mean, e);
    for (int m = 0; m < members; ++m) {
      store_lane(hn::Sub(load_lane(x, m * d + e), average), x, m * d + e);
    }
  }
}

// With a proper prior of mu: moves `mean` to the posterior centre and writes the difference from
// m0 whose square belongs to the scale.
HWY_INLINE void weigh_prior_mean(const PatchGroups& g, int lane, float* mean, float* difference) {
  const LaneTag tag;
  const auto n = static_cast<float>(g.members);
  const float total = g.prior_weight + n;
  const LaneVec root = hn::Set(tag, std::sqrt(g.prior_weight * n / total));
  const LaneVec share = hn::Set(tag, g.prior_weight / total);
  for (int e = 0; e < g.elements; ++e) {
    const LaneVec off = hn::Sub(load_lane(mean, e), load_lane(g.prior_mean + lane, e));
    store_lane(hn::Mul(off, root), difference, e);
    store_lane(hn::Sub(load_lane(mean, e), hn::Mul(off, share)), mean, e);
  }
}

// centre = mean + D^-1 (normals in centre) / root.
HWY_INLINE void draw_centre(float* dd, int d, float root, const float* mean, float* centre) {
  for (int c = 0; c < d; ++c) {
    const LaneVec x = hn::Div(load_lane(centre, c), load_lane(dd, triangle_at(c, c)));
    store_lane(x, centre, c);
    for (int r = c + 1; r < d; ++r) {
      const LaneVec product = hn::Mul(load_lane(dd, triangle_at(r, c)), x);
      store_lane(hn::Sub(load_lane(centre, r), product), centre, r);
    }
  }
  const LaneVec scale = hn::Set(LaneTag(), 1.0f / root);
  for (int c = 0; c < d; ++c) {
    const LaneVec step = hn::Mul(load_lane(centre, c), scale);
    store_lane(hn::Add(load_lane(mean, c), step), centre, c);
  }
}

void draw_group_parameters(const PatchGroups& g) {
  const int d = g.elements;
  const int tiles = d / 4;
  const int lanes = static_cast<int>(hn::Lanes(LaneTag()));
  HWY_ALIGN float mean_buffer[kMaxPatchElements * kPatchLanes];
  HWY_ALIGN float difference_buffer[kMaxPatchElements * kPatchLanes];
  for (int lane = 0; lane < kPatchLanes; lane += lanes) {
    float* a = g.scale + lane;
    float* b = g.factor + lane;
    float* mean = mean_buffer + lane;
    subtract_mean(g.clean + lane, g.members, d, mean);
    add_scatter(a, g.clean + lane, g.members, d);
    if (g.prior_weight > 0.0f) {
      weigh_prior_mean(g, lane, mean, difference_buffer + lane);
      add_scatter(a, difference_buffer + lane, 1, d);
    }
    for (int e = 0; e < d; ++e) {
      const std::ptrdiff_t at = triangle_at(e, e);
      store_lane(hn::Mul(load_lane(a, at), hn::Set(LaneTag(), 1.0f + kPivotRidge)), a, at);
    }
    factor(a, tiles);
    for (int i = 0; i < tiles; ++i) {
      float* diagonal = tile_of(b, i, i);
      for (int r = 0; r < 4; ++r) {
        for (int c = r + 1; c < 4; ++c) store_lane(hn::Zero(LaneTag()), diagonal, 4 * r + c);
      }
    }
    divide_right(a, b, tiles);
    draw_centre(b, d, std::sqrt(g.prior_weight + static_cast<float>(g.members)), mean,
                g.centre + lane);
    identity_plus_square(b, a, tiles);
    factor(a, tiles);
    invert(a, b, tiles);
  }
}

// out(patch, row) = sum over k of the triangle times in(patch, k), for 4 patches: rows of V, or
// of V' when kTransposed.
template <bool kTransposed>
HWY_INLINE void multiply_patches(float* v, const float* in, float* out, int tiles) {
  const std::ptrdiff_t d = 4 * tiles;
  for (int i = 0; i < tiles; ++i) {
    for (int c = 0; c < 4; c += kTileColumns) {
      Sums sum;
      zero_sums(sum);
      const float* patches = in + c * d * kPatchLanes;
      for (int k = kTransposed ? i : 0; k < (kTransposed ? tiles : i + 1); ++k) {
        const float* tile = kTransposed ? tile_of(v, k, i) : tile_of(v, i, k);
        add_product<false>(tile, kTransposed ? kTileColumns4 : kTileRows,
                           patches + 4 * k * kPatchLanes, {d, 1}, sum);
      }
      store_sums(sum, out + (c * d + 4 * i) * kPatchLanes, {d, 1});
    }
  }
}

HWY_INLINE void add_variance(float* v, int d, float* variance_sum) {
  for (int c = 0; c < d; ++c) {
    LaneVec sum = hn::Zero(LaneTag());
    for (int r = c; r < d; ++r) {
      const LaneVec x = load_lane(v, triangle_at(r, c));
      sum = hn::Add(sum, hn::Mul(x, x));
    }
    store_lane(hn::Add(load_lane(variance_sum, c), sum), variance_sum, c);
  }
}

void update_group_patches(const PatchGroups& g, bool summing, bool drawing) {
  const int d = g.elements;
  const int tiles = d / 4;
  const int lanes = static_cast<int>(hn::Lanes(LaneTag()));
  HWY_ALIGN float residual_buffer[4 * kMaxPatchElements * kPatchLanes];
  HWY_ALIGN float rotated_buffer[4 * kMaxPatchElements * kPatchLanes];
  for (int lane = 0; lane < kPatchLanes; lane += lanes) {
    float* v = g.factor + lane;
    const float* centre = g.centre + lane;
    float* residual = residual_buffer + lane;
    float* rotated = rotated_buffer + lane;
    if (summing) add_variance(v, d, g.variance_sum + lane);
    for (int first = 0; first < g.members; first += 4) {
      const std::ptrdiff_t start = std::ptrdiff_t{first} * d * kPatchLanes + lane;
      const float* value = g.value + start;
      for (int p = 0; p < 4; ++p) {
        for (int e = 0; e < d; ++e) {
          store_lane(hn::Sub(load_lane(value, p * d + e), load_lane(centre, e)), residual,
                     p * d + e);
        }
      }
      multiply_patches<false>(v, residual, rotated, tiles);
      if (summing) {
        multiply_patches<true>(v, rotated, residual, tiles);
        float* sum = g.mean_sum + start;
        for (int p = 0; p < 4; ++p) {
          for (int e = 0; e < d; ++e) {
            const LaneVec m = hn::Add(load_lane(centre, e), load_lane(residual, p * d + e));
            store_lane(hn::Add(load_lane(sum, p * d + e), m), sum, p * d + e);
          }
        }
      }
      if (drawing) {
        float* clean = g.clean + start;
        for (int e = 0; e < 4 * d; ++e) {
          store_lane(hn::Add(load_lane(rotated, e), load_lane(clean, e)), rotated, e);
        }
        multiply_patches<true>(v, rotated, residual, tiles);
        for (int p = 0; p < 4; ++p) {
          for (int e = 0; e < d; ++e) {
            const LaneVec x = hn::Add(load_lane(centre, e), load_lane(residual, p * d + e));
            store_lane(x, clean, p * d + e);
          }
        }
      }
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(draw_group_parameters);
HWY_EXPORT(update_group_patches);

void draw_group_parameters(const PatchGroups& groups) {
  HWY_DYNAMIC_DISPATCH(draw_group_parameters)(groups);
}

void update_group_patches(const PatchGroups& groups, bool summing, bool drawing) {
  HWY_DYNAMIC_DISPATCH(update_group_patches)(groups, summing, drawing);
}

}  // namespace stillfield
#endif
