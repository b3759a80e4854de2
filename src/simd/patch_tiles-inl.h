// Products of 4 x 4 tiles of many small matrices at once. Included once for each CPU target.
//
// One lane, one problem: element e of 16 matrices lies at e * kPatchLanes + lane, and every lane
// runs the same scalar algorithm in the same order. No sum ever runs across lanes, so the bytes do
// not depend on the vector width.
// Triangles are stored as tiles by rows of tiles (simd/patch_group.h); sums over k run upwards,
// element by element, whatever the register blocking.

#if defined(STILLFIELD_SIMD_PATCH_TILES_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_PATCH_TILES_INL_H_
#undef STILLFIELD_SIMD_PATCH_TILES_INL_H_
#else
#define STILLFIELD_SIMD_PATCH_TILES_INL_H_
#endif

#include <hwy/highway.h>

#include <cstddef>

#include "simd/patch_group.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

using LaneTag = hn::CappedTag<float, kPatchLanes>;
using LaneVec = hn::Vec<LaneTag>;

// Columns of a tile held in registers: 16 sums fill the 32 registers of AVX-512, 8 the 16 of
// AVX2.
constexpr int kTileColumns = HWY_TARGET <= HWY_AVX3 ? 4 : 2;

HWY_INLINE LaneVec load_lane(const float* p, std::ptrdiff_t element) {
  return hn::LoadU(LaneTag(), p + element * kPatchLanes);
}
HWY_INLINE void store_lane(LaneVec v, float* p, std::ptrdiff_t element) {
  hn::StoreU(v, LaneTag(), p + element * kPatchLanes);
}

// Strides, in elements, of the two indices of a factor.
struct Strides {
  std::ptrdiff_t row;
  std::ptrdiff_t inner;
};
constexpr Strides kTileRows{4, 1};      // X(r, k) of a tile
constexpr Strides kTileColumns4{1, 4};  // X(k, r) of a tile: the tile transposed

// sum(r, c) += or -= sum over k < 4 of x(r, k) y(c, k), both factors read by their strides.
template <bool kSubtract>
HWY_INLINE void add_product(const float* HWY_RESTRICT x, Strides xs, const float* HWY_RESTRICT y,
                            Strides ys, LaneVec (&sum)[4][kTileColumns]) {
#pragma GCC unroll 4
  for (int k = 0; k < 4; ++k) {
    LaneVec left[4], right[kTileColumns];
#pragma GCC unroll 4
    for (int r = 0; r < 4; ++r) left[r] = load_lane(x, r * xs.row + k * xs.inner);
#pragma GCC unroll 4
    for (int c = 0; c < kTileColumns; ++c) right[c] = load_lane(y, c * ys.row + k * ys.inner);
#pragma GCC unroll 4
    for (int r = 0; r < 4; ++r) {
#pragma GCC unroll 4
      for (int c = 0; c < kTileColumns; ++c) {
        const LaneVec product = hn::Mul(left[r], right[c]);
        sum[r][c] = kSubtract ? hn::Sub(sum[r][c], product) : hn::Add(sum[r][c], product);
      }
    }
  }
}

HWY_INLINE void load_sums(const float* HWY_RESTRICT tile, Strides s,
                          LaneVec (&sum)[4][kTileColumns]) {
#pragma GCC unroll 4
  for (int r = 0; r < 4; ++r) {
#pragma GCC unroll 4
    for (int c = 0; c < kTileColumns; ++c) sum[r][c] = load_lane(tile, r * s.inner + c * s.row);
  }
}

HWY_INLINE void store_sums(const LaneVec (&sum)[4][kTileColumns], float* HWY_RESTRICT tile,
                           Strides s) {
#pragma GCC unroll 4
  for (int r = 0; r < 4; ++r) {
#pragma GCC unroll 4
    for (int c = 0; c < kTileColumns; ++c) store_lane(sum[r][c], tile, r * s.inner + c * s.row);
  }
}

HWY_INLINE void zero_sums(LaneVec (&sum)[4][kTileColumns]) {
#pragma GCC unroll 4
  for (int r = 0; r < 4; ++r) {
#pragma GCC unroll 4
    for (int c = 0; c < kTileColumns; ++c) sum[r][c] = hn::Zero(LaneTag());
  }
}

