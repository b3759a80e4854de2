#include "simd/normals.h"

#include <algorithm>
#include <cstring>

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/normals.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/normal-inl.h"
#include "simd/philox-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

#if HWY_TARGET == HWY_SCALAR

void standard_normals(PhiloxKey key, PhiloxCounter first, std::size_t n, float* out) {
  for (std::size_t i = 0; i < n; i += 4, ++first[0]) {
    const PhiloxCounter block = philox4x32(first, key);
    for (std::size_t j = i; j < std::min(n, i + 4); ++j) out[j] = standard_normal(block[j - i]);
  }
}

#else

void standard_normals(PhiloxKey key, PhiloxCounter first, std::size_t n, float* out) {
  constexpr int kChains = HWY_TARGET <= HWY_AVX3 ? 6 : 4;
  constexpr std::size_t kLanes = hn::MaxLanes(Words32());
  const Words32 d32;
  const Words64 d64;
  RandomPlane plane;
  plane.key = key;
  plane.sweep = first[2];
  plane.word3 = first[3];
  const PhiloxRow row = philox_row(plane, first[1]);
  const NormalTable normal;
  // Words of a block come as (x1, x0) in one row and (x3, x2) in another.
  HWY_ALIGN std::uint32_t low[kChains * kLanes], high[kChains * kLanes];
  HWY_ALIGN float part[2 * kLanes];
  const auto in_order = [&](const std::uint32_t* words) HWY_ATTR {
    const auto two = hn::BitCast(d64, hn::Load(d32, words));
    const auto swapped = hn::Or(hn::ShiftLeft<32>(two), hn::ShiftRight<32>(two));
    return hn::BitCast(d64, normal(hn::BitCast(d32, swapped)));
  };
  std::uint64_t c0 = first[0];
  std::size_t done = 0;
  while (done < n) {
    const bool many = n - done >= 2 * kChains * kLanes;
    if (many) {
      draw_vectors<kChains>(row, c0, low, high);
    } else {
      draw_vectors<1>(row, c0, low, high);
    }
    const int vectors = many ? kChains : 1;
    for (int i = 0; i < vectors && done < n; ++i) {
      const std::size_t at = static_cast<std::size_t>(i) * kLanes;
      const std::size_t count = std::min(n - done, 2 * kLanes);
      float* to = count == 2 * kLanes ? out + done : part;
      hn::StoreInterleaved2(in_order(low + at), in_order(high + at), d64,
                            reinterpret_cast<std::uint64_t*>(to));
      if (to == part) std::memcpy(out + done, part, count * sizeof(float));
      done += count;
    }
    c0 += static_cast<std::uint64_t>(vectors) * (kLanes / 2);
  }
}

#endif  // HWY_TARGET

void normal_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns, float* even_row,
                     float* odd_row) {
  constexpr int kStrip = 512;
  HWY_ALIGN std::uint32_t words[2][kStrip];
  const NormalTable normal;
  for (int first = 0; first < columns; first += kStrip) {
    const int count = std::min(kStrip, columns - first);
    draw_row_pair(plane, pair, static_cast<std::uint32_t>(first), count, words[0], words[1]);
    for (int i = 0; i < count; i += static_cast<int>(hn::Lanes(NormalWords()))) {
      hn::Store(normal(hn::Load(NormalWords(), words[0] + i)), Floats32(), even_row + first + i);
      hn::Store(normal(hn::Load(NormalWords(), words[1] + i)), Floats32(), odd_row + first + i);
    }
  }
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(standard_normals);
HWY_EXPORT(normal_row_pair);

void standard_normals(PhiloxKey key, PhiloxCounter first, std::size_t n, float* out) {
  HWY_DYNAMIC_DISPATCH(standard_normals)(key, first, n, out);
}

void normal_row_pair(const RandomPlane& plane, std::uint32_t pair, int columns, float* even_row,
                     float* odd_row) {
  HWY_DYNAMIC_DISPATCH(normal_row_pair)(plane, pair, columns, even_row, odd_row);
}

}  // namespace stillfield
#endif
