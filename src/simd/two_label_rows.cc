// Gibbs updates of 2-label fields. Formula and layout: simd/label_band.h.
#include "simd/label_band.h"

#undef HWY_TARGET_INCLUDE
#define HWY_TARGET_INCLUDE "simd/two_label_rows.cc"
#include <hwy/foreach_target.h>
// foreach_target.h must come first.
#include <hwy/highway.h>

#include "simd/label_row-inl.h"

HWY_BEFORE_NAMESPACE();
namespace stillfield {
namespace HWY_NAMESPACE {

#if HWY_TARGET == HWY_SCALAR

HWY_INLINE void update_chunk(const LabelBand& band, const RowChunk& c) {
  for (int i = c.first; i < c.first + c.words; ++i) {
    for (int b = 0; b < 4; ++b) {
      float odds = c.weights[b * band.words + i];
      for (int r = 0; r < band.ring_count; ++r) {
        const Ring& ring = band.rings[static_cast<std::size_t>(r)];
        unsigned ones = 0;
        for (int k = 0; k < ring.neighbours; ++k) {
          ones += c.labels[4 * i + b + ring.offset[c.parity][k]];
        }
        odds *= ring.table[ones & 15];
      }
      const std::uint32_t word = c.random[b * c.random_stride + i - c.first];
      const bool one = static_cast<float>(word >> 8) * (1.0f + odds) < kUniformScale;
      c.labels[4 * i + b] = one;
      if (c.counts) c.counts[4 * i + b] = static_cast<std::uint8_t>(c.counts[4 * i + b] + one);
    }
  }
}

template <bool kCount, int kNear, int kFar>
void run(const LabelBand& band) {
  for_each_chunk(band, [&band](const RowChunk& c) { update_chunk(band, c); });
}

#else

// Sum of the labels of a ring: the number of neighbours with label 1, in every byte (guards only
// touch the top bit).
template <int kNeighbours>
HWY_INLINE VB ring_sum(const Ring& ring, const RowChunk& c, int i) {
  const Bytes d8;
  const int n = kNeighbours > 0 ? kNeighbours : ring.neighbours;
  const std::uint8_t* site = c.labels + 4 * i;
  VB sum = hn::LoadU(d8, site + ring.offset[c.parity][0]);
  for (int k = 1; k < n; ++k) sum = hn::Add(sum, hn::LoadU(d8, site + ring.offset[c.parity][k]));
  return sum;
}

template <int kByte>
HWY_INLINE VW update_byte(VF odds, const RowChunk& c, int i, VW labels) {
  const Words d32;
  const Floats df;
  const VW words = hn::Load(d32, c.random + kByte * c.random_stride + i - c.first);
  const VF scaled = hn::Mul(uniform_integers(words), hn::Add(odds, hn::Set(df, 1.0f)));
  const auto one = hn::RebindMask(d32, hn::Lt(scaled, hn::Set(df, kUniformScale)));
  return hn::Or(labels, hn::IfThenElseZero(one, hn::Set(d32, 1u << (8 * kByte))));
}

// kNear, kFar: neighbours in the first two rings, known at compile time; kNear = 0: any rings.
template <bool kCount, int kNear, int kFar>
HWY_INLINE void update_chunk(const LabelBand& band, const RowChunk& c) {
  const Bytes d8;
  const Words d32;
  const Floats df;
  const int lanes = static_cast<int>(hn::Lanes(d32));
  constexpr int kMax = kNear > 0 ? (kNear > kFar ? kNear : kFar) : kMaxRingNeighbours;
  const Lookup<kMax> near(band.rings[0].table.data());
  const Lookup<kMax> far(band.rings[1].table.data());
  for (int i = c.first; i < c.first + c.words; i += lanes) {
    const VW sum0 = hn::BitCast(d32, ring_sum<kNear>(band.rings[0], c, i));
    VW sum1 = sum0;
    if constexpr (kFar > 0) sum1 = hn::BitCast(d32, ring_sum<kFar>(band.rings[1], c, i));
    const auto odds = [&](auto shift) HWY_ATTR {
      constexpr int kShift = 8 * decltype(shift)::value;
      VF e = hn::Load(df, c.weights + decltype(shift)::value * band.words + i);
      e = hn::Mul(e, near(hn::ShiftRight<kShift>(sum0)));
      if constexpr (kFar > 0) e = hn::Mul(e, far(hn::ShiftRight<kShift>(sum1)));
      if constexpr (kNear == 0) {
        for (int r = 1; r < band.ring_count; ++r) {
          const Ring& ring = band.rings[static_cast<std::size_t>(r)];
          const VW sum = hn::BitCast(d32, ring_sum<0>(ring, c, i));
          e = hn::Mul(e, Lookup<kMax>(ring.table.data())(hn::ShiftRight<kShift>(sum)));
        }
      }
      return e;
    };
    VW z = hn::Zero(d32);
    z = update_byte<0>(odds(std::integral_constant<int, 0>()), c, i, z);
    z = update_byte<1>(odds(std::integral_constant<int, 1>()), c, i, z);
    z = update_byte<2>(odds(std::integral_constant<int, 2>()), c, i, z);
    z = update_byte<3>(odds(std::integral_constant<int, 3>()), c, i, z);
    const VB labels = hn::BitCast(d8, z);
    hn::Store(labels, d8, c.labels + 4 * i);
    if constexpr (kCount) {
      hn::Store(hn::Add(hn::Load(d8, c.counts + 4 * i), labels), d8, c.counts + 4 * i);
    }
  }
}

template <bool kCount, int kNear, int kFar>
void run(const LabelBand& band) {
  for_each_chunk(
      band, [&band](const RowChunk& c) HWY_ATTR { update_chunk<kCount, kNear, kFar>(band, c); });
}

#endif  // HWY_TARGET

template <bool kCount>
void run_rings(const LabelBand& band) {
  const int near = band.rings[0].neighbours;
  const int far = band.ring_count > 1 ? band.rings[1].neighbours : 0;
  if (band.ring_count == 1 && near == 4) return run<kCount, 4, 0>(band);
  if (band.ring_count == 2 && near == 4 && far == 4) return run<kCount, 4, 4>(band);
  if (band.ring_count == 1 && near == 6) return run<kCount, 6, 0>(band);
  return run<kCount, 0, 0>(band);
}

void two_label_rows(const LabelBand& band) {
  if (band.counts) return run_rings<true>(band);
  return run_rings<false>(band);
}

}  // namespace HWY_NAMESPACE
}  // namespace stillfield
HWY_AFTER_NAMESPACE();

#if HWY_ONCE
namespace stillfield {

HWY_EXPORT(two_label_rows);

void two_label_rows(const LabelBand& band) {
  HWY_DYNAMIC_DISPATCH(two_label_rows)(band);
}

}  // namespace stillfield
#endif
