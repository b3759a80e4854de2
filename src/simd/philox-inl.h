// Philox4x32-10 for two pixel rows at once, in 64-bit lanes. Included once for each CPU target.
//
// State of a lane, in the low halves of four vectors: a = x0, b = x1, c = x2, d = x3 (the high
// halves hold leftovers that MulEven ignores). A round is then
//   p0 = M0 a,  p1 = M1 c,  a' = (p1 >> 32) ^ b ^ k0,  b' = p1,  c' = (p0 >> 32) ^ d ^ k1,  d' = p0
// without a single shuffle. c0 is the only counter word that differs between lanes, so the
// products of round 0 are M0 c0 (an addition from lane to lane) and a constant, and round 1 needs
// one vector product. The last round leaves (x1, x0) and (x3, x2) side by side.

#if defined(STILLFIELD_SIMD_PHILOX_INL_H_) == defined(HWY_TARGET_TOGGLE)
#ifdef STILLFIELD_SIMD_PHILOX_INL_H_
#undef STILLFIELD_SIMD_PHILOX_INL_H_
#else
#define STILLFIELD_SIMD_PHILOX_INL_H_
#endif

#include <hwy/highway.h>

#include "random/counters.h"
#include "simd/random_rows.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {
namespace hn = hwy::HWY_NAMESPACE;

// Nothing to do between blocks of random words.
struct Idle {
  HWY_INLINE void operator()(int, int) const {}
};

// Columns [first, first + columns) of the rows 2 * pair and 2 * pair + 1; `first` is even.
// meanwhile(j, n) is called when the words of columns first + j, ..., first + j + n - 1 are next:
// the place for prefetches.
#if HWY_TARGET == HWY_SCALAR

template <class Meanwhile = Idle>
HWY_INLINE void draw_row_pair(const RandomPlane& plane, std::uint32_t pair, std::uint32_t first,
                              int columns, std::uint32_t* HWY_RESTRICT even,
                              std::uint32_t* HWY_RESTRICT odd, const Meanwhile& = {}) {
  const std::uint32_t c0 = (plane.first_column + first) >> 1;
  const std::uint32_t c1 = (plane.first_row >> 1) + pair;
  for (int j = 0; j < columns; j += 2) {
    const PhiloxCounter x = philox4x32(
        {c0 + static_cast<std::uint32_t>(j >> 1), c1, plane.sweep, plane.word3}, plane.key);
    even[j] = x[1];
    even[j + 1] = x[0];
    odd[j] = x[3];
    odd[j + 1] = x[2];
  }
}

#else

using Words32 = hn::ScalableTag<std::uint32_t>;
using Words64 = hn::ScalableTag<std::uint64_t>;
using V64 = hn::Vec<Words64>;

// What all lanes of a row pair share.
struct PhiloxRow {
  std::uint64_t a1;                      // x0 after round 0, times M0: round 1's constant product
  std::uint64_t b1_key;                  // x1 after round 0, with round 1's key
  std::uint64_t c_key0;                  // c3 with round 0's key
  std::uint64_t keys[kPhiloxRounds][2];  // round keys
};

HWY_INLINE PhiloxRow philox_row(const RandomPlane& plane, std::uint32_t c1) {
  PhiloxRow row;
  PhiloxKey key = plane.key;
  for (auto& k : row.keys) {
    k[0] = key[0];
    k[1] = key[1];
    key = {key[0] + kPhiloxW0, key[1] + kPhiloxW1};
  }
  const std::uint64_t p1 = std::uint64_t{kPhiloxM1} * plane.sweep;
  const std::uint64_t x0 = (p1 >> 32) ^ c1 ^ row.keys[0][0];
  row.a1 = std::uint64_t{kPhiloxM0} * x0;
  row.b1_key = static_cast<std::uint32_t>(p1) ^ row.keys[1][0];
  row.c_key0 = plane.word3 ^ row.keys[0][1];
  return row;
}

// Keeps the compiler from undoing the interleaving of independent chains.
HWY_INLINE void opaque(V64& v) {
#if HWY_ARCH_X86 && HWY_TARGET <= HWY_AVX3
  asm volatile("" : "+v"(v.raw));
#elif HWY_ARCH_X86 && HWY_TARGET <= HWY_SSSE3
  asm volatile("" : "+x"(v.raw));
#else
  (void)v;
#endif
}