// Cholesky factor of a tile in place; the diagonal holds 1 / L(c, c), above it are zeros.
HWY_INLINE void factor_tile(float* HWY_RESTRICT t) {
  const LaneTag d;
  const LaneVec least = hn::Set(d, kLeastPivot);
  for (int c = 0; c < 4; ++c) {
    LaneVec pivot = load_lane(t, 5 * c);
    for (int k = 0; k < c; ++k) {
      const LaneVec l = load_lane(t, 4 * c + k);
      pivot = hn::Sub(pivot, hn::Mul(l, l));
    }
    const LaneVec inverse = hn::Div(hn::Set(d, 1.0f), hn::Sqrt(hn::Max(pivot, least)));
    store_lane(inverse, t, 5 * c);
    for (int r = c + 1; r < 4; ++r) {
      LaneVec s = load_lane(t, 4 * r + c);
      for (int k = 0; k < c; ++k) {
        s = hn::Sub(s, hn::Mul(load_lane(t, 4 * r + k), load_lane(t, 4 * c + k)));
      }
      store_lane(hn::Mul(s, inverse), t, 4 * r + c);
      store_lane(hn::Zero(d), t, 4 * c + r);
    }
  }
}

// X with X L' = B, in place of B; L as factor_tile leaves it.
HWY_INLINE void solve_transposed(const float* HWY_RESTRICT l, float* HWY_RESTRICT b) {
  for (int r = 0; r < 4; ++r) {
    LaneVec x[4];
    for (int c = 0; c < 4; ++c) {
      x[c] = load_lane(b, 4 * r + c);
      for (int k = 0; k < c; ++k) x[c] = hn::Sub(x[c], hn::Mul(x[k], load_lane(l, 4 * c + k)));
      x[c] = hn::Mul(x[c], load_lane(l, 5 * c));
      store_lane(x[c], b, 4 * r + c);
    }
  }
}

// X with X L = B, in place of B; L as factor_tile leaves it.
HWY_INLINE void solve_right(const float* HWY_RESTRICT l, float* HWY_RESTRICT b) {
  for (int r = 0; r < 4; ++r) {
    LaneVec x[4];
    for (int c = 3; c >= 0; --c) {
      x[c] = load_lane(b, 4 * r + c);
      for (int k = 3; k > c; --k) x[c] = hn::Sub(x[c], hn::Mul(x[k], load_lane(l, 4 * k + c)));
      x[c] = hn::Mul(x[c], load_lane(l, 5 * c));
      store_lane(x[c], b, 4 * r + c);
    }
  }
}

// v = the inverse of L as factor_tile leaves it, with zeros above the diagonal.
HWY_INLINE void invert_tile(const float* HWY_RESTRICT l, float* HWY_RESTRICT v) {
  const LaneTag d;
  for (int c = 0; c < 4; ++c) {
    LaneVec x[4];
    for (int r = 0; r < c; ++r) store_lane(hn::Zero(d), v, 4 * r + c);
    x[c] = load_lane(l, 5 * c);
    store_lane(x[c], v, 5 * c);
    for (int r = c + 1; r < 4; ++r) {
      LaneVec s = hn::Mul(load_lane(l, 4 * r + c), x[c]);
      for (int k = c + 1; k < r; ++k) s = hn::Add(s, hn::Mul(load_lane(l, 4 * r + k), x[k]));
      x[r] = hn::Neg(hn::Mul(s, load_lane(l, 5 * r)));
      store_lane(x[r], v, 4 * r + c);
    }
  }
}

// s = -v s for a lower triangular tile v.
HWY_INLINE void multiply_left_negated(const float* HWY_RESTRICT v, float* HWY_RESTRICT s) {
  for (int c = 0; c < 4; ++c) {
    LaneVec x[4];
    for (int r = 0; r < 4; ++r) x[r] = load_lane(s, 4 * r + c);
    for (int r = 3; r >= 0; --r) {
      LaneVec sum = hn::Mul(load_lane(v, 4 * r), x[0]);
      for (int k = 1; k <= r; ++k) sum = hn::Add(sum, hn::Mul(load_lane(v, 4 * r + k), x[k]));
      store_lane(hn::Neg(sum), s, 4 * r + c);
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
