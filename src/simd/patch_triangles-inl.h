// Triangles of many small matrices at once, stored as 4 x 4 tiles: products, Cholesky factors and
// inverses. Included once for each CPU target; layout: simd/patch_group.h.

#if defined(STILLFIELD_SIMD_PATCH_TRIANGLES_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_PATCH_TRIANGLES_INL_H_
#undef STILLFIELD_SIMD_PATCH_TRIANGLES_INL_H_
#else
#define STILLFIELD_SIMD_PATCH_TRIANGLES_INL_H_
#endif

#include "simd/patch_tiles-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

using Sums = LaneVec[4][kTileColumns];

HWY_INLINE float* tile_of(float* triangle, int i, int j) {
  return triangle + tile_start(i, j) * kPatchLanes;
}

// Sum over k in [first, last) of x(r, k) y(c, k), four elements of k at a time, stored as a tile.
// start: the tile the sum begins with, or null for zero. x(b), y(b): factors of block b.
template <bool kSubtract, class X, class Y>
HWY_INLINE void product_tile(float* out, const float* start, int first, int last, const X& x,
                             Strides xs, const Y& y, Strides ys) {
  for (int c = 0; c < 4; c += kTileColumns) {
    Sums sum;
    if (start) {
      load_sums(start + c * kPatchLanes, {1, 4}, sum);
    } else {
      zero_sums(sum);
    }
    for (int b = first; b < last; ++b) {
      add_product<kSubtract>(x(b), xs, y(b) + c * ys.row * kPatchLanes, ys, sum);
    }
    store_sums(sum, out + c * kPatchLanes, {1, 4});
  }
}

// a += sum over rows i of x(i, .) x(i, .)', x of `rows` rows of d elements.
HWY_INLINE void add_scatter(float* a, const float* x, int rows, int d) {
  for (int i = 0; i < d / 4; ++i) {
    for (int j = 0; j <= i; ++j) {
      float* tile = tile_of(a, i, j);
      for (int c = 0; c < 4; c += kTileColumns) {
        Sums sum;
        load_sums(tile + c * kPatchLanes, {1, 4}, sum);
        const float* left = x + 4 * i * kPatchLanes;
        const float* right = x + (4 * j + c) * kPatchLanes;
        for (int m = 0; m < rows; ++m, left += d * kPatchLanes, right += d * kPatchLanes) {
          LaneVec l[4], r[kTileColumns];
#pragma GCC unroll 4
          for (int e = 0; e < 4; ++e) l[e] = load_lane(left, e);
#pragma GCC unroll 4
          for (int e = 0; e < kTileColumns; ++e) r[e] = load_lane(right, e);
#pragma GCC unroll 4
          for (int e = 0; e < 4; ++e) {
#pragma GCC unroll 4
            for (int f = 0; f < kTileColumns; ++f) {
              sum[e][f] = hn::Add(sum[e][f], hn::Mul(l[e], r[f]));
            }
          }
        }
        store_sums(sum, tile + c * kPatchLanes, {1, 4});
      }
    }
  }
}

// a = L in place (left-looking by tiles); diagonal tiles as factor_tile leaves them.
HWY_INLINE void factor(float* a, int tiles) {
  for (int j = 0; j < tiles; ++j) {
    for (int i = j; i < tiles; ++i) {
      float* out = tile_of(a, i, j);
      if (j > 0) {
        product_tile<true>(
            out, out, 0, j, [&](int b) HWY_ATTR { return tile_of(a, i, b); }, kTileRows,
            [&](int b) HWY_ATTR { return tile_of(a, j, b); }, kTileRows);
      }
      if (i == j) {
        factor_tile(out);
      } else {
        solve_transposed(tile_of(a, j, j), out);
      }
    }
  }
}

// b = D with D L = B, in place.
HWY_INLINE void divide_right(float* l, float* b, int tiles) {
  for (int i = 0; i < tiles; ++i) {
    for (int j = i; j >= 0; --j) {
      float* out = tile_of(b, i, j);
      product_tile<true>(
          out, out, j + 1, i + 1, [&](int k) HWY_ATTR { return tile_of(b, i, k); }, kTileRows,
          [&](int k) HWY_ATTR { return tile_of(l, k, j); }, kTileColumns4);
      solve_right(tile_of(l, j, j), out);
    }
  }
}

// q = I + D'D.
HWY_INLINE void identity_plus_square(float* dd, float* q, int tiles) {
  const LaneTag d;
  for (int i = 0; i < tiles; ++i) {
    for (int j = 0; j <= i; ++j) {
      float* out = tile_of(q, i, j);
      product_tile<false>(
          out, nullptr, i, tiles, [&](int k) HWY_ATTR { return tile_of(dd, k, i); }, kTileColumns4,
          [&](int k) HWY_ATTR { return tile_of(dd, k, j); }, kTileColumns4);
    }
    float* diagonal = tile_of(q, i, i);
    for (int c = 0; c < 4; ++c) {
      store_lane(hn::Add(load_lane(diagonal, 5 * c), hn::Set(d, 1.0f)), diagonal, 5 * c);
    }
  }
}

// v = R^-1: V(i, j) = -V(i, i) sum over j <= k < i of R(i, k) V(k, j).
HWY_INLINE void invert(float* r, float* v, int tiles) {
  for (int i = 0; i < tiles; ++i) invert_tile(tile_of(r, i, i), tile_of(v, i, i));
  for (int j = 0; j < tiles; ++j) {
    for (int i = j + 1; i < tiles; ++i) {
      float* out = tile_of(v, i, j);
      product_tile<false>(
          out, nullptr, j, i, [&](int k) HWY_ATTR { return tile_of(r, i, k); }, kTileRows,
          [&](int k) HWY_ATTR { return tile_of(v, k, j); }, kTileColumns4);
      multiply_left_negated(tile_of(v, i, i), out);
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