// kChains independent vectors of lanes at once, which hides the latency of the multiplications.
template <int kChains>
HWY_INLINE void draw_vectors(const PhiloxRow& row, std::uint64_t c0,
                             std::uint32_t* HWY_RESTRICT even, std::uint32_t* HWY_RESTRICT odd) {
  const Words32 d32;
  const Words64 d64;
  constexpr std::size_t kLanes = hn::MaxLanes(Words64());
  const auto m0 = hn::BitCast(d32, hn::Set(d64, std::uint64_t{kPhiloxM0}));
  const auto m1 = hn::BitCast(d32, hn::Set(d64, std::uint64_t{kPhiloxM1}));
  V64 a[kChains], b[kChains], c[kChains], d[kChains];

  // Rounds 0 and 1.
  const auto lane_products = hn::Mul(hn::Iota(d64, 0), hn::Set(d64, std::uint64_t{kPhiloxM0}));
  for (int i = 0; i < kChains; ++i) {
    const std::uint64_t first = (c0 + static_cast<std::uint64_t>(i) * kLanes) * kPhiloxM0;
    const V64 p0 = hn::Add(hn::Set(d64, first), lane_products);
    c[i] = hn::Xor(hn::ShiftRight<32>(p0), hn::Set(d64, row.c_key0));
    d[i] = p0;
  }
  for (int i = 0; i < kChains; ++i) {
    const V64 p1 = hn::MulEven(hn::BitCast(d32, c[i]), m1);
    a[i] = hn::Xor(hn::ShiftRight<32>(p1), hn::Set(d64, row.b1_key));
    b[i] = p1;
    c[i] = hn::Xor(d[i], hn::Set(d64, (row.a1 >> 32) ^ row.keys[1][1]));
    d[i] = hn::Set(d64, row.a1);
  }
  for (int r = 2; r < kPhiloxRounds - 1; ++r) {
    const V64 k0 = hn::Set(d64, row.keys[r][0]);
    const V64 k1 = hn::Set(d64, row.keys[r][1]);
    for (int i = 0; i < kChains; ++i) {
      const V64 p0 = hn::MulEven(hn::BitCast(d32, a[i]), m0);
      const V64 p1 = hn::MulEven(hn::BitCast(d32, c[i]), m1);
      a[i] = hn::Xor(hn::ShiftRight<32>(p1), hn::Xor(b[i], k0));
      c[i] = hn::Xor(hn::ShiftRight<32>(p0), hn::Xor(d[i], k1));
      b[i] = p1;
      d[i] = p0;
      opaque(a[i]);
      opaque(c[i]);
    }
  }
  const V64 k0 = hn::Set(d64, row.keys[kPhiloxRounds - 1][0]);
  const V64 k1 = hn::Set(d64, row.keys[kPhiloxRounds - 1][1]);
  for (int i = 0; i < kChains; ++i) {
    const V64 p0 = hn::MulEven(hn::BitCast(d32, a[i]), m0);
    const V64 p1 = hn::MulEven(hn::BitCast(d32, c[i]), m1);
    const V64 x10 = hn::Xor(p1, hn::ShiftLeft<32>(hn::Xor(b[i], k0)));
    const V64 x32 = hn::Xor(p0, hn::ShiftLeft<32>(hn::Xor(d[i], k1)));
    const std::size_t at = static_cast<std::size_t>(i) * kLanes * 2;
    hn::Store(hn::BitCast(d32, x10), d32, even + at);
    hn::Store(hn::BitCast(d32, x32), d32, odd + at);
  }
}

template <class Meanwhile = Idle>
HWY_INLINE void draw_row_pair(const RandomPlane& plane, std::uint32_t pair, std::uint32_t first,
                              int columns, std::uint32_t* HWY_RESTRICT even,
                              std::uint32_t* HWY_RESTRICT odd, const Meanwhile& meanwhile = {}) {
  // 4 chains fill the 16 registers of AVX2 (measured best of 2 to 6), 6 the 32 of AVX-512.
  constexpr int kChains = HWY_TARGET <= HWY_AVX3 ? 6 : 4;
  const int step = static_cast<int>(hn::Lanes(Words32()));
  const PhiloxRow row = philox_row(plane, (plane.first_row >> 1) + pair);
  const std::uint64_t c0 = (plane.first_column + first) >> 1;
  const auto at = [c0](int j) { return c0 + static_cast<std::uint64_t>(j >> 1); };
  int j = 0;
  for (; j + kChains * step <= columns; j += kChains * step) {
    meanwhile(j, kChains * step);
    draw_vectors<kChains>(row, at(j), even + j, odd + j);
  }
  for (; j < columns; j += step) {
    meanwhile(j, step);
    draw_vectors<1>(row, at(j), even + j, odd + j);
  }
}

#endif  // HWY_TARGET

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#endif  // per-target guard
